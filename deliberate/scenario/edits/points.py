"""Points: whose view counts for a listener, as 100 points shared among herself and those she hears.

Weights are in points of the listener's own choosing; here they are shown and set per 100. A row that was set here is
stored as it stands, so reading it again gives the same numbers.
"""

from __future__ import annotations

import math
import sys
from collections.abc import Iterable, Mapping
from typing import Literal

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
from deliberate.scenario.shape import shown
from deliberate.scenario.values import Arrow, Basis, Person, Scenario, Variant

HUNDRED = 100.0
_ROUNDING = 1e-6  # by how much a row may miss 100 and still be meant to add to it

Row = dict[str, float]
Others = Literal["rescale", "keep"]


def points_of(variant: Variant, listener: str) -> Row:
    """The points `listener` gives per 100, by id: herself first, then her sources in the order of the arrows.

    Somebody whose weights are all 0 hears only herself: 100. Presence and stages are left aside.
    """
    return rows_of(variant, (listener,))[listener]


def rows_of(variant: Variant, listeners: Iterable[str]) -> dict[str, Row]:
    """`points_of` for several listeners at once."""
    wanted = tuple(listeners)
    require_people(variant, wanted)
    own = {person.id: person.own_weight for person in variant.people}
    weights = {listener: {listener: own[listener]} for listener in wanted}
    for arrow in variant.arrows:
        if arrow.listener in weights:
            weights[arrow.listener][arrow.source] = arrow.weight
    return {listener: _per_hundred(listener, row) for listener, row in weights.items()}


def give_points(
    scenario: Scenario, listener: str, row: Mapping[str, float], *, variant: str, basis: Basis | None = None
) -> Scenario:
    """Set a listener's whole row: points by id, adding to 100 over herself and those she hears.

    Whoever is not in the row, or has 0 points, is not heard. Arrows keep their basis unless one is given.
    """
    one = variant_named(scenario, variant)
    name = shown_name(one, listener)
    points = {key: as_number(value, f"{name}'s points", 0, HUNDRED) for key, value in row.items()}
    total = math.fsum(points.values())
    if abs(total - HUNDRED) > _ROUNDING:
        raise DeliberateError(f"{name}'s points add to {shown(round(total, 9))}, not to 100")
    return store_rows(scenario, {listener: points}, variant=variant, basis=basis)


def set_points(
    scenario: Scenario, listener: str, source: str, points: float, *, variant: str, others: Others = "rescale"
) -> Scenario:
    """Let `source`, who may be the listener herself, count for `points` of the listener's 100.

    `rescale` shrinks or stretches the others in proportion. `keep` leaves the other sources' points alone and
    settles the difference with her own view; for her own points the two are the same. A source with 0 points
    is no longer heard, one without an arrow gets one.
    """
    one = variant_named(scenario, variant)
    require_people(one, (source,))
    wanted = as_number(points, f"{shown_name(one, listener)}'s points", 0, HUNDRED)
    settle = _kept if others == "keep" and source != listener else _rescaled
    row = settle(one, listener, points_of(one, listener), source, wanted)
    return store_rows(scenario, {listener: row}, variant=variant)


def set_own_points(scenario: Scenario, ids: Ids, points: float, *, variant: str) -> Scenario:
    """Let people's own views count for `points` of their 100, their sources sharing the rest in proportion.

    Those among several who hear nobody keep all 100 points to themselves.
    """
    one = variant_named(scenario, variant)
    listeners = as_ids(ids)
    wanted = as_number(points, "the points of the own view", 0, HUNDRED)
    hearing = {arrow.listener for arrow in one.arrows}
    if len(listeners) > 1:
        listeners = tuple(listener for listener in listeners if listener in hearing)
    rows = {
        listener: _rescaled(one, listener, row, listener, wanted) for listener, row in rows_of(one, listeners).items()
    }
    return store_rows(scenario, rows, variant=variant)


def store_rows(
    scenario: Scenario, rows: Mapping[str, Mapping[str, float]], *, variant: str, basis: Basis | None = None
) -> Scenario:
    """Set own weights and arrows of several listeners to these rows in one go; entries of 0 lose their arrow."""
    one = variant_named(scenario, variant)
    require_people(one, {*rows, *(source for row in rows.values() for source in row)})

    def person_after(person: Person) -> Person:
        row = rows.get(person.id)
        return person if row is None else changed(person, own_weight=row.get(person.id, 0.0))

    left = {
        listener: {one: p for one, p in row.items() if p > 0 and one != listener} for listener, row in rows.items()
    }
    arrows: list[Arrow] = []
    for arrow in one.arrows:
        if arrow.listener not in left:
            arrows.append(arrow)
        elif (weight := left[arrow.listener].pop(arrow.source, 0.0)) > 0:
            arrows.append(changed(arrow, weight=weight, basis=basis or arrow.basis))
    for listener, row in left.items():
        arrows.extend(Arrow(listener, source, weight, basis or "guess") for source, weight in row.items())

    def change(before: Variant) -> Variant:
        return changed(before, people=tuple(map(person_after, before.people)), arrows=tuple(arrows))

    return change_variant(scenario, variant, change)


def make_room(row: Mapping[str, float], points: float) -> Row:
    """`row` shrunk or stretched in proportion so that it adds to `points`."""
    total = math.fsum(row.values())
    return {one: _drawn(part * points / total, part if points else 0.0) for one, part in row.items()}


def _per_hundred(listener: str, weights: Row) -> Row:
    largest = max(weights.values())
    if largest == 0:
        return {listener: HUNDRED}
    if largest <= HUNDRED + _ROUNDING and abs(math.fsum(weights.values()) - HUNDRED) <= _ROUNDING:
        return weights
    _, exponent = math.frexp(largest)  # a power of two: no sum overflows, and no digit is lost
    parts = {one: math.ldexp(weight, -exponent) for one, weight in weights.items()}
    total = math.fsum(parts.values())
    return {one: _drawn(HUNDRED * part / total, weights[one]) for one, part in parts.items()}


def _rescaled(variant: Variant, listener: str, row: Row, source: str, points: float) -> Row:
    """`row` with `points` for the source, the others making room in proportion, in the same order."""
    others = {one: part for one, part in row.items() if one != source}
    if any(others.values()):
        return row | make_room(others, HUNDRED - points) | {source: points}
    if source != listener:
        return {listener: HUNDRED - points, source: points}
    if points < HUNDRED:
        raise DeliberateError(
            f"{shown_name(variant, listener)} hears nobody else, so all 100 points stay with the own view"
        )
    return row


def _kept(variant: Variant, listener: str, row: Row, source: str, points: float) -> Row:
    """`row` with `points` for the source, the own view settling the difference."""
    sources = {one: part for one, part in row.items() if one != listener} | {source: points}
    own = HUNDRED - math.fsum(sources.values())
    if own < -_ROUNDING:
        most = shown(round(points + own, 9))
        raise DeliberateError(f"{shown_name(variant, listener)}'s own view leaves no more than {most} points")
    return {listener: max(own, 0.0)} | sources


def _drawn(points: float, weight: float) -> float:
    """Points of an arrow that is there are never rounded to none."""
    return max(points, sys.float_info.min) if weight > 0 else points
