"""What a change of process is judged by: the figures of one set-up, and what a change asks of the people in it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from deliberate.rehearsal.findings.sketch import Sketch, sketch_of
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import (
    EndInPlenary,
    Floats,
    GoBetween,
    JointRound,
    MixedTables,
    PairTalks,
    SpeakFirst,
    Suggestion,
    Tally,
)
from deliberate.scenario.edits.points import HUNDRED, rows_of
from deliberate.scenario.values import FrozenDict, Scenario, Variant

COUNTS = 1e-9  # a start with less influence does not count
MOVED = 1e-9  # points; less is rounding


@dataclass(frozen=True, eq=False)
class Figures:
    """One set-up in figures, over those who take part.

    common_view: all come to one view, whatever the starts are (with a hearing range: with these starts).
    groups: closed groups, one for each firm start; firm: how many firm starts. swings: views may swing for ever from
    some start.
    still_moving: how far a view still moves in the turn after the plan's end. rounds_to_agree: None for never.
    influence: what each start counts for in the long run, by id; voices: equal voices that are as concentrated.
    mean_at_end, mean_in_long_run: of those present.
    """

    common_view: bool
    groups: int
    firm: int
    swings: bool
    still_moving: float
    rounds_to_agree: int | None
    spread_at_end: float
    voices: float
    influence: Mapping[str, float]
    mean_at_end: float
    mean_in_long_run: float
    vote_at_end: Tally | None
    vote_in_long_run: Tally | None

    @property
    def left_out(self) -> tuple[str, ...]:
        """Those whose starts do not count in the long run."""
        return tuple(person for person, share in self.influence.items() if share < COUNTS)


def sketch_for(scenario: Scenario, variant: str, question: str) -> Sketch:
    """The rehearsal of one set-up to the end of its plan and one turn more."""
    plan = next(one for one in scenario.variants if one.name == variant).plan
    turn = plan.rounds if plan.afterwards == "repeat" else 1
    return sketch_of(scenario, rehearse(scenario, variant, question, plan.rounds + turn))


def figures(sketch: Sketch) -> Figures:
    """The figures of a sketch from `sketch_for`."""
    rehearsal, here = sketch.rehearsal, sketch.here
    ends, after = sketch.ends, rehearsal.rounds[-1]
    influence = sketch.influence
    present = sketch.present
    groups = _groups(sketch)
    return Figures(
        common_view=_common_view(sketch, groups),
        groups=groups,
        firm=sum(group.anchored for group in rehearsal.closed_groups),
        swings=not rehearsal.settles_from_any_start and sketch.question.hearing_range is None,
        still_moving=float(np.abs(after - ends)[here].max(initial=0.0)),
        rounds_to_agree=sketch.agreed if sketch.common_view is not None else None,
        spread_at_end=sketch.spread(ends),
        voices=1 / float(influence @ influence) if influence.any() else 0.0,
        influence=FrozenDict(
            {person: float(influence[at]) for at, person in enumerate(rehearsal.people) if present[at]}
        ),
        mean_at_end=_mean(ends[present]),
        mean_in_long_run=_mean(sketch.long_run[present]),
        vote_at_end=None if rehearsal.ballot is None else rehearsal.ballot[sketch.end],
        vote_in_long_run=rehearsal.ballot_at_limit,
    )


def _groups(sketch: Sketch) -> int:
    place, taking_part = sketch.assembly.place, sketch.present & ~sketch.apart
    return sum(bool(taking_part[place[group.people[0]]]) for group in sketch.rehearsal.closed_groups)


def _common_view(sketch: Sketch, groups: int) -> bool:
    if sketch.question.hearing_range is not None:
        return sketch.common_view is not None
    return groups == 1 and sketch.rehearsal.settles_from_any_start


def _mean(beliefs: Floats) -> float:
    return float(beliefs.mean()) if len(beliefs) else 0.0


@dataclass(frozen=True)
class Effort:
    """What a change asks: points of 100 that people give elsewhere than before, people who do something new, and
    rounds that the plan gets longer by."""

    points: float
    people: int
    rounds: int


def effort(before: Variant, after: Variant, suggestion: Suggestion) -> Effort:
    """What it takes to get from one set-up to the other by this suggestion."""
    ids = [person.id for person in before.people]
    old, new = rows_of(before, ids), rows_of(after, ids)
    moved = {one: _moved(old[one], new[one]) for one in ids}
    asked = {one for one, points in moved.items() if points > MOVED} | _asked(suggestion, before)
    newcomers = len(after.people) - len(before.people)
    return Effort(sum(moved.values()), len(asked) + newcomers, after.plan.rounds - before.plan.rounds)


def _moved(old: Mapping[str, float], new: Mapping[str, float]) -> float:
    """Points that go elsewhere than before."""
    return sum(max(points - old.get(one, 0.0), 0.0) for one, points in new.items())


def _asked(suggestion: Suggestion, variant: Variant) -> set[str]:
    """Those whom a new stage asks to do something; of a panel the smaller part, the heard or the silent."""
    present = {person.id for person in variant.people if person.present}
    match suggestion:
        case JointRound() | EndInPlenary():
            return present
        case GoBetween(people):
            return set(people)
        case PairTalks(pairs):
            return {one for pair in pairs for one in pair}
        case MixedTables(tables):
            return {one for table in tables for one in table}
        case SpeakFirst(speakers):
            return min((set(speakers), present - set(speakers)), key=len)
        case _:
            return set()


def price(asked: Effort, people: int, rounds: int) -> float:
    """What is asked as a part of all that could be: of all people, of half of all points, of the plan's rounds, a
    third each (points of the own view aside there is about half to move)."""
    points_part = asked.points / (HUNDRED / 2 * max(people, 1))
    return (asked.people / max(people, 1) + points_part + asked.rounds / max(rounds, 1)) / 3
