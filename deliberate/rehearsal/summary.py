"""A rehearsal told to people: figures first, then what stands out, then the caution."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from deliberate.rehearsal.assemble import assemble
from deliberate.rehearsal.ballots import Electorate
from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.page import CAUTION, COLUMNS, aligned, heading, labelled, shown_rounds, wrap, wrapped
from deliberate.rehearsal.rehearse import COMMON_VIEW, rounds_to_agree_among
from deliberate.rehearsal.results import Finding, Floats, Rehearsal, Tally
from deliberate.rehearsal.suggestions import words
from deliberate.rehearsal.words import agreement_test, amount, count, number, numbers, with_unit
from deliberate.scenario.values import Question, Scenario, Variant

SHOWN_SWING = 4
OUTCOME = "vote"
WORDS = ("", OUTCOME)  # columns of words


def summary(scenario: Scenario, rehearsal: Rehearsal, findings: Sequence[Finding]) -> str:
    """The rehearsal for people: figures first, then what stands out, then the caution. Made for 80 columns."""
    variant = pick_variant(scenario, rehearsal.variant)
    question = pick_question(scenario, rehearsal.question)
    sketch = _Sketch(scenario, variant, question, rehearsal)
    parts = [
        heading(scenario, variant, question),
        sketch.table(),
        sketch.facts(),
        _standing_out(findings, variant),
        wrapped(f"Note: {note}." for note in rehearsal.notes),
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

    def table(self) -> str:
        """Beliefs and the ballot at the start, after each stage, and in the long run; below each other where they
        do not fit side by side."""
        moments = list(self._moments())
        names = [["", *(name for name, _ in moments)]]
        lists = [beliefs for _, beliefs in moments]
        views, votes = self._view_columns(lists), self._vote_columns(lists)
        side_by_side = aligned(names + views + votes, WORDS)
        if not votes or max(map(len, side_by_side.splitlines())) <= COLUMNS:
            return side_by_side
        return f"{aligned(names + views, WORDS)}\n\n{aligned(names + votes, WORDS)}"

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
        for after in shown_rounds(self.variant, len(rounds) - 1):
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
        if rehearsal.rounds_to_halve is not None and self.present.sum() > 1:
            facts.append(("Pace", _halving(rehearsal.rounds_to_halve)))
        facts += [("Voices", voices) for voices in self._voices()]
        if rehearsal.ballot is not None:
            quorum = "" if rehearsal.ballot[0].quorum_met else "; too few are present for the quorum"
            facts.append(("Rule", self.scenario.ballot.name + quorum))
        facts += [("Agreement", verdicts) for verdicts in self._verdicts()]
        return labelled(facts)

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
        """Of those present; one person alone has nobody to agree with."""
        if self.present.sum() < 2:
            return None
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


def _outcome(tally: Tally) -> str:
    if tally.passes:
        return "passes"
    return "fails" if tally.quorum_met else "no quorum"


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
        lines.append(wrap(finding.says, f"{place:3}. "))
        lines.append(wrap(finding.why, " " * 5))
        if finding.suggestion is not None:
            lines.append(wrap(f"To try: {words(finding.suggestion, variant)}", " " * 5))
    return "\n".join(lines)
