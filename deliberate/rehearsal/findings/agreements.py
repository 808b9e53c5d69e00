"""The agreement tests of the question, and whether an agreement is that of an average: agreement."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from deliberate.rehearsal.findings.sketch import Sketch, is_are, since
from deliberate.rehearsal.results import Agreement, Finding
from deliberate.rehearsal.words import agreement_test, amount, in_words
from deliberate.scenario.values import AgreementTest

FEW = 0.25  # of the starts


def agreement(sketch: Sketch) -> Iterator[Finding]:
    """One finding for each test."""
    if not sketch.rehearsal.agreement or not len(sketch.voters):
        return
    for at, test in enumerate(sketch.question.agreement):
        series = [tests[at] for tests in sketch.rehearsal.agreement[: sketch.end + 1]]
        first, last = series[0], series[-1]
        changed = next((k for k in range(len(series), 0, -1) if series[k - 1].verdict != last.verdict), 0)
        came_together = first.verdict != "agreement" and last.verdict == "agreement"
        yield Finding(
            kind="agreement",
            says=_says_agreement(sketch, test, first, last, changed),
            why=_why_agreement(sketch, last, _among_few(sketch) if came_together else None),
            people=sketch.ids(sketch.voters),
            figures={"at_start": first.figure, "at_end": last.figure, "since": changed},
        )


def _says_agreement(sketch: Sketch, test: AgreementTest, first: Agreement, last: Agreement, changed: int) -> str:
    asked = agreement_test(test, sketch.question)
    name = f"{asked} test" if test.test == "rand-ucla" else f"Agreement test, {asked}"
    now, before = _verdict(test, last), _verdict(test, first)
    if changed == 0:
        return f"{name}: {now} from the start to {_end(sketch)}."
    if first.verdict == last.verdict:
        return f"{name}: {now} at the start and again {since(changed)}."
    return f"{name}: {before} at the start, {now} {since(changed)}."


def _end(sketch: Sketch) -> str:
    return sketch.at_end.removeprefix("at ").removeprefix("after ")


def _verdict(test: AgreementTest, judged: Agreement) -> str:
    if test.test == "rand-ucla":
        return {"agreement": "agreement", "disagreement": "disagreement", "neither": "neither"}[judged.verdict]
    return "met" if judged.verdict == "agreement" else "not met"


def _why_agreement(sketch: Sketch, last: Agreement, among_few: tuple[int, float, float] | None) -> str:
    figure = _figure(sketch, last)
    if among_few is None:
        return f"{figure}."
    near, low, high = among_few
    starts = "nobody" if near == 0 else f"only {amount(near)}"
    ends = sketch.number(low), sketch.number(high)
    where = f"at {ends[0]}" if ends[0] == ends[1] else f"between {ends[0]} and {ends[1]}"
    return (
        f"{figure}; but all are then {where}, where {starts} of {amount(len(sketch.voters))} started, so it may be"
        " the calm of an average."
    )


def _figure(sketch: Sketch, last: Agreement) -> str:
    when = sketch.at_end[0].upper() + sketch.at_end[1:]
    match last.test.test:
        case "rand-ucla":
            outside = in_words(int(last.figure), "rating lies", "ratings lie")
            return f"{when} {outside} outside the third of the scale that holds the median"
        case "share-within":
            within, voters = round(last.figure * len(sketch.voters)), amount(len(sketch.voters))
            who = f"{amount(within)} of {voters} {is_are(within)}" if within else f"nobody of {voters} is"
            return f"{when} {who} within"
        case "quartile-range":
            return f"{when} the quartile range is {sketch.number(last.figure, beside=last.test.at_most)}"
        case "spread":
            return f"{when} the spread is {sketch.number(last.figure, beside=last.test.at_most)}"


def _among_few(sketch: Sketch) -> tuple[int, float, float] | None:
    """How many started where all end, and where that is; None where many did, or where few started on one side."""
    ends, starts = sketch.ends[sketch.voters], sketch.starts[sketch.voters]
    low, high = float(ends.min()), float(ends.max())
    below, above = np.count_nonzero(starts < low), np.count_nonzero(starts > high)
    near, few = len(starts) - int(below + above), FEW * len(starts)
    return (near, low, high) if near < few <= min(below, above) else None
