"""Where it all leads: closed groups, influence, limit or swing, and how fast.

When it settles from any start: Berger 1981. A firm person (Friedkin and Johnsen 1990) also listens to a source that
never changes, her own start; such a source is a closed group of its own, called anchored.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import ArrayLike

from deliberate.dynamics.destination import Destination, Eliminated
from deliberate.dynamics.hearing import follow_hearing
from deliberate.dynamics.large import (
    FULL_PEOPLE,
    NOT_EXACT,
    Iterated,
    LargeTurn,
    large_structure,
    large_turn,
)
from deliberate.dynamics.network import Floats, Indices
from deliberate.dynamics.process import Course, Leg, Process, course
from deliberate.dynamics.rounds import mover
from deliberate.dynamics.spectrum import ESTIMATE, rate, rate_of_pass
from deliberate.dynamics.structure import Structure, full_structure
from deliberate.dynamics.swing import LARGEST_CYCLE, STILL, cycle, cycle_period, swings
from deliberate.dynamics.turns import Turn, advance, give_back, turn_of

TOO_LONG = "all swings together come round only after {period} rounds, so that their beliefs are not listed"
END_OF_PASS = "the plan is repeated and beliefs move within it: long-run numbers are those at the end of a pass"


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

    hearing_range, scale_width: as for `play`; beliefs closer than 1e-12 of the scale's width count as equal. With
    a hearing range everything but `average`, `limit` and `cycle` is that of the network heard in the end.
    """
    start = np.asarray(starts, dtype=np.float64)
    if hearing_range is None:
        return _follow(course(process), start, scale_width, process.repeat)
    heard = follow_hearing(process, start, hearing_range, scale_width)
    found = _follow(heard.course, start, scale_width, process.repeat)
    found = replace(found, consensus_from_any_start=False, notes=(*heard.notes, *found.notes))
    return found if heard.lists is None else _with_cycle(found, heard.lists)


def _with_cycle(found: LongRun, lists: Floats) -> LongRun:
    """The long run when these (d, n) lists are visited for ever."""
    average = lists.mean(axis=0)
    lists.flags.writeable = average.flags.writeable = False
    return replace(
        found,
        settles_from_any_start=False,
        settles=False,
        limit=None,
        cycle=lists,
        cycle_period=len(lists),
        average=average,
        rate=None,
    )


def _follow(track: Course, start: Floats, scale_width: float, repeat: bool) -> LongRun:
    people = len(track.firmness)
    turn, shape, reached = _reach(track)
    notes: list[str] = []
    before = track.held if track.held is not None else advance(track.before, track.firmness, start, start)
    average = reached.average(before, start)
    found = swings(reached, before, scale_width)
    period = cycle_period(found) if found else None
    lists = None
    if found and period * people <= LARGEST_CYCLE:
        lists = cycle(reached, turn, found, average, start, track.turns_before)
    elif found:
        notes.append(TOO_LONG.format(period=period))
    always = all(group.period == 1 for group in shape.closed)
    pace = _rate(track, turn, shape, reached, notes) if always else None
    influence = _influence(track, reached)
    if isinstance(reached, Iterated) and not reached.exact:
        notes.append(NOT_EXACT)
    if repeat and moves_within(track, average if lists is None else lists[0], start, scale_width):
        notes.append(END_OF_PASS)
    groups = _groups(reached)
    for values in (average, lists, influence, *(g.influence for g in groups), *(g.phases for g in groups)):
        if values is not None:
            values.flags.writeable = False
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
        influence=influence,
        rate=pace,
        notes=tuple(notes),
        course=track,
    )


def _reach(track: Course) -> tuple[Turn | LargeTurn, Structure, Destination]:
    """The turn that lasts, its closed groups and its long-run map, by full arrays where they are small enough."""
    firmness = track.firmness
    if len(firmness) > FULL_PEOPLE:
        large = large_turn(track.lasting, firmness)
        shape = large_structure(large)
        return large, shape, Iterated(large, shape.closed)
    turn = turn_of(track.lasting, firmness)
    shape = full_structure(turn.kept, turn.brought.any(axis=1))
    return turn, shape, Eliminated(turn, shape.closed)


def _rate(track: Course, turn: Turn | LargeTurn, shape: Structure, reached: Destination, notes: list[str]) -> float:
    """The rate per round."""
    matrix = turn.kept if isinstance(turn, Turn) else turn.matrix
    radius, exact = (rate_of_pass(turn, reached), False) if matrix is None else rate(matrix, shape, reached)
    if not exact:
        notes.append(ESTIMATE)
    return radius ** (1 / track.rounds_in_turn)


def _groups(reached: Destination) -> tuple[Group, ...]:
    closed = [Group(g.members, g.period, g.phases, reached.within[g.members], False) for g in reached.groups]
    for person in reached.firm:
        closed.append(Group(np.array([person]), 1, np.zeros(1, dtype=np.intp), np.ones(1), True))
    return tuple(sorted(closed, key=lambda group: group.members[0]))


def _influence(track: Course, reached: Destination) -> Floats:
    """(n,) what each start counts for in the mean of the long-run average."""
    people = len(track.firmness)
    if not people:
        return np.zeros(0)
    to_beliefs, to_starts = reached.give_back(np.full(people, 1 / people))
    to_beliefs, more = give_back(track.before, track.firmness, to_beliefs)
    influence = to_beliefs + to_starts + more
    return influence / influence.sum()


def moves_within(track: Course, end: Floats, start: Floats, scale_width: float) -> bool:
    """Beliefs differ within a pass that starts from the long-run beliefs `end`."""
    move = mover(track.firmness, start)
    held = end
    for leg in track.lasting:
        for _ in range(leg.rounds):
            held = move(leg.shares, held)
            if np.abs(held - end).max(initial=0.0) > STILL * scale_width:
                return True
    return False


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
