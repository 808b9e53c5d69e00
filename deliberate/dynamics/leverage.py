"""Leverage: what one guess, a row of points or a firmness, moves in the end.

The *result* is ``voice @ beliefs``, for instance the mean of those present, at the plan's end or in the long run.
`pull_at_end` and `pull_in_long_run` give its derivative by every weight at once, from one sweep forwards (beliefs)
and one backwards (what a belief still counts for). `results_at_end` and `results_in_long_run` give the result after
finite changes of one row each, exactly: a single row is a change of rank one, so that the stationary vector p of a
closed group becomes ``p + p'_i dZ`` with ``p'_i = p_i / (1 - (dZ)_i)``, Z its fundamental matrix (Schweitzer 1968,
J. Appl. Prob. 5:401; Meyer 1975, SIAM Rev. 17:443), and a solve changes as Sherman and Morrison (1950, Ann. Math.
Statist. 21:124) say. The long run jumps where closed groups merge or split; such changes are not for these functions,
except that a person who becomes firm draws her whole closed group to her start.

Everything here is in full arrays: for committees, up to about 1,000 people.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from deliberate.dynamics.destination import Eliminated
from deliberate.dynamics.network import Floats, Indices, Mask, Network
from deliberate.dynamics.process import Block, Process, course
from deliberate.dynamics.rounds import block_at
from deliberate.dynamics.shares import TINY
from deliberate.dynamics.structure import full_structure
from deliberate.dynamics.turns import Turn, advance, turn_of

FULL_PEOPLE = 1_000
# Beyond these an inverse has lost about half, and nearly all, of its digits: groups hardly hear each other.
NEARLY_APART = 1e7
APART = 1e13


@dataclass(frozen=True, eq=False)
class RowChanges:
    """k alternatives to a process, each with one person's row and firmness replaced.

    person: (k,); weights: (k, n) her new shares of 1, her own view at her own place, over arrows that are drawn;
    firmness: (k,) hers after the change.
    """

    person: Indices
    weights: Floats
    firmness: Floats

    def __len__(self) -> int:
        return len(self.person)


def weight_shares(network: Network) -> Floats:
    """(n, n) everybody's weights as shares of 1, own view on the diagonal, before any stage or absence; above 0 for
    every arrow that is drawn."""
    own, points = network.in_parts()
    weights = np.zeros((network.people, network.people))
    weights[network.listener, network.source] = np.where(network.weight > 0, np.maximum(points, TINY), 0.0)
    np.fill_diagonal(weights, own)
    alone = np.flatnonzero(~weights.any(axis=1))
    weights[alone, alone] = 1.0
    return weights / weights.sum(axis=1)[:, None]


def heard_pairs(network: Network, heard: Mask | None) -> Mask:
    """(n, n) True where the listener (row) takes in the source (column) by an arrow that counts."""
    counts = network.present[network.listener] & network.present[network.source]
    if heard is not None:
        counts &= heard
    pairs = np.zeros((network.people, network.people), dtype=bool)
    pairs[network.listener[counts], network.source[counts]] = True
    return pairs


def with_row(process: Process, person: int, weights: Floats, firmness: float) -> Process:
    """The process with one person's row of shares (n,) and firmness replaced; arrows of 0 count as not drawn."""
    network = process.network
    own, weight, firm = network.own.copy(), network.weight.copy(), process.firmness.copy()
    hers = network.listener == person
    weight[hers] = weights[network.source[hers]]
    own[person], firm[person] = weights[person], firmness
    return replace(process, network=replace(network, own=own, weight=weight), firmness=firm)


# Finite changes, exactly


def results_at_end(process: Process, starts: Floats, rounds: int, voice: Floats, changes: RowChanges) -> Floats:
    """(k,) the result after `rounds` rounds with each change: all k are played side by side."""
    return voice @ _played(process, starts, rounds, changes)


def results_in_long_run(process: Process, starts: Floats, lasting: Lasting, changes: RowChanges) -> Floats:
    """(k,) the long-run result (the average where it swings) with each change.

    lasting: `Lasting.of(process, voice)`. The plan must not be repeated, and no change may take the last arrow
    between two people that counts for ever. NaN where a change brings groups so near to falling apart that half of
    the digits would be lost.
    """
    before = _played(process, starts, course(process).rounds_before, changes)
    rows = _stage_rows(process.blocks[-1], process.network, changes)
    results = np.empty(len(changes))
    for at, person in enumerate(changes.person.tolist()):
        firm = float(changes.firmness[at])
        results[at] = lasting.result(person, (1 - firm) * rows[at], firm, before[:, at], starts)
    return results


def _played(process: Process, starts: Floats, rounds: int, changes: RowChanges) -> Floats:
    """(n, k) beliefs after `rounds` rounds with each change."""
    many = np.arange(len(changes))
    held = np.repeat(starts[:, None], len(changes), axis=1)
    rows: dict[int, Floats] = {}
    for at in range(rounds):
        index = block_at(process, at)
        if index not in rows:
            rows[index] = _stage_rows(process.blocks[index], process.network, changes)
        heard = process.legs[index].shares.hear(held)
        after = process.firmness[:, None] * starts[:, None] + (1 - process.firmness)[:, None] * heard
        hers = np.einsum("kn,nk->k", rows[index], held)
        after[changes.person, many] = changes.firmness * starts[changes.person] + (1 - changes.firmness) * hers
        held = after
    return held


