"""Edits on questions. They concern all variants, because a meeting has one list of questions."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from fractions import Fraction
from typing import Any, Literal

from msgspec import UNSET

from deliberate.errors import DeliberateError
from deliberate.scenario.access import question_index, question_with_id
from deliberate.scenario.edits._common import as_line, as_number, changed, checked, inserted, moved, replaced
from deliberate.scenario.ids import fresh_id
from deliberate.scenario.shape import shown
from deliberate.scenario.values import AgreementTest, FrozenDict, Person, Poll, Question, Scenario

Numbers = Literal["keep", "rescale"]
Change = Callable[[float], float]

_LINES = ("text", "unit", "low_label", "high_label")
_FIGURES = ("pass_mark", "undecided", "objection_mark", "hearing_range", "truth")


def fresh_question_id(scenario: Scenario, text: str) -> str:
    """The id that `add_question` would give to a question of this text: its first words."""
    taken = {question.id for question in scenario.questions}
    return fresh_id(" ".join(text.split()[:4]), "question", taken)


def add_question(
    scenario: Scenario, text: str, *, low: float = 0.0, high: float = 1.0, at: int | None = None, **fields: Any
) -> Scenario:
    """Ask something more, on a scale from `low` to `high`; nobody's belief is known at first.

    `fields` are other fields of `Question`. It stands before place `at`, or last.
    """
    question = Question(
        id=fresh_question_id(scenario, text),
        text=as_line(text),
        low=as_number(low, "the low end", -math.inf),
        high=as_number(high, "the high end", -math.inf),
        **_tidied(fields),
    )
    return checked(scenario, questions=inserted(scenario.questions, at, question))


def change_question(scenario: Scenario, question: str, **fields: Any) -> Scenario:
    """Change fields of a question by name: text, unit, low_label, high_label, pass_mark, undecided,
    objection_mark, hearing_range, truth, agreement. The scale is changed by `set_scale`, the id stays."""
    if not fields.keys().isdisjoint(("id", "low", "high")):
        raise TypeError("the id of a question stays; its scale is changed by set_scale")
    index = question_index(scenario, question)
    after = changed(scenario.questions[index], **_tidied(fields))
    return checked(scenario, questions=replaced(scenario.questions, index, after))


def remove_question(scenario: Scenario, question: str) -> Scenario:
    """Drop a question with its beliefs, margins and polls. The last one stays."""
    index = question_index(scenario, question)
    if len(scenario.questions) == 1:
        raise DeliberateError("a meeting needs at least one question")
    left = _with_people(
        scenario,
        lambda person: changed(
            person, beliefs=_without(person.beliefs, question), margins=_without(person.margins, question)
        ),
    )
    return checked(
        left,
        questions=(*scenario.questions[:index], *scenario.questions[index + 1 :]),
        polls=tuple(poll for poll in scenario.polls if poll.question != question),
    )


def move_question(scenario: Scenario, question: str, to: int) -> Scenario:
    """Put a question at place `to` in the list."""
    return checked(scenario, questions=moved(scenario.questions, question_index(scenario, question), to))


def set_scale(
    scenario: Scenario, question: str, low: float, high: float, *, numbers: Numbers = "rescale"
) -> Scenario:
    """Let a question be answered from `low` to `high`.

    `rescale` moves every belief, margin, mark, range and poll to the same place on the new scale. `keep` leaves
    them as they are, and raises a DeliberateError where one of them does not fit. A RAND/UCLA test, which is made for
    a scale from 1 to 9 only, goes when the scale leaves it.
    """
    before = question_with_id(scenario, question)
    bottom, top = as_number(low, "the low end", -math.inf), as_number(high, "the high end", -math.inf)
    if bottom >= top:
        raise DeliberateError(
            f"a scale must go up: its low end {shown(bottom)} is not below its high end {shown(top)}"
        )
    if (bottom, top) == (before.low, before.high):
        return scenario
    if numbers == "keep":
        _require_fit(scenario, before, bottom, top)
        after = changed(before, low=bottom, high=top, agreement=_tests_for_any_scale(before))
        rest = scenario
    else:
        place, length = _proportions(before, bottom, top)
        after = _rescaled(changed(before, low=bottom, high=top), place, length)
        rest = _with_people(scenario, lambda person: _rescaled_person(person, question, place, length))
        rest = changed(rest, polls=tuple(_rescaled_poll(poll, question, place) for poll in rest.polls))
    return checked(
        scenario,
        questions=replaced(scenario.questions, question_index(scenario, question), after),
        variants=rest.variants,
        polls=rest.polls,
    )


def _proportions(question: Question, low: float, high: float) -> tuple[Change, Change]:
    """How a place on the question's scale, and a length along it, are written on the scale from low to high.

    In fractions of the decimals as they are written: 0.07 of 1 is 7 of 100, and an end stays an end.
    """
    old_low, new_low = _exact(question.low), _exact(low)
    stretch = (_exact(high) - new_low) / (_exact(question.high) - old_low)

    def place(value: float) -> float:
        return _double(new_low + (_exact(value) - old_low) * stretch)

    def length(value: float) -> float:
        return _double(_exact(value) * stretch)

    return place, length


def _exact(value: float) -> Fraction:
    return Fraction(repr(float(value)))


def _double(value: Fraction) -> float:
    try:
        return float(value)
    except OverflowError:
        raise DeliberateError("a number would be too large on the new scale") from None


def _rescaled(question: Question, place: Change, length: Change) -> Question:
    return changed(
        question,
        pass_mark=_maybe(place, question.pass_mark),
        objection_mark=_maybe(place, question.objection_mark),
        truth=_maybe(place, question.truth),
        undecided=length(question.undecided),
        hearing_range=_maybe(length, question.hearing_range),
        agreement=tuple(_rescaled_test(test, place, length) for test in _tests_for_any_scale(question)),
    )


def _tests_for_any_scale(question: Question) -> tuple[AgreementTest, ...]:
    return tuple(test for test in question.agreement if test.test != "rand-ucla")


def _rescaled_test(test: AgreementTest, place: Change, length: Change) -> AgreementTest:
    return changed(
        test,
        low=_maybe(place, test.low),
        high=_maybe(place, test.high),
        at_most=_maybe(length, test.at_most),
    )


def _rescaled_person(person: Person, question: str, place: Change, length: Change) -> Person:
    return changed(
        person,
        beliefs=_with_value(person.beliefs, question, place),
        margins=_with_value(person.margins, question, length),
    )


def _rescaled_poll(poll: Poll, question: str, place: Change) -> Poll:
    if poll.question != question:
        return poll
    return changed(poll, beliefs=FrozenDict({one: place(belief) for one, belief in poll.beliefs.items()}))


def _require_fit(scenario: Scenario, question: Question, low: float, high: float) -> None:
    """Raise DeliberateError where a belief or a mark does not lie within [low, high]."""
    numbers = [
        (f"the start of {person.shown_name}", person.beliefs.get(question.id))
        for variant in scenario.variants
        for person in variant.people
    ]
    numbers += [("the pass mark", question.pass_mark), ("the objection mark", question.objection_mark)]
    for poll in scenario.polls:
        if poll.question == question.id:
            numbers += [(f"the poll after round {poll.after_round}", belief) for belief in poll.beliefs.values()]
    for what, value in numbers:
        if value is not None and not low <= value <= high:
            raise DeliberateError(
                f"{what}, {shown(value)}, does not lie between {shown(low)} and {shown(high)}: "
                "change it first, or move all numbers to the new scale in proportion"
            )


def _with_people(scenario: Scenario, change: Callable[[Person], Person]) -> Scenario:
    variants = (changed(variant, people=tuple(map(change, variant.people))) for variant in scenario.variants)
    return changed(scenario, variants=tuple(variants))


def _tidied(fields: Mapping[str, Any]) -> dict[str, Any]:
    """Texts as single lines, figures as floats."""
    tidy = dict(fields)
    tidy |= {key: as_line(fields[key]) for key in _LINES if key in fields}
    tidy |= {key: float(fields[key]) for key in _FIGURES if fields.get(key) is not None}
    return tidy


def _maybe(change: Change, value: Any) -> Any:
    return value if value is None or value is UNSET else change(value)


def _with_value(entries: Mapping[str, float], key: str, change: Change) -> Mapping[str, float]:
    return FrozenDict({**entries, key: change(entries[key])}) if key in entries else entries


def _without(entries: Mapping[str, float], key: str) -> Mapping[str, float]:
    return FrozenDict({one: value for one, value in entries.items() if one != key}) if key in entries else entries
