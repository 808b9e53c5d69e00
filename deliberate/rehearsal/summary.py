"""A rehearsal told to people: figures first, then what stands out, then the caution."""

from __future__ import annotations

import math
import textwrap
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import accumulate

import numpy as np
from numpy.typing import NDArray

from deliberate.rehearsal.assemble import assemble
from deliberate.rehearsal.ballots import Electorate
from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.rehearse import COMMON_VIEW, rounds_to_agree_among
from deliberate.rehearsal.results import Finding, Floats, Rehearsal, Tally
from deliberate.rehearsal.suggestions import words
from deliberate.rehearsal.words import agreement_test, amount, count, number, numbers, with_unit
from deliberate.scenario.values import Question, Scenario, Variant

CAUTION = "A sketch, not a forecast of people."
COLUMNS = 79
SHOWN_STAGES = 8
SHOWN_SWING = 4
OUTCOME = "vote"


def summary(scenario: Scenario, rehearsal: Rehearsal, findings: Sequence[Finding]) -> str:
    """The rehearsal for people: figures first, then what stands out, then the caution. Made for 80 columns."""
    variant = pick_variant(scenario, rehearsal.variant)
    question = pick_question(scenario, rehearsal.question)
    sketch = _Sketch(scenario, variant, question, rehearsal)
    parts = [
        sketch.heading(),
        sketch.table(),
        sketch.facts(),
        _standing_out(findings, variant),
        _wrapped(f"Note: {note}." for note in rehearsal.notes),
        CAUTION,
    ]
    return "\n\n".join(part for part in parts if part) + "\n"


@dataclass(frozen=True, eq=False)
class _Sketch:
    """What the summary's parts look at. Figures are those of the people who are present."""

    scenario: Scenario
    variant: Variant
    question: Question
    rehearsal: Rehearsal

    @cached_property
    def present(self) -> NDArray[np.bool_]:
        people = self.variant.people
        return np.fromiter((person.present for person in people), bool, len(people))

    def heading(self) -> str:
        variant = self.variant
        people = count(len(variant.people), "person", "people")
        if not self.present.all():
            people += f", {amount(int(self.present.sum()))} present"
        rounds = count(variant.plan.rounds, "round", "rounds")
        again = ", again and again" if variant.plan.afterwards == "repeat" else ""
        setup = f"{variant.name}: {people}; {rounds} ({_stages(variant)}){again}."
        return _wrapped([self.scenario.title, self.question.text, self._scale(), setup])

    def _scale(self) -> str:
        question = self.question
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

    def table(self) -> str:
        """Beliefs and the ballot at the start, after each stage, and in the long run; below each other where they
        do not fit side by side."""
        moments = list(self._moments())
        names = [["", *(name for name, _ in moments)]]
        lists = [beliefs for _, beliefs in moments]
        views, votes = self._view_columns(lists), self._vote_columns(lists)
        side_by_side = _aligned(names + views + votes)
        if not votes or max(map(len, side_by_side.splitlines())) <= COLUMNS:
            return side_by_side
        return f"{_aligned(names + views)}\n\n{_aligned(names + votes)}"

    def _view_columns(self, lists: Sequence[Floats]) -> list[list[str]]:
        figures = numbers([figure for beliefs in lists for figure in self._figures(beliefs)], self.question)
        return [[head, *figures[at::4]] for at, head in enumerate(("low", "mean", "high", "spread"))]

    def _vote_columns(self, lists: Sequence[Floats]) -> list[list[str]]:
        if self.question.pass_mark is None or not self.variant.people:
            return []
        electorate = Electorate(self.question, self.scenario.ballot, self.variant.people)
        tallies = list(electorate.tally(np.array(lists)))
        columns = [
            ["for", *(amount(tally.in_favour) for tally in tallies)],
            ["against", *(amount(tally.against) for tally in tallies)],
            ["abstain", *(amount(tally.abstain) for tally in tallies)],
        ]
        if self.question.objection_mark is not None:
            columns.append(["object", *(amount(tally.objecting) for tally in tallies)])
        return [*columns, [OUTCOME, *map(_outcome, tallies)]]

    def _moments(self) -> Iterator[tuple[str, Floats]]:
        rounds = self.rehearsal.rounds
        ends = list(accumulate(stage.rounds for stage in self.variant.plan.stages))
        last = len(rounds) - 1
        shown = sorted({0, *_thinned([end for end in ends if end < last]), last})
        for after in shown:
            yield "Start" if after == 0 else f"Round {amount(after)}", rounds[after]
        cycle = self.rehearsal.cycle
        if self.rehearsal.limit is not None:
            yield "Long run", self.rehearsal.limit
        elif cycle is not None and cycle.period <= SHOWN_SWING:
            for turn, beliefs in enumerate(cycle.beliefs, 1):
                yield f"Swing {turn} of {cycle.period}", beliefs
        else:
            yield "Average", self.rehearsal.long_run_average

    def _figures(self, beliefs: Floats) -> list[float]:
        """Lowest, mean, highest and spread; nothing where nobody is present."""
        held = beliefs[self.present]
        if len(held) == 0:
            return [math.nan] * 4
        low, high = float(held.min()), float(held.max())
        return [low, float(held.mean()), high, high - low]

    def facts(self) -> str:
        rehearsal = self.rehearsal
        facts = [("Settles", self._settling())]
        agreed = self._rounds_to_agree()
        if agreed is not None:
            within = with_unit(rehearsal.tolerance, self.question)
            when = "from the start" if agreed == 0 else f"from round {amount(agreed)} on"
            facts.append(("Agree", f"within {within} of each other {when}"))
        if rehearsal.rounds_to_halve is not None:
            facts.append(("Pace", _halving(rehearsal.rounds_to_halve)))
        facts += [("Voices", voices) for voices in self._voices()]
        if rehearsal.ballot is not None:
            quorum = "" if rehearsal.ballot[0].quorum_met else "; too few are present for the quorum"
            facts.append(("Rule", self.scenario.ballot.name + quorum))
        facts += [("Agreement", verdicts) for verdicts in self._verdicts()]
        return _labelled(facts)

    def _settling(self) -> str:
        limit = self.rehearsal.limit
        if limit is None:
            cycle = self.rehearsal.cycle
            return (
                f"no, views keep swinging with period {amount(cycle.period)}" if cycle else "no, views keep swinging"
            )
        held = limit[self.present]
        if len(held) == 0:
            return "nobody is present"
        low, high = float(held.min()), float(held.max())
        if high - low <= COMMON_VIEW * self.question.width:
            return f"yes, on {with_unit(float(held.mean()), self.question)}"
        return f"yes, on views from {number(low, self.question)} to {with_unit(high, self.question, beside=low)}"

    def _rounds_to_agree(self) -> int | None:
        """Of those present."""
        assembly = assemble(self.variant, self.question)
        return rounds_to_agree_among(np.flatnonzero(self.present), assembly, self.question, self.rehearsal)

    def _voices(self) -> Iterator[str]:
        """How concentrated the result is among those present; the absent keep their own views and carry nothing."""
        shares = self.rehearsal.influence[self.present]
        if shares.sum() > 0:
            voices = f"{shares.sum() ** 2 / (shares @ shares):.1f}".removesuffix(".0")
            heard = "voice" if voices == "1" else "equal voices"
            yield f"carried as if by {voices} {heard}; {count(len(shares), 'person is', 'people are')} present"

    def _verdicts(self) -> Iterator[str]:
        """One line per agreement test: its verdict at the start, at the end, and in the long run."""
        rehearsal = self.rehearsal
        for place, test in enumerate(self.question.agreement):
            moments = {
                "at the start": rehearsal.agreement[0],
                f"after round {len(rehearsal.rounds) - 1}": rehearsal.agreement[-1],
            }
            if rehearsal.agreement_at_limit is not None:
                moments["in the long run"] = rehearsal.agreement_at_limit
            verdicts = [f"{_VERDICTS[tests[place].verdict]} {when}" for when, tests in moments.items()]
            yield f"{agreement_test(test, self.question)}: {', '.join(verdicts)}"


