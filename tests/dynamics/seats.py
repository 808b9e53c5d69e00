"""Rooms and aims for tests of seating, and the same by the plainest way there is."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import permutations

import numpy as np

from deliberate.dynamics.network import Network
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import RANGE_SLACK, play
from deliberate.dynamics.seating.aims import Aim, Spread, Voices
from deliberate.dynamics.seating.conditions import Condition, Room
from deliberate.dynamics.seating.tables import TableTalk
from deliberate.dynamics.shares import heard_at_tables

Split = tuple[tuple[int, ...], ...]


class Circle:
    """Some people with arrows, starts and firmness at random, who sit at tables for some rounds."""

    def __init__(
        self, people: int, seed: int, *, rounds=2, unheard="rescale", firm=False, absent=(), reach=None, arrows=0.5
    ) -> None:
        draw = np.random.default_rng(seed)
        matrix = draw.integers(1, 20, (people, people)) * (draw.random((people, people)) < arrows)
        np.fill_diagonal(matrix, 0)
        listener, source = np.nonzero(matrix)
        present = np.ones(people, dtype=bool)
        present[list(absent)] = False
        own = draw.integers(0, 40, people).astype(float)
        self.network = Network(own, listener, source, matrix[listener, source], present)
        self.firmness = draw.choice([0.0, 0.0, 0.4, 1.0], people) if firm else np.zeros(people)
        self.starts = draw.uniform(0, 100, people)
        self.rounds, self.unheard, self.reach = rounds, unheard, reach
        slack = None if reach is None else reach + RANGE_SLACK * 100
        self.talk = TableTalk(self.network, self.firmness, self.starts, rounds, unheard, slack)
        self.people = np.flatnonzero(present)

    def room(self, *sizes: int, conditions: tuple[Condition, ...] = ()) -> Room:
        return Room(self.network.people, self.people, sizes, self.talk.linked(), conditions)

    def spread(self, before: Process | None = None, after: Process | None = None) -> Aim:
        return Spread(self.talk, before, after, self.starts, self.network.present, self.reach, 100.0)

    def voices(self, before: Process | None = None, after: Process | None = None) -> Aim:
        return Voices(self.talk, before, after, self.network.present)

    def plenary(self, rounds: int) -> Process:
        return Process(self.network, (Block(None, "own", rounds),), False, self.firmness)

    def block(self, split: Split) -> Block:
        table_of = np.full(self.network.people, -1)
        for number, table in enumerate(split):
            table_of[list(table)] = number
        return Block(heard_at_tables(self.network, table_of), self.unheard, self.rounds)

    def end(self, *splits: Split, before: Process | None = None, after: Process | None = None) -> np.ndarray:
        """Beliefs at the end by the rounds of the whole plan, played one by one."""
        plan = self._plan(splits, before, after)
        return play(plan, self.starts, _length(plan), self.reach, 100.0)[-1]

    def counts(self, *splits: Split, before: Process | None = None, after: Process | None = None) -> np.ndarray:
        """What each start counts for in the mean of those present: the rounds played on unit starts."""
        plan = self._plan(splits, before, after)
        played = play(plan, np.eye(self.network.people), _length(plan))[-1]
        return played[self.network.present].mean(axis=0)

    def _plan(self, splits, before, after) -> Process:
        blocks = [*(before.blocks if before else ()), *map(self.block, splits), *(after.blocks if after else ())]
        return Process(self.network, tuple(blocks), False, self.firmness)


def _length(plan: Process) -> int:
    return sum(block.rounds for block in plan.blocks)


def splits(people: tuple[int, ...], sizes: tuple[int, ...]) -> Iterator[Split]:
    """All ways to split people into groups of these sizes, from the permutations; each once."""
    seen = set()
    for order in permutations(people):
        cut, at = [], 0
        for size in sizes:
            cut.append(tuple(sorted(order[at : at + size])))
            at += size
        split = tuple(sorted(cut))
        if split not in seen:
            seen.add(split)
            yield split


def as_split(seats: np.ndarray, people: int) -> Split:
    """Chairs as groups of people."""
    return tuple(sorted(tuple(sorted(row[row < people].tolist())) for row in seats))
