"""Where it all leads: closed groups, influence, limit or swing, and how fast.

Settling from any start: Berger 1981; firm people: Friedkin and Johnsen 1990. A firm person also listens to a source that never changes, her own start; such a source is a closed group of its
own, called anchored.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike
from scipy.sparse import csr_array

from deliberate.dynamics.destination import Destination, destination
from deliberate.dynamics.network import Floats, Indices
from deliberate.dynamics.process import Course, Leg, Process, course
from deliberate.dynamics.spectrum import rate
from deliberate.dynamics.structure import structure
from deliberate.dynamics.swing import LARGEST_CYCLE, cycle, cycle_period, swings
from deliberate.dynamics.turns import advance, give_back, turn_of


@dataclass(frozen=True, eq=False)
class Group:
    """A closed group: members (k,) sorted; phases (k,), in every turn phase p takes over what phase p + 1 held;
    influence (k,) sums to 1. An `anchored` group is one firm person's own start."""

    members: Indices
    period: int
    phases: Indices
    influence: Floats
    anchored: bool


@dataclass(frozen=True, eq=False)
class LongRun:
    """What talk comes to if it goes on for ever.

    limit: (n,) or None when these starts swing for ever. cycle: (d, n), the lists visited for ever, turns
    0, d, 2d, ... tending to the first; None when nothing swings or there are too many lists. average: (n,) over
    turns for ever. influence: (n,) what each start counts for in the mean of `average`; sums to 1. rate: spectral
    radius per round of what is left without the limit; None when some group may swing. outside: sorted.
    """

    groups: tuple[Group, ...]
    outside: Indices
    settles_from_any_start: bool
    consensus_from_any_start: bool
    settles: bool
    limit: Floats | None
    cycle: Floats | None
    cycle_period: int | None
    average: Floats
    influence: Floats
    rate: float | None
    notes: tuple[str, ...]
    course: Course = field(repr=False)


def long_run(
    process: Process, starts: ArrayLike, *, scale_width: float = 1.0, hearing_range: float | None = None
) -> LongRun:
    """The long run from `starts` (n,).

    hearing_range, scale_width: as for `play`; beliefs closer than 1e-12 of the scale's width count as equal.
    """
    start = np.asarray(starts, dtype=np.float64)
    track = course(process)
    firmness = track.firmness
    people = len(firmness)
    notes: list[str] = []
    turn = turn_of(track.lasting, firmness)
    shape = structure(csr_array(turn.kept), firmness > 0)
    reached = destination(turn, shape.closed)
    before = advance(track.before, firmness, start, start)
    average = reached.average(before, start)
    found = swings(reached, before, scale_width)
    period = cycle_period(found) if found else None
    lists = None
    if found and period * people <= LARGEST_CYCLE:
        lists = cycle(reached, turn, found, average, track.turns_before)
    elif found:
        notes.append(f"the swing comes round only after {period} rounds and is not listed")
    always = all(group.period == 1 for group in shape.closed)
    groups = _groups(reached)
    return LongRun(
        groups=groups,
        outside=np.setdiff1d(reached.passing, reached.firm),
        settles_from_any_start=always,
        consensus_from_any_start=always and len(groups) == 1,
        settles=not found,
        limit=None if found else average,
        cycle=lists,
        cycle_period=period,
        average=average,
        influence=_influence(track, reached),
        rate=rate(turn.kept, shape, reached) ** (1 / track.rounds_in_turn) if always else None,
        notes=tuple(notes),
        course=track,
    )


def _groups(reached: Destination) -> tuple[Group, ...]:
    closed = [Group(g.members, g.period, g.phases, reached.within[g.members], False) for g in reached.groups]
    for person in reached.firm:
        closed.append(Group(np.array([person]), 1, np.zeros(1, dtype=np.intp), np.ones(1), True))
    return tuple(sorted(closed, key=lambda group: group.members[0]))


def _influence(track: Course, reached: Destination) -> Floats:
    people = len(track.firmness)
    if not people:
        return np.zeros(0)
    to_beliefs, to_starts = reached.give_back(np.full(people, 1 / people))
    to_beliefs, more = give_back(track.before, track.firmness, to_beliefs)
    influence = to_beliefs + to_starts + more
    return influence / influence.sum()


def final_map(process: Process, rounds: int) -> Floats:
    """The (n, n) matrix P with b(rounds) = P b(0), firmness included. Full: for up to about 1,000 people."""
    people = len(process.firmness)
    whole = np.eye(people)
    if rounds == 0:
        return whole
    turn = turn_of(_legs_of(process, rounds), process.firmness)
    whole = turn.kept.copy()
    whole[:, turn.firm] += turn.brought
    return whole


def _legs_of(process: Process, rounds: int) -> list[Leg]:
    """The legs that make up the first `rounds` rounds."""
    legs: list[Leg] = []
    left = rounds
    while left > 0:
        for leg in process.legs:
            if left > 0:
                legs.append(Leg(leg.shares, min(leg.rounds, left)))
                left -= legs[-1].rounds
        if left > 0 and not process.repeat:
            legs.append(Leg(process.legs[-1].shares, left))
            left = 0
    return legs