def _stage_rows(block: Block, network: Network, changes: RowChanges) -> Floats:
    """(k, n) the changed rows as shares while the block lasts."""
    heard = heard_pairs(network, block.heard)[changes.person]
    counted = np.where(heard, changes.weights, 0.0)
    many, hers = np.arange(len(changes)), changes.person
    own = changes.weights[many, hers]
    unheard = changes.weights.sum(axis=1) - counted.sum(axis=1) - own
    counted[many, hers] = own + (unheard if block.unheard == "own" else 0.0)
    total = counted.sum(axis=1)
    alone = (total <= 0) | ~network.present[hers]
    counted[alone] = 0.0
    counted[many[alone], hers[alone]] = total[alone] = 1.0
    return counted / total[:, None]


@dataclass(frozen=True, eq=False)
class Lasting:
    """One round that goes on for ever, with what is needed to change one of its rows.

    voice: (n,) what each long-run belief counts for in the result; into: (groups,) what each group's view does;
    to_starts: (n,) what the firm starts do.
    visits: (n,) what a passing person's belief after one round counts for, in all rounds that follow.
    inverse: (u, u) (I - Q)^-1 of the passing people, whose sums over rounds `visits` are.
    fundamental: of each closed group (k, k) Z = (I - T + 1 p)^-1 (Kemeny and Snell 1960).
    """

    voice: Floats
    turn: Turn
    firmness: Floats
    reached: Eliminated
    into: Floats
    to_starts: Floats
    visits: Floats
    inverse: Floats
    fundamental: tuple[Floats, ...]

    @classmethod
    def of(cls, process: Process, voice: Floats) -> Lasting:
        """What lasts of a process that is not repeated; the result is `voice` (n,) times the long-run beliefs."""
        track = course(process)
        turn = turn_of(track.lasting, track.firmness)
        shape = full_structure(turn.kept, turn.brought.any(axis=1))
        reached = Eliminated(turn, shape.closed)
        into = np.array([voice[group.members].sum() for group in reached.groups])
        to_starts, visits, inverse = np.zeros(len(voice)), np.zeros(len(voice)), np.zeros((0, 0))
        passing = reached.passing
        if len(passing):
            more, to_starts = reached.trace(voice[passing])
            into = into + more
            inverse = _inverse(np.eye(len(passing)) - turn.kept[np.ix_(passing, passing)])
            with np.errstate(invalid="ignore"):
                visits[passing] = voice[passing] @ inverse
        fundamental = tuple(_fundamental(turn.kept, reached.within, group.members) for group in reached.groups)
        return cls(voice, turn, track.firmness, reached, into, to_starts, visits, inverse, fundamental)

    @property
    def accurate(self) -> bool:
        """Whether the closed forms keep half of their digits or more: not where groups hardly hear each other."""
        return self._largest < NEARLY_APART

    @property
    def usable(self) -> bool:
        """Whether they keep any."""
        return self._largest < APART

    @property
    def _largest(self) -> float:
        return max(float(np.abs(inverse).max(initial=0.0)) for inverse in (self.inverse, *self.fundamental))

    def result(self, person: int, row: Floats, firm: float, before: Floats, starts: Floats) -> float:
        """The result with the person's kept row (n,) and firmness replaced, when `before` is held before it."""
        views = self.reached.group_views(before)
        group = int(self.reached.group_of[person])
        if group >= 0 and firm > 0:
            views[group] = starts[person]
        elif group >= 0:
            views[group] += self._shift_in_group(group, person, row, before)
        result = float(self.into @ views + self.to_starts @ starts)
        return result + self._shift_in_passing(person, row, firm, views, starts) if group < 0 else result

    def _shift_in_group(self, group: int, person: int, row: Floats, before: Floats) -> float:
        members = self.reached.groups[group].members
        change = row[members] - self.turn.kept[person, members]
        if not change.any():
            return 0.0
        spread_out = change @ self.fundamental[group]
        place = int(np.searchsorted(members, person))
        return float(_grown(self.reached.within[person], spread_out[place]) * (spread_out @ before[members]))

    def _shift_in_passing(self, person: int, row: Floats, firm: float, views: Floats, starts: Floats) -> float:
        passing = self.reached.passing
        beliefs = self.beliefs(views, starts)
        change = row - self.turn.kept[person]
        place = int(np.searchsorted(passing, person))
        gained = change @ beliefs + (firm - self.firmness[person]) * starts[person]
        return float(_grown(self.visits[person], change[passing] @ self.inverse[:, place]) * gained)

    def beliefs(self, views: Floats, starts: Floats) -> Floats:
        """(n,) long-run beliefs when the closed groups come to `views`."""
        reached = self.reached
        beliefs = np.zeros(len(starts))
        settled = reached.group_of >= 0
        beliefs[settled] = views[reached.group_of[settled]]
        if len(reached.passing):
            beliefs[reached.passing] = reached.carry(views, starts)
        return beliefs