_VERDICTS = {"agreement": "agreement", "disagreement": "disagreement", "neither": "none"}


def _stages(variant: Variant) -> str:
    """The stages by name, with their rounds where there are several."""
    stages = variant.plan.stages
    if len(stages) == 1:
        return stages[0].name
    named = [f"{stage.name} {amount(stage.rounds)}" for stage in stages[:SHOWN_STAGES]]
    more = len(stages) - len(named)
    return ", ".join([*named, count(more, "more stage", "more stages")] if more else named)


def _outcome(tally: Tally) -> str:
    if tally.passes:
        return "passes"
    return "fails" if tally.quorum_met else "no quorum"


def _thinned(ends: Sequence[int]) -> Sequence[int]:
    """At most SHOWN_STAGES of them, evenly."""
    step = -(-len(ends) // SHOWN_STAGES) or 1
    return ends[step - 1 :: step]


def _halving(rounds: float) -> str:
    """How fast views near the long run, once the first rounds are over."""
    if rounds < 0.95:
        return "every round more than halves the rest of the way"
    figure = f"{rounds:,.1f}".removesuffix(".0") if rounds < 100 else f"{rounds:,.0f}"
    return (
        f"the rest of the way halves every {figure} rounds"
        if figure != "1"
        else "every round halves the rest of the way"
    )


def _standing_out(findings: Sequence[Finding], variant: Variant) -> str:
    lines = ["What stands out"] if findings else []
    for place, finding in enumerate(findings, 1):
        lines.append(_wrap(finding.says, f"{place:3}. "))
        lines.append(_wrap(finding.why, " " * 5))
        if finding.suggestion is not None:
            lines.append(_wrap(f"To try: {words(finding.suggestion, variant)}", " " * 5))
    return "\n".join(lines)


def _aligned(columns: Sequence[Sequence[str]]) -> str:
    """Columns two spaces apart, figures to the right, words to the left."""
    widths = [max(map(len, column)) for column in columns]
    to_left = [column[0] in ("", OUTCOME) for column in columns]
    lines = []
    for row in zip(*columns, strict=True):
        cells = zip(row, widths, to_left, strict=True)
        lines.append("  ".join(cell.ljust(width) if left else cell.rjust(width) for cell, width, left in cells))
    return "\n".join(line.rstrip() for line in lines)


def _labelled(facts: Sequence[tuple[str, str]]) -> str:
    width = max(len(label) for label, _ in facts) + 2
    return "\n".join(_wrap(text, label.ljust(width)) for label, text in facts)


def _wrapped(texts: Iterable[str]) -> str:
    return "\n".join(_wrap(text) for text in texts)


def _wrap(text: str, before: str = "") -> str:
    """`text` in lines of at most COLUMNS, with `before` in front of the first and as much room before the others."""
    return textwrap.fill(
        text, COLUMNS, initial_indent=before, subsequent_indent=" " * len(before), break_on_hyphens=False
    )
