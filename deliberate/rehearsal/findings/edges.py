"""How near the vote is to tipping: knife-edge.

Beliefs at the plan's end are linear in each start, so the changes of one start at which some vote changes are known
exactly: where the belief of somebody crosses a mark. The outcome is constant between two such crossings of one
start; just beyond each crossing it is counted, the nearest crossing first, until it is another.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from deliberate.dynamics.rounds import play
from deliberate.rehearsal.findings.sketch import Indices, Mask, Sketch
from deliberate.rehearsal.results import Finding, Floats, Tally
from deliberate.rehearsal.words import amount, decimals

NEAR = 0.05  # of the scale's width: a change that no interview can rule out
BEYOND = 1e-9  # of the scale's width: how far behind a crossing votes are counted
MOST_COUNTED = 3_000_000  # beliefs; with more crossings only the nearest are looked at
FIRST_COUNTED = 64


def knife_edge(sketch: Sketch) -> Iterator[Finding]:
    """The smallest change of one start that turns the vote at the plan's end, where it is small or within the margin
    of that start."""
    if sketch.rehearsal.ballot is None or sketch.final_map is None or not len(sketch.voters):
        return
    margins = np.array([person.margins.get(sketch.question.id, 0.0) for person in sketch.variant.people])
    turn = _smallest_turn(sketch, np.maximum(margins, NEAR * sketch.question.width))
    if turn is None:
        return
    person, start, tally = turn
    now, margin = float(sketch.starts[person]), float(margins[person])
    change = abs(start - now)
    also = np.setdiff1d(np.flatnonzero(_within_margins(sketch, margins)), [person])
    yield Finding(
        kind="knife-edge",
        says=_says_edge(sketch, person, start, tally, margin <= 0 or change <= margin),
        why=_why_edge(sketch, person, change, margin, tally, also),
        people=sketch.ids([person, *also]),
        figures={"change": start - now, "start": now, "margin": margin, "turns_at": start, "also": len(also)},
    )


def _says_edge(sketch: Sketch, person: int, start: float, tally: Tally, unsure: bool) -> str:
    now = float(sketch.starts[person])
    change = sketch.number(abs(start - now), beside=0.0)
    way, name = "higher" if start > now else "lower", sketch.names([person])
    there, here = sketch.number(start, beside=now), sketch.number(now, beside=start)
    outcome = "it passes" if tally.passes else "it does not pass"
    verdict = "Too close to call" if unsure else "A close vote"
    return f"{verdict}: with {name} starting {change} {way}, at {there} instead of {here}, {outcome}."


def _why_edge(sketch: Sketch, person: int, change: float, margin: float, tally: Tally, also: Indices) -> str:
    would = f"The vote {sketch.at_end} would then be {amount(tally.in_favour)} for, {amount(tally.against)} against"
    if sketch.ids([person])[0] in sketch.rehearsal.unknown_starts:
        sure = "this start is not known and taken to be in the middle"
    elif margin <= 0:
        sure = "no margin is given for this start"
    elif change <= margin:
        sure = f"that is within the margin of {sketch.number(margin, beside=0.0)} given for this start"
    else:
        sure = f"that is more than the margin of {sketch.number(margin, beside=0.0)} given for this start"
    others = ""
    if len(also):
        margin_or_margins = "the margin" if len(also) == 1 else "their margins"
        others = f"; {sketch.names(also)} could turn it within {margin_or_margins} as well"
    return f"{would}; {sure}{others}."


@dataclass(frozen=True, eq=False)
class _Crossings:
    """Changes of one start at which somebody's belief at the plan's end crosses a mark, the smallest first."""

    person: Indices
    change: Floats


def _crossings(sketch: Sketch, reach: Floats) -> _Crossings:
    """All crossings within `reach` (n,) of each start and on the scale."""
    question, ends = sketch.question, sketch.ends
    deciding = sketch.electorate.deciding
    effect = sketch.final_map[deciding]
    marks = np.array(sketch.electorate.marks)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        change = (marks[:, None, None] - ends[deciding][None, :, None]) / effect[None, :, :]
    change += np.copysign(BEYOND * question.width, change)
    start = sketch.starts + change
    usable = np.isfinite(change) & (np.abs(change) <= reach)
    usable &= (start >= question.low) & (start <= question.high)
    _, _, person = np.nonzero(usable)
    change = change[usable]
    order = np.argsort(np.abs(change), kind="stable")
    return _Crossings(person[order], change[order])


def _smallest_turn(sketch: Sketch, reach: Floats) -> tuple[int, float, Tally] | None:
    """Whose start, where to, and the vote then; None where no start within `reach` turns the vote."""
    found = _crossings(sketch, reach)
    passes = sketch.rehearsal.ballot[sketch.end].passes
    first, size = 0, FIRST_COUNTED
    most = MOST_COUNTED // len(sketch.present)
    while first < min(len(found.change), most):
        chunk = slice(first, first + size)
        other = _passes(sketch, found.person[chunk], found.change[chunk]) != passes
        for at in (first + np.flatnonzero(other)).tolist():
            turn = _checked(sketch, int(found.person[at]), float(found.change[at]), passes)
            if turn is not None:
                return turn
        first, size = first + size, 4 * size
    return None


def _passes(sketch: Sketch, people: Indices, changes: Floats) -> Mask:
    """(k,) whether it passes at the plan's end when only the start of `people[k]` changes, by `changes[k]`."""
    return sketch.electorate.tally(sketch.ends + changes[:, None] * sketch.final_map[:, people].T).passes


def _checked(sketch: Sketch, person: int, change: float, passes: bool) -> tuple[int, float, Tally] | None:
    """The turn as it is told, to so many digits as are shown where that suffices, played again to make sure."""
    start = float(sketch.starts[person]) + change
    unit = 10.0 ** decimals(sketch.question)
    shown = math.ceil(start * unit) / unit if change > 0 else math.floor(start * unit) / unit
    for there in (shown, start):
        if not sketch.question.low <= there <= sketch.question.high:
            continue
        starts = sketch.starts.copy()
        starts[person] = there
        beliefs = play(sketch.assembly.process, starts, sketch.end)[-1]
        tally = next(iter(sketch.electorate.tally(beliefs[None, :])))
        if tally.passes != passes:
            return person, there, tally
    return None


def _within_margins(sketch: Sketch, margins: Floats) -> Mask:
    """(n,) whose start, moved to an end of its margin, turns the vote."""
    people = np.flatnonzero((margins > 0) & sketch.present)
    turns = np.zeros(len(margins), dtype=bool)
    passes = sketch.rehearsal.ballot[sketch.end].passes
    for sign in (-1, 1):
        moved = np.clip(sketch.starts[people] + sign * margins[people], sketch.question.low, sketch.question.high)
        turns[people] |= _passes(sketch, people, moved - sketch.starts[people]) != passes
    return turns
