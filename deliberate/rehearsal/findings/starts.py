"""What is not known, and who is not there: unknown-starts, absent."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from msgspec.structs import replace

from deliberate.dynamics.rounds import play
from deliberate.rehearsal.ballots import Electorate
from deliberate.rehearsal.findings.sketch import Indices, Sketch, ending, is_are
from deliberate.rehearsal.results import Finding, Floats
from deliberate.rehearsal.words import count

MOST_NUMBERS = 10_000_000  # beliefs played to see what unknown starts do


def unknown_starts(sketch: Sketch) -> Iterator[Finding]:
    """Starts that nobody knows and that would move the end or turn the vote."""
    place = sketch.assembly.place
    unknown = np.array([place[person] for person in sketch.rehearsal.unknown_starts], dtype=np.intp)
    unknown = unknown[sketch.present[unknown]]
    if not len(unknown):
        return
    ends = _ends_at_the_extremes(sketch, unknown)
    if ends is None:
        yield _not_worked_out(sketch, unknown)
        return
    low, high = (float(beliefs[sketch.here].mean()) for beliefs in ends)
    turns = _turns_vote(sketch, ends)
    if not turns and high - low <= sketch.rehearsal.tolerance:
        return
    name = sketch.names(unknown)
    those = "that start" if len(unknown) == 1 else "those starts"
    says = f"Where {name} start{ending(len(unknown))} is not known"
    if len(unknown) == sketch.present.sum():
        says = "Nobody's start is known" if len(unknown) > 1 else f"The start of {name} is not known"
    matter = "and the vote hangs on it" if turns else "and it matters"
    middle = sketch.number(sketch.question.middle)
    scale = f"{sketch.number(sketch.question.low)} to {sketch.number(sketch.question.high)}"
    yield Finding(
        kind="unknown-starts",
        says=f"{says}, {matter}.",
        why=f"The sketch takes {middle}, the middle of the scale; over the whole scale, {scale}, {those} would move"
        f" the average {sketch.at_end} from {sketch.number(low)} to {sketch.number(high)}"
        f"{' and turn the vote' if turns else ''}.",
        people=sketch.ids(unknown),
        figures={"people": len(unknown), "lowest": low, "highest": high, "turns_vote": float(turns)},
    )


def _ends_at_the_extremes(sketch: Sketch, unknown: Indices) -> Floats | None:
    """(2, n) beliefs at the plan's end with all unknown starts at the low, then at the high end of the scale."""
    extremes = np.stack([sketch.starts] * 2)
    extremes[:, unknown] = [[sketch.question.low], [sketch.question.high]]
    if sketch.final_map is not None:
        return extremes @ sketch.final_map.T
    if (sketch.end + 1) * extremes.size > MOST_NUMBERS:
        return None
    process, question = sketch.assembly.process, sketch.question
    return play(process, extremes.T, sketch.end, question.hearing_range, question.width)[-1].T


def _turns_vote(sketch: Sketch, ends: Floats) -> bool:
    if sketch.electorate is None:
        return False
    # Also where there is no quorum yet: it may be there on the evening.
    rule = replace(sketch.scenario.ballot, quorum=None)
    passes = Electorate(sketch.question, rule, sketch.variant.people).tally(np.vstack([ends, sketch.ends])).passes
    return bool(passes.any() and not passes.all())


def _not_worked_out(sketch: Sketch, unknown: Indices) -> Finding:
    return Finding(
        kind="unknown-starts",
        says=f"{count(len(unknown), 'start is', 'starts are')} not known.",
        why=f"The sketch takes {sketch.number(sketch.question.middle)}, the middle of the scale, for them; with so"
        " many people and rounds it is not worked out how much hangs on that.",
        people=sketch.ids(unknown),
        figures={"people": len(unknown)},
    )


def absent(sketch: Sketch) -> Iterator[Finding]:
    """People who are not there, and what that takes away."""
    people = np.flatnonzero(~sketch.present)
    if not len(people):
        return
    ballots = sum(sketch.variant.people[at].ballots for at in people.tolist())
    votes = sketch.electorate is not None and ballots > 0
    missing = f", and {count(ballots, 'vote is', 'votes are')} missing" if votes else ""
    network = sketch.assembly.process.network
    lost = network.present[network.listener] & ~network.present[network.source]
    heeders = np.unique(network.listener[lost])
    why = "Nobody present gives them points, so the talk of the others is the same without them."
    if not sketch.present.any():
        why = "So nobody is there to talk, and no view moves."
    elif len(heeders):
        all_own = all(stage.unheard == "own" for stage in sketch.variant.plan.stages)
        whither = "stay with the own view" if all_own else "go to the own view or to those still heard"
        verb = "give" if len(heeders) != 1 else "gives"
        why = f"{sketch.names(heeders)} {verb} points to somebody absent; in the sketch these {whither}."
    yield Finding(
        kind="absent",
        says=f"{sketch.names(people)} {is_are(len(people))} absent and heard by nobody{missing}.",
        why=why,
        people=sketch.ids(people),
        figures={"people": len(people), "ballots": float(ballots), "hear_them": len(heeders)},
    )
