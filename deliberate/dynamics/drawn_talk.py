"""Talk with many draws of starts and rows at once: b(t+1) = F b(0) + (I - F) T(t) b(t), all draws side by side.

Arrays over people or arrows have the draws in their last axis. An arrow counts in all draws or in none (but for a
hearing range), so closed groups, periods and who is outside are worked out once, and only the numbers are drawn.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.sparse import csr_array

from deliberate.dynamics.destination import group_numbers
from deliberate.dynamics.draws import Rows, adder
from deliberate.dynamics.elimination import absorption, stationary
from deliberate.dynamics.network import Floats, Indices, Mask, Network
from deliberate.dynamics.process import Block, Process, course
from deliberate.dynamics.progress import Stopped, never
from deliberate.dynamics.rounds import RANGE_SLACK, block_at
from deliberate.dynamics.shares import TINY, Unheard
from deliberate.dynamics.structure import ClosedSet, full_structure
from deliberate.dynamics.swing import STILL
from deliberate.dynamics.turns import Turn, followed_by, repeated, turn_of

# Above, and with a hearing range, the long run is found by stepping until nobody moves more than REST, on the width
# of all starts, in a turn.
ELIMINATED_PEOPLE = 500
REST = 1e-6
TURNS_TO_REST = 400
TURNS_BETWEEN_LOOKS = 8


class BrokenOff(Exception):  # noqa: N818 - somebody asked for it
    """The work was stopped before its end."""


@dataclass(frozen=True, eq=False)
class DrawnShares:
    """The shares of one block: own (n, d), and share (k, d) of the arrows listener (k,) -> source (k,) that count."""

    own: Floats
    share: Floats
    listener: Indices
    source: Indices
    unheard: Unheard

    @cached_property
    def _by_listener(self) -> csr_array:
        return adder(len(self.own), self.listener)

    def hear(self, beliefs: Floats, reach: float | None = None) -> Floats:
        """Beliefs (n, d) after everybody has listened once; beyond `reach` nothing is heard."""
        said = beliefs[self.source]
        if reach is None:
            return self.own * beliefs + self._by_listener @ (self.share * said)
        near = np.abs(said - beliefs[self.listener]) <= reach
        if self.unheard == "own":
            heard = np.where(near, said, beliefs[self.listener])
            return self.own * beliefs + self._by_listener @ (self.share * heard)
        share = self.share * near
        total = self.own + self._by_listener @ share
        alone = total == 0
        mixed = self.own * beliefs + self._by_listener @ (share * said)
        return np.where(alone, beliefs, mixed / np.where(alone, 1.0, total))

    def of(self, draws: Indices) -> DrawnShares:
        """The shares of some of the draws."""
        return DrawnShares(self.own[:, draws], self.share[:, draws], self.listener, self.source, self.unheard)

    def as_full(self) -> Floats:
        """(d, n, n) share matrices."""
        people, draws = self.own.shape
        full = np.zeros((draws, people, people))
        full[:, self.listener, self.source] = self.share.T
        full[:, np.arange(people), np.arange(people)] = self.own.T
        return full


def block_shares(network: Network, rows: Rows, heard: Mask | None, unheard: Unheard) -> DrawnShares:
    """The shares while only the arrows in `heard` (m,) count, as `shares.shares` has it."""
    drawn = (network.weight > 0) & network.present[network.listener]
    counts = drawn & network.present[network.source]
    if heard is not None:
        counts &= heard
    (kept,) = np.nonzero(counts)
    listener, source, share, own = network.listener[kept], network.source[kept], rows.weight[kept], rows.own
    if unheard == "own":
        (lost,) = np.nonzero(drawn & ~counts)
        own = own + adder(network.people, network.listener[lost]) @ rows.weight[lost]
    else:
        total = own + adder(network.people, listener) @ share
        alone = total == 0
        total = np.where(alone, 1.0, total)
        own, share = np.where(alone, 1.0, own / total), np.maximum(share / total[listener], TINY)
    own = np.where(network.present[:, None], own, 1.0)
    return DrawnShares(own, share, listener, source, unheard)


class DrawnTalk:
    """The talk of one process with drawn rows and starts (n, d).

    hearing_range, scale_width: as for `rounds.play`. stopped: asked every few rounds; once it is true, what is being
    worked out ends with `BrokenOff`.
    """

    def __init__(
        self,
        process: Process,
        rows: Rows,
        starts: Floats,
        hearing_range: float | None = None,
        scale_width: float = 1.0,
        stopped: Stopped = never,
    ) -> None:
        self.process = process
        self.starts = starts
        self._rows = rows
        self._stopped = stopped
        self._reach = None if hearing_range is None else hearing_range + RANGE_SLACK * scale_width
        self._open = 1.0 - process.firmness[:, None]
        self._brought_back = process.firmness[:, None] * starts
        self._built: dict[tuple[int, Unheard], DrawnShares] = {}

    def shares_of(self, block: Block) -> DrawnShares:
        """The shares of one block, built once."""
        key = (id(block.heard), block.unheard)
        if key not in self._built:
            self._built[key] = block_shares(self.process.network, self._rows, block.heard, block.unheard)
        return self._built[key]

    def play(self, rounds: int) -> Floats:
        """Beliefs after round 0, 1, ..., `rounds`: (rounds + 1, n, d)."""
        played = np.empty((rounds + 1, *self.starts.shape))
        played[0] = self.starts
        for at in range(rounds):
            self._look_up()
            block = self.process.blocks[block_at(self.process, at)]
            played[at + 1] = self._move(self.shares_of(block), played[at])
        return played

    def _look_up(self) -> None:
        if self._stopped():
            raise BrokenOff

    def _move(self, shares: DrawnShares, beliefs: Floats, draws: Indices | slice = slice(None)) -> Floats:
        mixed = shares.hear(beliefs, self._reach)
        if not self.process.firmness.any():
            return mixed
        return self._brought_back[:, draws] + self._open * mixed

    def step_to_rest(self, beliefs: Floats) -> tuple[Floats, Mask]:
        """Beliefs (n, d) when what goes on for ever is played from `beliefs` until they rest, and (d,) where they do.

        Where they have not come to rest after TURNS_TO_REST turns they are those of that moment.
        """
        process = self.process
        lasting = [(block, block.rounds) for block in process.blocks] if process.repeat else [(process.blocks[-1], 1)]
        rests = np.zeros(beliefs.shape[1], dtype=bool)
        ends = beliefs.copy()
        width = max(float(np.ptp(self.starts)), np.finfo(float).tiny) if self.starts.size else 1.0
        moving = np.arange(beliefs.shape[1])
        for _ in range(0, TURNS_TO_REST, TURNS_BETWEEN_LOOKS):
            if not len(moving):
                break
            turn = [(self.shares_of(block).of(moving), rounds) for block, rounds in lasting]
            held = ends[:, moving]
            for _ in range(TURNS_BETWEEN_LOOKS):
                before = held
                for shares, rounds in turn:
                    for _ in range(rounds):
                        self._look_up()
                        held = self._move(shares, held, moving)
            ends[:, moving] = held
            resting = np.abs(held - before).max(axis=0, initial=0.0) <= REST * width
            rests[moving[resting]] = True
            moving = moving[~resting]
        return ends, rests


class DrawnFate:
    """Where the talk of a process leads, without a hearing range, for up to ELIMINATED_PEOPLE people: what is the
    same in all draws. `of` adds the numbers.

    low, width: the scale, within which all beliefs lie.
    """

    def __init__(self, process: Process, low: float, width: float) -> None:
        track = course(process)
        turn = turn_of(track.lasting, process.firmness)
        shape = full_structure(turn.kept, turn.brought.any(axis=1))
        self.rounds_before = track.rounds_before
        self.process = process
        self.low, self.width = low, width
        self.groups: tuple[ClosedSet, ...] = shape.closed
        self.passing = np.flatnonzero(group_numbers(shape.closed, process.network.people) < 0)

    def of(self, talk: DrawnTalk) -> DrawnEnd:
        """The long run with these draws."""
        return DrawnEnd(self, self._turn(talk))

    def parts(self, beliefs: Floats) -> Floats:
        """(d, n) where beliefs (n, d) lie on the way from the bottom (0) of the scale to its top (1)."""
        return np.clip((beliefs - self.low) / self.width, 0.0, 1.0).T

    def _turn(self, talk: DrawnTalk) -> Turn:
        """The turn that lasts; what is brought back comes from the bottom and the top, (d, n, 2)."""
        if not self.process.repeat:
            return self._round(talk.shares_of(self.process.blocks[-1]), talk)
        whole = None
        for block in self.process.blocks:
            leg = repeated(self._round(talk.shares_of(block), talk), block.rounds)
            whole = leg if whole is None else followed_by(whole, leg)
        return whole

    def _round(self, shares: DrawnShares, talk: DrawnTalk) -> Turn:
        firmness = self.process.firmness
        firm = np.flatnonzero(firmness)
        kept = shares.as_full()
        brought = np.zeros((*kept.shape[:2], 2))
        if len(firm):
            rows, open_part = kept[:, firm], 1.0 - firmness[firm, None]
            kept[:, firm] = np.where((rows > 0) & (open_part > 0), np.maximum(open_part * rows, TINY), 0.0)
            start = self.parts(talk.starts[firm])
            brought[:, firm] = np.stack([1.0 - start, start], axis=2) * np.maximum(firmness[firm, None], TINY)
        return Turn(kept, brought, firm)


class DrawnEnd:
    """The long-run maps of d draws: the sum over closed groups of (chance to end there) times (influence within the
    group), by elimination as for one sketch.

    Firm people's starts are never listed one by one: a start v, as a part of the way from the bottom of the scale to
    its top, counts as two sources, the top with weight v and the bottom with 1 - v. Then the chance to end at the top
    is the belief itself, from sums of positive numbers only.
    """

    def __init__(self, fate: DrawnFate, turn: Turn) -> None:
        self._fate = fate
        self._turn = turn
        self._within = [stationary(_among(turn.kept, group.members)) for group in fate.groups]

    def long_run(self, beliefs: Floats) -> tuple[Floats, Mask]:
        """Long-run averages (n, d), and the draws (d,) in which they are limits.

        beliefs: (n, d) after `rounds_before` rounds, when what goes on for ever begins.
        """
        fate = self._fate
        held = fate.parts(beliefs)
        views = np.zeros_like(held)
        still = np.ones(len(held), dtype=bool)
        for group, within in zip(fate.groups, self._within, strict=True):
            carried = within * held[:, group.members]
            views[:, group.members] = carried.sum(axis=1)[:, None]
            if group.period > 1:
                phases = [carried[:, group.phases == phase].sum(axis=1) for phase in range(group.period)]
                still &= group.period * np.ptp(phases, axis=0) <= STILL
        if len(fate.passing):
            views[:, fate.passing] = self._passed(views)
        return fate.low + fate.width * views.T, still

    def _passed(self, views: Floats) -> Floats:
        """(d, u) where those in no closed group come to, as parts of the way from bottom to top."""
        passing, kept = self._fate.passing, self._turn.kept
        exits = self._turn.brought[:, passing]
        for group in self._fate.groups:
            weight = kept[:, passing[:, None], group.members].sum(axis=2)
            view = np.minimum(views[:, group.members[:1]], 1.0)
            exits = exits + np.stack([weight * (1.0 - view), weight * view], axis=2)
        return absorption(kept[:, passing[:, None], passing], exits)[..., 1]


def _among(matrices: Floats, members: Indices) -> Floats:
    """(d, k, k) what the members give each other."""
    return matrices if len(members) == matrices.shape[-1] else matrices[:, members[:, None], members]
