"""Changes of process: what a facilitator arranges, as edits on one variant.

A new stage takes its rounds out of the longest of the others while these keep a round each, so that two set-ups can
be compared at equal length; what cannot be taken is added. Attention in such a stage goes to those who are there
(`rescale`). People who are brought together get arrows where there are none, and go on hearing each other.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable, Iterable, Sequence
from itertools import permutations

from deliberate.errors import DeliberateError
from deliberate.scenario.access import variant_named
from deliberate.scenario.edits._common import (
    Ids,
    Pair,
    as_ids,
    as_number,
    change_variant,
    changed,
    in_order,
    require_people,
)
from deliberate.scenario.edits.go_rounds import opened
from deliberate.scenario.edits.people import add_person, set_ballots, set_beliefs
from deliberate.scenario.edits.points import HUNDRED, Row, points_of, rows_of, store_rows
from deliberate.scenario.values import Scenario, Stage, Variant


def let_hear(scenario: Scenario, arrows: Iterable[Pair], points: float, *, variant: str) -> Scenario:
    """Let listeners hear sources, (listener, source): each new voice gets `points` of the listener's 100.

    The listener's others make room in proportion; whom she hears already keeps what she gives.
    """
    one = variant_named(scenario, variant)
    wanted = _by_listener(arrows)
    require_people(one, {*wanted, *(source for sources in wanted.values() for source in sources)})
    each = as_number(points, "the points for each new voice", 0, HUNDRED)
    rows = {
        listener: opened(one, listener, row, newcomers, each)
        for listener, row in rows_of(one, wanted).items()
        if (newcomers := [source for source in wanted[listener] if source not in row])
    }
    return store_rows(scenario, rows, variant=variant)


def give_at_least(scenario: Scenario, arrows: Iterable[Pair], points: float, *, variant: str) -> Scenario:
    """Let listeners give sources, (listener, source), at least `points` of their 100, new to each other or not.

    Who gets less so far is raised to that; all others, the own view among them, make room in proportion.
    """
    one = variant_named(scenario, variant)
    least = as_number(points, "the points for each voice", 0, HUNDRED)
    wanted = _by_listener(arrows)
    require_people(one, {*wanted, *(source for sources in wanted.values() for source in sources)})
    rows = {}
    for listener, row in rows_of(one, wanted).items():
        raised = [source for source in wanted[listener] if source != listener and row.get(source, 0.0) < least]
        if raised:
            others = {voice: part for voice, part in row.items() if voice not in raised}
            rows[listener] = opened(one, listener, others, raised, least)
    return store_rows(scenario, rows, variant=variant)


def acquaint(scenario: Scenario, circles: Iterable[Iterable[str]], points: float, *, variant: str) -> Scenario:
    """Let all within each circle hear each other, `let_hear` by `let_hear`."""
    pairs = [pair for circle in circles for pair in permutations(circle, 2)]
    return let_hear(scenario, pairs, points, variant=variant)


def move_points(scenario: Scenario, listener: str, away: str, to: str, points: float, *, variant: str) -> Scenario:
    """Let `listener` give `points` of her 100 to `to` instead of `away`; either may be her own view."""
    one = variant_named(scenario, variant)
    require_people(one, (listener, away, to))
    row = points_of(one, listener)
    given = as_number(points, "the points that are moved", 0, row.get(away, 0.0))
    return store_rows(scenario, {listener: _moved(row, away, to, given)}, variant=variant)


def hear_all_alike(scenario: Scenario, own_points: float, *, variant: str) -> Scenario:
    """Let everybody present give her own view `own_points` of 100 and all others present the rest, alike."""
    one = variant_named(scenario, variant)
    circle = tuple(person.id for person in one.people if person.present)
    if len(circle) < 2:
        return scenario
    own = as_number(own_points, "the points of the own view", 0, HUNDRED)
    each = (HUNDRED - own) / (len(circle) - 1)
    rows = {listener: {one: own if one == listener else each for one in circle} for listener in circle}
    return store_rows(scenario, rows, variant=variant)


def add_go_between(
    scenario: Scenario, people: Ids, points: float, *, variant: str, name: str = "Go-between"
) -> Scenario:
    """Add somebody without a vote who hears all of `people` alike and whom each of them gives `points` of 100.

    She adds no view of her own: her own weight is 0, and on every question she starts at the mean of the known
    starts of those she hears.
    """
    heard = as_ids(people)
    before = variant_named(scenario, variant)
    require_people(before, heard)
    if not heard:
        raise DeliberateError("a go-between hears somebody")
    scenario = add_person(scenario, name, variant=variant, place=_middle(before, heard))
    newcomer = variant_named(scenario, variant).people[-1].id
    scenario = set_ballots(scenario, newcomer, 0, variant=variant)
    for question in scenario.questions:
        known = [one.beliefs[question.id] for one in before.people if one.id in heard and question.id in one.beliefs]
        if known:
            mean = sum(belief / len(known) for belief in known)
            belief = min(max(mean, question.low), question.high)
            scenario = set_beliefs(scenario, {newcomer: belief}, question.id, variant=variant)
    row = {newcomer: 0.0} | dict.fromkeys(heard, HUNDRED / len(heard))
    scenario = store_rows(scenario, {newcomer: row}, variant=variant)
    return let_hear(scenario, [(one, newcomer) for one in heard], points, variant=variant)


def begin_with(scenario: Scenario, stage: Stage, *, variant: str) -> Scenario:
    """Put a stage before all others, at equal length where the others have rounds to spare."""
    return _with_stages(scenario, variant, lambda stages: (stage, *_shortened(stages, stage.rounds)))


def end_with(scenario: Scenario, stage: Stage, *, variant: str) -> Scenario:
    """Put a stage behind all others, at equal length where the others have rounds to spare."""
    return _with_stages(scenario, variant, lambda stages: (*_shortened(stages, stage.rounds), stage))


def reorder_stages(scenario: Scenario, order: Sequence[int], *, variant: str) -> Scenario:
    """Put the stages into this order of their present places, counted from 0, each of them once."""

    def change(stages: tuple[Stage, ...]) -> tuple[Stage, ...]:
        numbered = tuple(enumerate(stages))
        keys = (str(place) for place in order)
        return tuple(stage for _, stage in in_order(numbered, keys, lambda entry: str(entry[0])))

    return _with_stages(scenario, variant, change)


def _by_listener(arrows: Iterable[Pair]) -> dict[str, list[str]]:
    wanted: dict[str, list[str]] = defaultdict(list)
    for listener, source in dict.fromkeys(arrows):
        wanted[listener].append(source)
    return wanted


def _with_stages(
    scenario: Scenario, variant: str, change: Callable[[tuple[Stage, ...]], tuple[Stage, ...]]
) -> Scenario:
    return change_variant(
        scenario, variant, lambda one: changed(one, plan=changed(one.plan, stages=change(one.plan.stages)))
    )


def _moved(row: Row, away: str, to: str, points: float) -> Row:
    if away == to:
        return row
    return row | {away: row.get(away, 0.0) - points, to: row.get(to, 0.0) + points}


def _shortened(stages: Sequence[Stage], rounds: int) -> tuple[Stage, ...]:
    """The stages without `rounds` rounds, each taken from the longest that has more than one, the first of equals."""
    left = [stage.rounds for stage in stages]
    for _ in range(rounds):
        longest = max(range(len(left)), key=left.__getitem__)
        if left[longest] > 1:
            left[longest] -= 1
    return tuple(changed(stage, rounds=kept) for stage, kept in zip(stages, left, strict=True))


def _middle(variant: Variant, ids: Iterable[str]) -> tuple[float, float] | None:
    """The middle of these people's places on the canvas; None where one has none."""
    wanted = set(ids)
    places = [(person.x, person.y) for person in variant.people if person.id in wanted]
    if any(x is None or y is None for x, y in places):
        return None
    return sum(x for x, _ in places) / len(places), sum(y for _, y in places) / len(places)
