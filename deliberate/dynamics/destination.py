"""Where turns that go on for ever lead: long-run averages, and what each belief counts for in them.

The long-run map of a share matrix is the sum over closed groups of (chance to end there) times (influence within
the group); a firm person's start is a source that never changes, and so a closed group of its own.
"""

from __future__ import annotations

from abc import ABC, abstractmethod

import numpy as np

from deliberate.dynamics.elimination import absorption, stationary
from deliberate.dynamics.network import Floats, Indices, sum_by
from deliberate.dynamics.structure import ClosedSet
from deliberate.dynamics.turns import Turn


class Destination(ABC):
    """The long-run map of one turn.

    groups: the closed groups of people; group_of: (n,) index into them, -1 for people who are in none.
    within: (n,) influence within the own closed group, 0 for people who are in none.
    passing: (u,) the people who are in none, firm ones among them; firm: (f,) those with firmness above 0.
    """

    def __init__(self, groups: tuple[ClosedSet, ...], group_of: Indices, within: Floats, firm: Indices) -> None:
        self.groups = groups
        self.group_of = group_of
        self.within = within
        self.firm = firm
        self.passing = np.flatnonzero(group_of < 0)
        self._settled = np.flatnonzero(group_of >= 0)

    @abstractmethod
    def carry(self, views: Floats, starts: Floats) -> Floats:
        """(u,) what passing people come to when the groups come to `views` and people started at `starts` (n,)."""

    @abstractmethod
    def trace(self, voice: Floats) -> tuple[Floats, Floats]:
        """What the (groups,) views and (n,) starts count for in voice (u,) times what passing people come to."""

    def group_views(self, beliefs: Floats) -> Floats:
        """(groups,) what each closed group comes to on average."""
        settled = self._settled
        return sum_by(self.group_of[settled], self.within[settled] * beliefs[settled], len(self.groups))

    def average(self, beliefs: Floats, starts: Floats) -> Floats:
        """(n,) average over turns for ever, from `beliefs` before the first turn and the firm people's `starts`."""
        views = self.group_views(beliefs)
        average = np.empty(len(beliefs))
        average[self._settled] = views[self.group_of[self._settled]]
        if len(self.passing):
            average[self.passing] = self.carry(views, starts)
        return average

    def give_back(self, voice: Floats) -> tuple[Floats, Floats]:
        """What each belief before the first turn, and each start, counts for in voice (n,) times the average."""
        settled = self._settled
        into = sum_by(self.group_of[settled], voice[settled], len(self.groups))
        to_starts = np.zeros(len(voice))
        if len(self.passing):
            more, to_starts = self.trace(voice[self.passing])
            into = into + more
        to_beliefs = np.zeros(len(voice))
        to_beliefs[settled] = into[self.group_of[settled]] * self.within[settled]
        return to_beliefs, to_starts


class Eliminated(Destination):
    """The long-run map from full arrays, every entry right to a relative 1e-12 or so; see `elimination`."""

    def __init__(self, turn: Turn, groups: tuple[ClosedSet, ...]) -> None:
        group_of = group_numbers(groups, len(turn.kept))
        within = np.zeros(len(turn.kept))
        for group in groups:
            within[group.members] = stationary(_among(turn.kept, group.members))
        super().__init__(groups, group_of, within, turn.firm)
        self._turn = turn
        self._chances = self._find_chances()

    def _find_chances(self) -> Floats:
        """(u, groups + f) where each passing person ends."""
        passing = self.passing
        if not len(passing):
            return np.zeros((0, len(self.groups) + len(self.firm)))
        rows = self._turn.kept[passing]
        exits = np.zeros((len(passing), len(self.groups) + len(self.firm)))
        for at, group in enumerate(self.groups):
            exits[:, at] = rows[:, group.members].sum(axis=1)
        exits[:, len(self.groups) :] = self._turn.brought[passing]
        return absorption(rows[:, passing], exits)

    def carry(self, views: Floats, starts: Floats) -> Floats:
        """See `Destination`."""
        return self._chances @ np.concatenate([views, starts[self.firm]])

    def trace(self, voice: Floats) -> tuple[Floats, Floats]:
        """See `Destination`."""
        ends = voice @ self._chances
        to_starts = np.zeros(len(self.group_of))
        to_starts[self.firm] = ends[len(self.groups) :]
        return ends[: len(self.groups)], to_starts


def group_numbers(groups: tuple[ClosedSet, ...], people: int) -> Indices:
    """(people,) the index of each one's closed group, -1 for none."""
    group_of = np.full(people, -1, dtype=np.intp)
    for at, group in enumerate(groups):
        group_of[group.members] = at
    return group_of


def _among(matrix: Floats, members: Indices) -> Floats:
    return matrix if len(members) == len(matrix) else matrix[np.ix_(members, members)]
