"""Go-rounds: everybody hears everybody.

A person's arrows are the same in all stages, so hearing somebody new, even for one round, takes an arrow.
"""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Iterable, Iterator

from deliberate.errors import DeliberateError
from deliberate.scenario.access import variant_named
from deliberate.scenario.edits._common import (
    Ids,
    as_ids,
    as_number,
    change_variant,
    changed,
    require_people,
    shown_name,
)
from deliberate.scenario.edits.points import HUNDRED, Row, make_room, rows_of, store_rows
from deliberate.scenario.shape import shown
from deliberate.scenario.values import Scenario, Stage, Variant

SMALL_POINTS = 2.0


def add_go_round(
    scenario: Scenario, *, variant: str, points: float = SMALL_POINTS, ids: Ids | None = None
) -> Scenario:
    """Let everybody hear everybody: each gives `points` of her 100 to each one she has not heard so far.

    What she gives the others and her own view shrinks in proportion. `ids` limits it to these people; by default
    it is all who are present.
    """
    one = variant_named(scenario, variant)
    circle = tuple(person.id for person in one.people if person.present) if ids is None else as_ids(ids)
    require_people(one, circle)
    each = as_number(points, "the points for each new voice", 0, HUNDRED)
    if each == 0:
        raise DeliberateError("the points for each new voice must be more than 0, or nobody would be heard")
    rows = {
        listener: opened(one, listener, row, newcomers, each)
        for listener, row in rows_of(one, circle).items()
        if (newcomers := [source for source in circle if source not in row and source != listener])
    }
    return store_rows(scenario, rows, variant=variant)


def add_joint_round(
    scenario: Scenario, rounds: int = 1, *, variant: str, name: str = "Go-round", points: float | None = None
) -> Scenario:
    """Put a stage of `rounds` before the others in which everybody present hears everybody, about alike.

    Each gives those she has not heard so far the average of what she gives now, or `points` of 100 each. Where
    the sketch falls into groups without an arrow between them, the plenary stages that follow become tables of
    these groups, so that there everything stays as it was: the new arrows count in the joint stage only. (Points
    for the absent are then spread over all that is heard, also where they fell to the own view.) Where the sketch
    hangs together, the new arrows count in the later plenary stages too, and get `SMALL_POINTS` by default.
    """
    one = variant_named(scenario, variant)
    groups = tuple(linked_groups(one))
    apart = len(groups) > 1
    if apart:
        opened = _open_between(scenario, one, groups, points)
    else:
        opened = add_go_round(scenario, variant=variant, points=SMALL_POINTS if points is None else points)
    front = Stage(name=name, rounds=rounds)

    def change(before: Variant) -> Variant:
        later = (_by_themselves(stage, groups) if apart else stage for stage in before.plan.stages)
        return changed(before, plan=changed(before.plan, stages=(front, *later)))

    return change_variant(opened, variant, change)


def linked_groups(variant: Variant) -> Iterator[tuple[str, ...]]:
    """Those present, in groups between which there is no arrow (weakly connected components)."""
    present = {person.id for person in variant.people if person.present}
    neighbours = defaultdict(set)
    for arrow in variant.arrows:
        if arrow.listener in present and arrow.source in present:
            neighbours[arrow.listener].add(arrow.source)
            neighbours[arrow.source].add(arrow.listener)
    place: dict[str, int] = {}
    for number, person in enumerate(variant.people):
        waiting = [person.id] if person.id in present else []
        while waiting:
            reached = waiting.pop()
            if reached not in place:
                place[reached] = number
                waiting.extend(neighbours[reached])
    groups = defaultdict(list)
    for person in variant.people:
        if person.present:
            groups[place[person.id]].append(person.id)
    yield from map(tuple, groups.values())


def _open_between(
    scenario: Scenario, variant: Variant, groups: tuple[tuple[str, ...], ...], points: float | None
) -> Scenario:
    """Arrows from everybody to everybody in the other groups."""
    rows = {}
    for group in groups:
        others = [source for other in groups if other is not group for source in other]
        for listener, row in rows_of(variant, group).items():
            average = HUNDRED / (sum(part > 0 for part in row.values()) + len(others))
            rows[listener] = opened(variant, listener, row, others, average if points is None else points)
    return store_rows(scenario, rows, variant=variant.name)


def opened(variant: Variant, listener: str, row: Row, newcomers: Iterable[str], points: float) -> Row:
    """`row` with `points` for each newcomer, the rest making room in proportion."""
    heard = dict.fromkeys(newcomers, points)
    room = HUNDRED - math.fsum(heard.values())
    if room <= 0:
        most = HUNDRED / len(heard)
        raise DeliberateError(
            f"{shown_name(variant, listener)} would hear {len(heard)} more people: "
            f"give each of them less than {shown(round(most, 3))} points"
        )
    return make_room(row, room) | heard


def _by_themselves(stage: Stage, groups: tuple[tuple[str, ...], ...]) -> Stage:
    """A plenary stage as tables of `groups`. `rescale` gives the points of the new arrows back to the old ones."""
    if stage.setting != "plenary":
        return stage
    return changed(stage, setting="tables", tables=groups, unheard="rescale")
