"""In which draws a finding of the sketch holds, as far as that can be told quickly.

What follows from who is present and which arrows there are holds in all draws, since a drawn share is never 0.
Everything else is looked at in each draw by the rule of its family in `findings`. Slow pace and bridges are not
looked at: they would need the spectrum of every draw.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from deliberate.dynamics.network import Mask
from deliberate.dynamics.progress import never
from deliberate.rehearsal import agreement
from deliberate.rehearsal.doubt_draws import Chunk, GuessedMeeting
from deliberate.rehearsal.findings.sketch import Sketch
from deliberate.rehearsal.findings.voices import HALF, LARGE_OF_TWO, MORE_THAN_EQUAL
from deliberate.rehearsal.results import Finding, Floats

Check = Callable[[Chunk], Mask]

ALWAYS = frozenset({"fixed-view", "unheard", "hears-nobody", "quorum", "unknown-starts", "absent"})
WITHOUT_HEARING_RANGE = frozenset({"outside", "closed-groups"})


def by_structure(sketch: Sketch, finding: Finding) -> bool:
    """It holds whatever the guesses are, as long as it is these people and these arrows."""
    if finding.kind in ALWAYS:
        return True
    if sketch.question.hearing_range is not None or finding.kind not in WITHOUT_HEARING_RANGE:
        return False
    return finding.kind == "outside" or not sketch.met


def check_of(meeting: GuessedMeeting, finding: Finding, place: int) -> Check | None:
    """What tells in which draws (d,) of a chunk the finding holds; None where nothing does.

    place: which of the findings of its kind this is.
    """
    sketch = meeting.sketch
    tolerance = sketch.rehearsal.tolerance
    hearing = sketch.question.hearing_range is not None
    match finding.kind:
        case "swing":
            return lambda chunk: ~chunk.settles
        case "settles":
            return lambda chunk: chunk.settles & (_spread(sketch, chunk.long_run) <= tolerance)
        case "lasting-gap":
            return lambda chunk: chunk.settles & (_spread(sketch, chunk.long_run) > tolerance)
        case "unfinished":
            return lambda chunk: _unfinished(sketch, chunk)
        case "closed-groups" if not hearing:
            return lambda chunk: _group_gap(sketch, chunk) > tolerance
        case "vote":
            return lambda chunk: _passes(chunk) == (finding.figures["passes"] > 0)
        case "knife-edge" if not hearing:
            return lambda chunk: _turned(meeting, finding, chunk)
        case "carries" if meeting.fate is not None:
            return lambda chunk: _carried(meeting, finding, chunk)
        case "agreement":
            return lambda chunk: _same_verdict(sketch, place, chunk)
        case _:
            return None


def _spread(sketch: Sketch, beliefs: Floats) -> Floats:
    """(d,) highest minus lowest of beliefs (n, d) of those who take part."""
    return np.ptp(beliefs[sketch.here], axis=0) if len(sketch.here) else np.zeros(beliefs.shape[-1])


def _unfinished(sketch: Sketch, chunk: Chunk) -> Mask:
    """As in `findings.settling`: too wide apart on the way to a common view, or somebody away from the end."""
    tolerance, ends = sketch.rehearsal.tolerance, chunk.played[-1]
    common = _spread(sketch, chunk.long_run) <= tolerance
    away = np.abs(chunk.long_run - ends)[sketch.here].max(axis=0, initial=0.0) > tolerance
    return chunk.settles & np.where(common, _spread(sketch, ends) > tolerance, away)


def _group_gap(sketch: Sketch, chunk: Chunk) -> Floats:
    return np.ptp([chunk.long_run[group].mean(axis=0) for group in sketch.closed], axis=0)


def _passes(chunk: Chunk) -> Mask:
    """(d,) at the plan's end."""
    return chunk.by_round(chunk.tallies.passes)[-1]


def _turned(meeting: GuessedMeeting, finding: Finding, chunk: Chunk) -> Mask:
    """The same change of the same start gives the other outcome."""
    question = meeting.sketch.question
    starts = chunk.starts.copy()
    person = meeting.sketch.assembly.place[finding.people[0]]
    starts[person] = np.clip(starts[person] + finding.figures["change"], question.low, question.high)
    played = meeting.talk(chunk.rows, starts, never).play(meeting.sketch.plan_rounds)
    return meeting.tallies(played[-1:]).passes != _passes(chunk)


def _carried(meeting: GuessedMeeting, finding: Finding, chunk: Chunk) -> Mask:
    """The same people's starts count for more together than the bar each had to pass in the sketch."""
    sketch, equal = meeting.sketch, finding.figures["equal"]
    bar = len(finding.people) * (min(MORE_THAN_EQUAL * equal, HALF) if equal < HALF else LARGE_OF_TWO)
    fate, low, width = meeting.fate, sketch.question.low, sketch.question.width
    # Beliefs are linear in the starts: with these at the top and all others at the bottom, the view is their share.
    starts = np.full_like(chunk.starts, low)
    starts[[sketch.assembly.place[person] for person in finding.people]] = low + width
    talk = meeting.talk(chunk.rows, starts, never)
    end = fate.of(talk) if sketch.firmness.any() else chunk.end
    long_run, _ = end.long_run(talk.play(fate.rounds_before)[-1])
    return (long_run[sketch.present].mean(axis=0) - low) / width > bar


def _same_verdict(sketch: Sketch, place: int, chunk: Chunk) -> Mask:
    wanted = sketch.rehearsal.agreement[sketch.end][place].verdict
    judged = agreement.judge(sketch.question, sketch.variant.people, np.ascontiguousarray(chunk.played[-1].T))
    return np.array([tests[place].verdict == wanted for tests in judged], dtype=bool)