def _grown(count: float, change: float) -> float:
    """count / (1 - change), what a person counts for with another row; NaN where that loses half of the digits."""
    return count / (1 - change) if abs(1 - change) * NEARLY_APART > 1 else np.nan


def _fundamental(kept: Floats, within: Floats, members: Indices) -> Floats:
    inside = kept[np.ix_(members, members)]
    return _inverse(np.eye(len(members)) - inside + within[members][None, :])


def _inverse(matrix: Floats) -> Floats:
    """The inverse; infinite where groups hear each other so little that doubles cannot tell it from none at all."""
    try:
        return np.linalg.inv(matrix)
    except np.linalg.LinAlgError:
        return np.full(matrix.shape, np.inf)


# Derivatives by every weight


def pull_at_end(
    process: Process, starts: Floats, rounds: int, voice: Floats, audible: Sequence[Mask] | None = None
) -> tuple[Floats, Floats]:
    """What the result after `rounds` rounds gains per share of weight, (n, n), and per unit of each start, (n,).

    Entry [i, j] is the derivative by the weight that i gives j, where i's weights are shares of 1; only differences
    within a row have a meaning; NaN where a size is beyond double range. audible: one (n, n) mask per block, True
    where an arrow would count if it were drawn; by default where one does.
    """
    steps = [block_at(process, at) for at in range(rounds)]
    beliefs = np.empty((rounds + 1, len(starts)))
    beliefs[0] = starts
    for at, index in enumerate(steps):
        beliefs[at + 1] = _moved(process, index, beliefs[at], starts)
    voices = np.empty_like(beliefs)
    voices[rounds] = voice
    to_starts = np.zeros(len(starts))
    for at in range(rounds - 1, -1, -1):
        heard = voices[at + 1] * (1 - process.firmness)
        to_starts += voices[at + 1] * process.firmness
        voices[at + 1] = heard
        voices[at] = process.legs[steps[at]].shares.give_back(heard)
    pull = np.zeros((len(starts), len(starts)))
    for index in sorted(set(steps)):
        during = [at for at, step in enumerate(steps) if step == index]
        worth = voices[[at + 1 for at in during]].T @ beliefs[during]
        pull += _by_weight(process, index, worth, audible)
    return pull, voices[0] + to_starts


@np.errstate(over="ignore", invalid="ignore")  # `_by_weight` makes NaN of both
def pull_in_long_run(
    process: Process, starts: Floats, lasting: Lasting, audible: Sequence[Mask] | None = None
) -> tuple[Floats, Floats]:
    """`pull_at_end` for the long run of a plan that is not repeated; lasting: `Lasting.of(process, voice)`.

    NaN also where an arrow from a closed group to others would merge groups, so that the long run would jump.
    """
    track = course(process)
    reached = lasting.reached
    before = advance(track.before, track.firmness, starts, starts)
    in_the_end = lasting.beliefs(reached.group_views(before), starts)
    worth = np.outer(lasting.visits * (1 - process.firmness), in_the_end)
    for at, group in enumerate(reached.groups):
        members = group.members
        worth[members] = np.nan
        share = lasting.into[at] * reached.within[members]
        worth[np.ix_(members, members)] = np.outer(share, lasting.fundamental[at] @ before[members])
    pull = _by_weight(process, len(process.blocks) - 1, worth, audible)
    voice_before, to_starts = reached.give_back(lasting.voice)
    earlier, counts = pull_at_end(process, starts, track.rounds_before, voice_before, audible)
    return pull + earlier, counts + to_starts


def _moved(process: Process, index: int, beliefs: Floats, starts: Floats) -> Floats:
    heard = process.legs[index].shares.hear(beliefs)
    return process.firmness * starts + (1 - process.firmness) * heard


@np.errstate(over="ignore", invalid="ignore")
def _by_weight(process: Process, index: int, worth: Floats, audible: Sequence[Mask] | None) -> Floats:
    """From what a share is worth in one block, (n, n), to what the weight behind it is worth there; NaN where that is
    beyond double range."""
    block, network = process.blocks[index], process.network
    heard = heard_pairs(network, block.heard)
    open_to = heard if audible is None else audible[index] & network.present & network.present[:, None]
    own = worth.diagonal()[:, None]
    if block.unheard == "own":
        pull = np.where(open_to, worth, own)
        return np.where(np.isfinite(pull), pull, np.nan)
    weights = weight_shares(network)
    counted = np.where(heard, weights, 0.0)
    np.fill_diagonal(counted, weights.diagonal())
    total = counted.sum(axis=1)
    alone = total <= 0
    mean = np.where(counted > 0, worth * counted, 0.0).sum(axis=1) / np.where(alone, 1.0, total)
    gained = (worth - mean[:, None]) / np.where(alone, 1.0, total)[:, None]
    np.fill_diagonal(open_to, True)
    pull = np.where(open_to & ~alone[:, None], gained, 0.0)
    return np.where(np.isfinite(pull), pull, np.nan)
