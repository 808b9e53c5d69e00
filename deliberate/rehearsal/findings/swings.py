"""Views that change places for ever: swing."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from deliberate.rehearsal.findings.sketch import Indices, Sketch, ending
from deliberate.rehearsal.findings.suggesting import own_views
from deliberate.rehearsal.results import ClosedGroup, Finding, Floats
from deliberate.rehearsal.words import amount, in_words, listing

NAMED_PHASES = 3


def swing(sketch: Sketch) -> Iterator[Finding]:
    """Groups whose views go round for ever, the largest one in words."""
    rehearsal = sketch.rehearsal
    if rehearsal.settles:
        return
    groups = sorted(_swinging(sketch), key=lambda group: -len(group.people))
    if not groups:
        yield _who_is_heard_changes(sketch)
        return
    phases = _phases(sketch, groups[0])
    values = [float(sketch.rehearsal.cycle.beliefs[0][phase].mean()) for phase in phases] if rehearsal.cycle else []
    everybody = [sketch.assembly.place[person] for group in groups for person in group.people]
    period = groups[0].period
    figures = {"period": period, "groups": len(groups)} | {f"view_{at + 1}": v for at, v in enumerate(values[:9])}
    yield Finding(
        kind="swing",
        says=_says_swing(sketch, period, values),
        why=_why_swing(sketch, phases),
        people=sketch.ids(everybody),
        figures=figures,
        groups=tuple(sketch.ids(phase) for group in groups for phase in _phases(sketch, group)),
        suggestion=own_views(sketch, everybody),
    )


def _swinging(sketch: Sketch) -> list[ClosedGroup]:
    """The closed groups with a period that these starts set swinging; all with a period where it is not listed."""
    found = [group for group in sketch.rehearsal.closed_groups if group.period > 1]
    cycle = sketch.rehearsal.cycle
    if cycle is None:
        return found
    place, slack = sketch.assembly.place, 1e-9 * sketch.question.width
    moving = np.ptp(cycle.beliefs, axis=0) > slack
    return [group for group in found if any(moving[place[person]] for person in group.people)]


def _phases(sketch: Sketch, group: ClosedGroup) -> list[Indices]:
    """The people of each phase; those of a phase hear only those of the next one."""
    members = np.array([sketch.assembly.place[person] for person in group.people], dtype=np.intp)
    phases = np.array(group.phases)
    return [members[phases == phase] for phase in range(group.period)]


def _turn(sketch: Sketch) -> str:
    return "pass through the plan" if sketch.variant.plan.afterwards == "repeat" else "round"


def _says_swing(sketch: Sketch, period: int, values: Floats | list[float]) -> str:
    turn = _turn(sketch)
    if not values:
        return f"Views swing for ever in the sketch and come round only after {amount(period)} {_turns(sketch)}."
    low, high = sketch.number(min(values)), sketch.view(max(values))
    if period == 2:
        return f"Two sides swap views for ever in the sketch: {low} and {high} change places in every {turn}."
    parts = in_words(period, "part", "parts")
    if period <= NAMED_PHASES:
        shown = listing([sketch.number(value) for value in values])
        return f"Views travel round {parts} for ever in the sketch: {shown} move on by one in every {turn}."
    return f"Views travel round {parts} for ever in the sketch, between {low} and {high}, one step in every {turn}."


def _turns(sketch: Sketch) -> str:
    return "passes through the plan" if sketch.variant.plan.afterwards == "repeat" else "rounds"


def _why_swing(sketch: Sketch, phases: list[Indices]) -> str:
    most = 4 if len(phases) == 2 else 3
    named = [sketch.names(phase, most) for phase in phases[:NAMED_PHASES]]
    first = named[0]
    takes = f"take{ending(len(phases[0]))}"
    if len(phases) == 2:
        links = f"{first} {takes} over only what {named[1]} held before, and the other way round"
    elif len(phases) == NAMED_PHASES:
        # A part is named again by its one member, or referred back to.
        again = [name if len(phase) == 1 else "these" for name, phase in zip(named, phases, strict=True)]
        links = f"{first} {takes} over from {named[1]}, {again[1]} from {named[2]}, and {again[2]} from {first}"
    else:
        links = f"The {len(phases)} parts stand in a ring, and each takes over only what the next one held before"
    if sketch.variant.plan.afterwards == "repeat":
        return f"Over a whole pass through the plan: {links}; nobody's own view counts."
    return f"{links}; nobody's own view counts."


def _who_is_heard_changes(sketch: Sketch) -> Finding:
    """With a hearing range views may go round although no fixed group swings."""
    beliefs = sketch.rehearsal.cycle.beliefs
    moving = np.flatnonzero((np.ptp(beliefs, axis=0) > 1e-9 * sketch.question.width) & sketch.present)
    low, high = float(beliefs[:, moving].min()), float(beliefs[:, moving].max())
    return Finding(
        kind="swing",
        says=f"Views keep moving between {sketch.number(low)} and {sketch.view(high)} for ever in the sketch.",
        why=f"Who is near enough to be heard changes from round to round, and the same views come again every"
        f" {len(beliefs)} rounds.",
        people=sketch.ids(moving),
        figures={"period": len(beliefs), "lowest": low, "highest": high},
    )
