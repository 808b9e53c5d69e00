"""Whose start makes the result: fixed-view, carries."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from deliberate.rehearsal.findings.sketch import Indices, Sketch, ending, pairs, points, since
from deliberate.rehearsal.findings.suggesting import introduction
from deliberate.rehearsal.results import Finding
from deliberate.rehearsal.words import listing, percent, sentence

MORE_THAN_EQUAL = 2.0  # times an equal share
HALF = 0.5
WORTH_TELLING = 0.05  # of where the sketch ends; in a crowd twice an equal share is next to nothing
LARGE_OF_TWO = 2 / 3  # of two people one is always at half or more
ROUNDING = 1e-9
NAMED_FIXED = 4


def fixed_view(sketch: Sketch) -> Iterator[Finding]:
    """People who are heard and hear nobody, so that the others come to them; not where they are a closed group
    beside others that `closed_groups` tells about."""
    people = np.flatnonzero(sketch.still & sketch.heard)
    if not len(people) or (len(sketch.closed) > 1 and any(len(group) > 1 for group in sketch.closed)):
        return
    others = np.setdiff1d(sketch.here, people)
    network = sketch.assembly.process.network
    pulled = sketch.counts & np.isin(network.source, people) & np.isin(network.listener, others)
    yield Finding(
        kind="fixed-view",
        says=_says_fixed(sketch, people),
        why=_why_fixed(sketch, people, others),
        people=sketch.ids(people),
        figures={"people": len(people), "view": float(sketch.starts[people].mean())},
        arrows=tuple(sketch.ids(pair) for pair in zip(network.listener[pulled], network.source[pulled], strict=True)),
        suggestion=introduction(sketch, people, others),
    )


def _says_fixed(sketch: Sketch, people: Indices) -> str:
    if len(people) == 1:
        stays = f"The view of {sketch.names(people)} stays at {sketch.view(sketch.starts[people[0]])} in the sketch"
    elif len(people) <= NAMED_FIXED:
        values = listing([sketch.number(value) for value in sketch.starts[people]])
        stays = f"The views of {sketch.names(people)} do not move in the sketch: they stay at {values}"
    else:
        stays = f"The views of {sketch.names(people)} do not move in the sketch"
    if sketch.common_view is not None:
        return f"{stays}, and all others come to it." if len(people) == 1 else f"{stays}, and all others come there."
    return f"{stays}."


def _why_fixed(sketch: Sketch, people: Indices, others: Indices) -> str:
    given, name = _points_given(sketch, people, others), sketch.names(people)
    together = "" if len(people) == 1 else " together"
    if (sketch.firmness[people] == 1).all():
        holds = f"{name} bring{ending(len(people))} the start back in full in every round"
    else:
        holds = f"{name} hear{ending(len(people))} nobody in the sketch"
    reason = f"{holds}, while the others give {name}{together} {given} of 100 points on average"
    if sketch.common_view is None or sketch.agreed is None:
        return f"{reason}."
    return f"{reason}; all are within {sketch.tolerance} of each other {since(sketch.agreed)}."


def _points_given(sketch: Sketch, people: Indices, others: Indices) -> str:
    """What the others give to these people together, on average, in points of 100."""
    if not len(others):
        return "0"
    return points(sketch.drawn.matrix[others][:, people].sum() / len(others))


def carries(sketch: Sketch) -> Iterator[Finding]:
    """People whose start counts for more than twice an equal share of the end, or for more than half."""
    influence = sketch.influence
    counting = int(np.count_nonzero(influence > ROUNDING))
    if counting < 2:
        return
    equal = 1 / counting  # those who do not count at all are told of by `outside`
    bar = min(MORE_THAN_EQUAL * equal, HALF) if counting > 2 else LARGE_OF_TWO
    # `fixed_view` tells of those who do not move.
    people = np.flatnonzero((influence > bar + ROUNDING) & ~sketch.still)
    if not len(people):
        return
    people = people[np.argsort(-influence[people], kind="stable")]
    total, top = float(influence[people].sum()), people[0]
    if total < WORTH_TELLING:
        return
    starts = "start" if len(people) == 1 else "starts"
    yield Finding(
        kind="carries",
        says=sentence(
            f"{percent(total)} of where the sketch ends comes from the {starts} of {sketch.names(people)}."
        ),
        why=_why_carries(sketch, people, equal),
        people=sketch.ids(people),
        figures={"share": total, "largest": float(influence[top]), "equal": equal},
        arrows=pairs(sketch, np.flatnonzero(sketch.counts & (sketch.assembly.process.network.source == top))),
    )


def _why_carries(sketch: Sketch, people: Indices, equal: float) -> str:
    top = people[:1]
    name, given = sketch.names(top), _points_given(sketch, top, np.setdiff1d(sketch.here, top))
    kept = points(sketch.drawn.matrix.diagonal()[top[0]])
    each = "" if len(people) == 1 else f" each, that of {name} is {percent(float(sketch.influence[top[0]]))}"
    return (
        f"An equal share would be {percent(equal)}{each}; the others give {name} {given} of 100 points on average,"
        f" and {name} keeps {kept} for the own view."
    )
