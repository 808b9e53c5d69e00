"""Text for people on the command line: columns, labels and lines of 79 letters, and the heading of a meeting."""

from __future__ import annotations

import textwrap
from collections.abc import Collection, Iterable, Sequence
from itertools import accumulate

from deliberate.rehearsal.words import amount, count, number
from deliberate.scenario.values import Question, Scenario, Variant

CAUTION = "A sketch, not a forecast of people."
COLUMNS = 79
SHOWN_STAGES = 8


def heading(scenario: Scenario, variant: Variant, question: Question) -> str:
    """The meeting, its question with the scale and the marks, and the set-up."""
    people = count(len(variant.people), "person", "people")
    present = sum(person.present for person in variant.people)
    if present < len(variant.people):
        people += f", {amount(present)} present"
    rounds = count(variant.plan.rounds, "round", "rounds")
    again = ", again and again" if variant.plan.afterwards == "repeat" else ""
    setup = f"{variant.name}: {people}; {rounds} ({_stages(variant)}){again}."
    return wrapped([scenario.title, question.text, _scale(question), setup])


def _scale(question: Question) -> str:
    low, high = (
        number(value, question) + (f" ({label})" if label else "")
        for value, label in ((question.low, question.low_label), (question.high, question.high_label))
    )
    text = f"Scale in {question.unit}: {low} to {high}" if question.unit else f"Scale: {low} to {high}"
    if question.hearing_range is not None:
        text += f"; views more than {number(question.hearing_range, question)} apart are not heard"
    if question.pass_mark is None:
        return f"{text}."
    marks = [f"for above {number(question.pass_mark + question.undecided, question)}"]
    if question.undecided:
        marks.append(f"against below {number(question.pass_mark - question.undecided, question)}")
    if question.objection_mark is not None:
        marks.append(f"objections below {number(question.objection_mark, question)}")
    return f"{text}. Votes: {', '.join(marks)}."


def shown_rounds(variant: Variant, last: int) -> Sequence[int]:
    """The rounds worth a line of a table that ends with round `last`: the start, the ends of stages, the last."""
    ends = accumulate(stage.rounds for stage in variant.plan.stages)
    return sorted({0, *_thinned([end for end in ends if end < last]), last})


def _stages(variant: Variant) -> str:
    """The stages by name, with their rounds where there are several."""
    stages = variant.plan.stages
    if len(stages) == 1:
        return stages[0].name
    named = [f"{stage.name} {amount(stage.rounds)}" for stage in stages[:SHOWN_STAGES]]
    more = len(stages) - len(named)
    return ", ".join([*named, count(more, "more stage", "more stages")] if more else named)


def _thinned(ends: Sequence[int]) -> Sequence[int]:
    """At most SHOWN_STAGES of them, evenly."""
    step = -(-len(ends) // SHOWN_STAGES) or 1
    return ends[step - 1 :: step]


def aligned(columns: Sequence[Sequence[str]], to_left: Collection[str] = ("",)) -> str:
    """Columns two spaces apart, figures to the right; words, the columns headed by `to_left`, to the left."""
    widths = [max(map(len, column)) for column in columns]
    words = [column[0] in to_left for column in columns]
    lines = []
    for row in zip(*columns, strict=True):
        cells = zip(row, widths, words, strict=True)
        lines.append("  ".join(cell.ljust(width) if left else cell.rjust(width) for cell, width, left in cells))
    return "\n".join(line.rstrip() for line in lines)


def labelled(facts: Sequence[tuple[str, str]]) -> str:
    """One fact below the other, behind its label."""
    width = max(len(label) for label, _ in facts) + 2
    return "\n".join(wrap(text, label.ljust(width)) for label, text in facts)


def wrapped(texts: Iterable[str]) -> str:
    """Each text in lines of its own."""
    return "\n".join(wrap(text) for text in texts)


def wrap(text: str, before: str = "") -> str:
    """`text` in lines of at most COLUMNS, with `before` in front of the first and as much room before the others; a
    figure and its % stay together."""
    filled = textwrap.fill(
        text.replace(" %", "\N{NO-BREAK SPACE}%"),
        COLUMNS,
        initial_indent=before,
        subsequent_indent=" " * len(before),
        break_on_hyphens=False,
    )
    return filled.replace("\N{NO-BREAK SPACE}%", " %")
