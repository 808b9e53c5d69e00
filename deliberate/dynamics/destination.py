"""Where turns that go on for ever lead: long-run averages, and what each belief counts for in them.

The long-run map of a share matrix is the sum over closed groups of (chance to end there) times (influence within
the group); a firm person's start is a source that never changes, and so a closed group of its own.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from deliberate.dynamics.elimination import absorption, stationary
from deliberate.dynamics.network import Floats, Indices, sum_by
from deliberate.dynamics.structure import ClosedSet
from deliberate.dynamics.turns import Turn


@dataclass(frozen=True, eq=False)
class Destination:
    """The long-run map of one turn.

    groups: the closed groups of people; group_of: (n,) index into them, -1 for people who are in none.
    within: (n,) influence within the own closed group, 0 for people who are in none.
    passing: (u,) the people who are in none, firm ones among them; chances: (u, groups + firm) where they end.
    firm: (f,) the people with firmness above 0.
    """

    groups: tuple[ClosedSet, ...]
    group_of: Indices
    within: Floats
    passing: Indices
    chances: Floats
    firm: Indices

    def average(self, beliefs: Floats, starts: Floats) -> Floats:
        """(n,) average over turns for ever, from `beliefs` before the first turn and the firm people's `starts`."""
        views = self.group_views(beliefs)
        average = views[self.group_of] if len(views) else np.zeros(len(beliefs))
        average[self.passing] = self.chances @ np.concatenate([views, starts[self.firm]])
        return average

    def group_views(self, beliefs: Floats) -> Floats:
        """(groups,) what each closed group comes to on average."""
        settled = np.flatnonzero(self.group_of >= 0)
        return sum_by(self.group_of[settled], self.within[settled] * beliefs[settled], len(self.groups))

    def give_back(self, voice: Floats) -> tuple[Floats, Floats]:
        """What each belief before the first turn, and each start, counts for in voice (n,) times the average."""
        settled = self.group_of >= 0
        into = sum_by(self.group_of[settled], voice[settled], len(self.groups))
        ends = voice[self.passing] @ self.chances
        into += ends[: len(self.groups)]
        to_beliefs = into[self.group_of] * self.within if len(into) else np.zeros(len(voice))
        to_starts = np.zeros(len(voice))
        to_starts[self.firm] = ends[len(self.groups) :]
        return to_beliefs, to_starts


def destination(turn: Turn, groups: tuple[ClosedSet, ...]) -> Destination:
    """The long-run map of a turn with these closed groups, by elimination (full arrays)."""
    people = len(turn.kept)
    group_of = np.full(people, -1, dtype=np.intp)
    within = np.zeros(people)
    for at, group in enumerate(groups):
        group_of[group.members] = at
        within[group.members] = _influence(turn, group)
    passing = np.flatnonzero(group_of < 0)
    rows = turn.kept[passing]
    exits = np.zeros((len(passing), len(groups) + len(turn.firm)))
    for at, group in enumerate(groups):
        exits[:, at] = rows[:, group.members].sum(axis=1)
    exits[:, len(groups) :] = turn.brought[passing]
    return Destination(groups, group_of, within, passing, absorption(rows[:, passing], exits), turn.firm)


def _influence(turn: Turn, group: ClosedSet) -> Floats:
    if len(group.members) == 1:
        return np.ones(1)
    if len(group.members) == len(turn.kept):
        return stationary(turn.kept)
    return stationary(turn.kept[np.ix_(group.members, group.members)])
