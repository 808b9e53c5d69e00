"""What a seating is judged by: how far views are apart at the plan's end, or how evenly starts count in them.

Both look at the end of the plan: the stages before the tables, the tables, and the stages after them. A *state* is
(n + 1, columns), the last row for empty chairs. An aim says in which order the tables are gone through, how a state
changes at a table, what the states after the last table lead to, and what that costs: less is better.
"""

from __future__ import annotations

from typing import Protocol

import numpy as np

from deliberate.dynamics.network import Floats, Indices, Mask, Network, sum_by
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import RANGE_SLACK, play
from deliberate.dynamics.seating.tables import TableTalk
from deliberate.dynamics.turns import turn_of

CHUNK_NUMBERS = 2_000_000  # numbers in the arrays of one batch
LESS_THAN_ANY_SPREAD = 1e-9  # a standard deviation weighs so little that no spread that shows is given up for it


class Aim(Protocol):
    """What the search needs to know of an aim."""

    state: Floats  # (n + 1, columns), before the table stage that is gone through first
    backwards: bool  # whether the last table stage is gone through first
    affine: bool  # whether what comes of a state is an affine function of it

    def talk(self, seats: Indices, states: Floats) -> Floats:
        """(..., s, columns) states of those on the chairs `seats` (..., s) after the table, from those before it."""

    def ends(self, states: Floats) -> Floats:
        """(m, n) what (m, n + 1, columns) states after all tables lead to."""

    def figures(self, ends: Floats) -> Floats:
        """(m,) what is told of ends (m, n)."""

    def cost(self, ends: Floats) -> Floats:
        """(m,) what is to be made small, from (m, n)."""


class Spread:
    """Highest minus lowest belief of those present at the plan's end. Among seatings alike in that, those whose
    beliefs lie closer together are better."""

    backwards = False

    def __init__(
        self,
        talk: TableTalk,
        before: Process | None,
        after: Process | None,
        starts: Floats,
        present: Mask,
        hearing_range: float | None,
        scale_width: float,
    ) -> None:
        self.affine = hearing_range is None
        self.talk = talk.views
        self._starts, self._present, self._width = starts, np.flatnonzero(present), scale_width
        self._reach = None if hearing_range is None else hearing_range + RANGE_SLACK * scale_width
        beliefs = starts
        if before is not None:
            rounds = sum(block.rounds for block in before.blocks)
            beliefs = play(before, starts, rounds, hearing_range, scale_width)[-1]
        self.state = np.append(beliefs, 0.0)[:, None]
        self._turn = turn_of(after.legs, after.firmness) if after is not None and self.affine else None
        self._later = () if after is None or self.affine else self._whole_room(after)

    def ends(self, states: Floats) -> Floats:
        """(m, n) beliefs at the plan's end."""
        beliefs = states[:, :-1, 0]
        if self._turn is not None:
            return beliefs @ self._turn.kept.T + self._turn.brought @ self._starts[self._turn.firm]
        if not self._later:
            return beliefs
        people = beliefs.shape[1]
        room, step = np.arange(people), max(1, CHUNK_NUMBERS // max(people * people, 1))
        parts = []
        for at in range(0, len(beliefs), step):
            part = beliefs[at : at + step, :, None]
            for talk in self._later:
                part = talk.views(np.broadcast_to(room, part.shape[:2]), part)
            parts.append(part[..., 0])
        return np.concatenate(parts) if parts else beliefs

    def figures(self, ends: Floats) -> Floats:
        """(m,) spreads."""
        seen = ends[:, self._present]
        return seen.max(axis=1) - seen.min(axis=1)

    def cost(self, ends: Floats) -> Floats:
        """(m,) the spread, and a trace of the standard deviation."""
        return self.figures(ends) + LESS_THAN_ANY_SPREAD * ends[:, self._present].std(axis=1)

    def _whole_room(self, after: Process) -> tuple[TableTalk, ...]:
        """Stages after the tables as one table of everybody with the arrows that count."""
        return tuple(
            TableTalk(
                _only(after.network, block), after.firmness, self._starts, block.rounds, block.unheard, self._reach
            )
            for block in after.blocks
        )


class Voices:
    """How unevenly the starts count in the average belief of those present at the plan's end: the sum of squared
    shares, one over which is the number of equal voices (Laakso and Taagepera 1979). Without a hearing range."""

    backwards = True
    affine = True

    def __init__(self, talk: TableTalk, before: Process | None, after: Process | None, present: Mask) -> None:
        self.talk = talk.voices
        end = present / max(np.count_nonzero(present), 1)
        state = np.stack([end, np.zeros(len(end))], axis=1)
        if after is not None:
            turn = turn_of(after.legs, after.firmness)
            state[turn.firm, 1] = end @ turn.brought
            state[:, 0] = end @ turn.kept
        self.state = np.pad(state, ((0, 1), (0, 0)))
        self._before = None if before is None else turn_of(before.legs, before.firmness)

    def ends(self, states: Floats) -> Floats:
        """(m, n) what each start counts for; rows sum to 1."""
        beliefs, starts = states[:, :-1, 0], states[:, :-1, 1]
        if self._before is None:
            return beliefs + starts
        ends = starts + beliefs @ self._before.kept
        ends[:, self._before.firm] += beliefs @ self._before.brought
        return ends

    def figures(self, ends: Floats) -> Floats:
        """(m,) numbers of equal voices."""
        return 1 / self.cost(ends)

    def cost(self, ends: Floats) -> Floats:
        """(m,) sums of squares."""
        return np.einsum("mn,mn->m", ends, ends)


def _only(network: Network, block: Block) -> Network:
    """The network in which nothing but what counts in the block is drawn."""
    if block.heard is None:
        return network
    own, points = network.in_parts()
    if block.unheard == "own":
        own = own + sum_by(network.listener, np.where(block.heard, 0.0, points), network.people)
    weight = np.where(block.heard, points, 0.0)
    return Network(own, network.listener, network.source, weight, network.present)
