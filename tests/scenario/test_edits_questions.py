"""Edits on questions."""

from __future__ import annotations

import math

import pytest
from harbour import DAYS, HARBOUR, LEVY
from hypothesis import given
from hypothesis import strategies as st
from strategies import SCALES, scenarios

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.access import question_with_id
from deliberate.scenario.values import AgreementTest, Person, Question, Scenario


def starts(scenario: Scenario, question: str) -> list[float | None]:
    return [person.beliefs.get(question) for variant in scenario.variants for person in variant.people]


def test_a_new_question_gets_an_id_from_its_first_words() -> None:
    after = edits.add_question(HARBOUR, "Should the quay\nbe paved before winter?", high=10, pass_mark=5, unit="m")
    expected = Question(
        id="should-the-quay-be",
        text="Should the quay be paved before winter?",
        low=0.0,
        high=10.0,
        pass_mark=5.0,
        unit="m",
    )
    assert after.questions == (LEVY, DAYS, expected)
    assert after.variants is HARBOUR.variants
    first = edits.add_question(HARBOUR, "Levy", at=0)
    assert [question.id for question in first.questions] == ["levy-2", "levy", "days"]
    assert edits.fresh_question_id(HARBOUR, "何日?") == "question"


def test_fields_change_by_name() -> None:
    after = edits.change_question(HARBOUR, "levy", text=" Raise\tit? ", undecided=1, truth=0, pass_mark=None)
    question = question_with_id(after, "levy")
    assert (question.text, question.undecided, question.truth, question.pass_mark) == ("Raise it?", 1.0, 0.0, None)
    assert all(isinstance(number, float) for number in (question.undecided, question.truth))
    assert after.questions[1] is DAYS
    assert edits.change_question(HARBOUR, "levy", pass_mark=0.5) is HARBOUR
    with pytest.raises(TypeError, match="set_scale"):
        edits.change_question(HARBOUR, "levy", high=2)


def test_a_removed_question_takes_beliefs_margins_and_polls_with_it() -> None:
    after = edits.remove_question(HARBOUR, "levy")
    assert after.questions == (DAYS,)
    assert starts(after, "levy") == [None] * 7
    assert starts(after, "days") == starts(HARBOUR, "days")
    assert [poll.question for poll in after.polls] == ["days"]
    tomas = after.variants[0].people[1]
    assert tomas.margins == {"days": 1.0}
    assert after.variants[0].people[2] is HARBOUR.variants[0].people[2]  # had no answer to it
    with pytest.raises(DeliberateError, match="at least one question"):
        edits.remove_question(after, "days")


def test_questions_can_be_put_in_another_order() -> None:
    assert edits.move_question(HARBOUR, "days", 0).questions == (DAYS, LEVY)
    assert edits.move_question(HARBOUR, "levy", 99).questions == (DAYS, LEVY)
    assert edits.move_question(HARBOUR, "levy", 0) is HARBOUR


def test_a_longer_scale_takes_all_numbers_along() -> None:
    after = edits.set_scale(HARBOUR, "days", 0, 80)  # from 1 to 9: ten times as long, and moved
    assert starts(after, "days") == [None, 20.0, 80.0, None, None, 20.0, 80.0]
    tomas = after.variants[0].people[1]
    assert tomas.margins == {"levy": 0.1, "days": 10.0}
    assert tomas.beliefs["levy"] == 0.2
    question = question_with_id(after, "days")
    assert (question.undecided, question.hearing_range, question.truth) == (5.0, 40.0, 50.0)
    assert question.agreement == (  # RAND/UCLA needs a scale from 1 to 9
        AgreementTest(test="share-within", low=40.0, high=80.0, at_least="3/4"),
        AgreementTest(test="spread", at_most=20.0),
    )
    assert [dict(poll.beliefs) for poll in after.polls] == [{"ines": 0.6, "wei": 0.4}, {"wei": 40.0}]
    assert after.questions[0] is LEVY


def test_decimals_stay_what_they_were() -> None:
    after = edits.set_belief(HARBOUR, "ines", "levy", 0.07, variant="As it stands")
    after = edits.set_scale(after, "levy", 0, 100)
    assert starts(after, "levy")[:2] == [7.0, 20.0]  # 0.07 * 100 is 7.000000000000001 in doubles
    question = question_with_id(after, "levy")
    assert (question.pass_mark, question.objection_mark) == (50.0, 10.0)
    assert starts(edits.set_scale(after, "levy", 0, 1), "levy")[:2] == [0.07, 0.2]


def test_numbers_can_be_kept_where_they_fit() -> None:
    after = edits.set_scale(HARBOUR, "days", 0, 10, numbers="keep")
    assert starts(after, "days") == starts(HARBOUR, "days")
    assert after.variants is HARBOUR.variants
    assert (question_with_id(after, "days").low, question_with_id(after, "days").high) == (0.0, 10.0)
    assert [test.test for test in question_with_id(after, "days").agreement] == ["share-within", "spread"]


@pytest.mark.parametrize(
    ("question", "low", "high", "said"),
    [
        ("days", 1, 8, "the start of Noor, 9, does not lie between 1 and 8"),
        ("levy", 0.6, 1, "the start of Tomás, 0.2, does not lie between 0.6 and 1"),
        ("levy", 0.15, 1, "the objection mark, 0.1, does not lie"),
        ("levy", 0.0, 0.45, "the start of Ines, 0.7, does not lie"),
    ],
)
def test_what_does_not_fit_a_scale_is_named(question, low, high, said) -> None:
    with pytest.raises(DeliberateError, match=said):
        edits.set_scale(HARBOUR, question, low, high, numbers="keep")


def test_marks_and_polls_must_fit_a_scale_too() -> None:
    bare = edits.set_beliefs(HARBOUR, dict.fromkeys(("ines", "tomas"), None), "levy", variant=None)
    with pytest.raises(DeliberateError, match=r"the pass mark, 0\.5, does not lie between 0 and 0\.4"):
        edits.set_scale(bare, "levy", 0, 0.4, numbers="keep")
    bare = edits.change_question(bare, "levy", pass_mark=None)
    with pytest.raises(DeliberateError, match=r"the poll after round 2, 0\.6, does not lie between 0 and 0\.4"):
        edits.set_scale(bare, "levy", 0, 0.4, numbers="keep")


@pytest.mark.parametrize(
    ("low", "high", "said"),
    [
        (1, 1, "a scale must go up: its low end 1 is not below its high end 1"),
        (2, 1, "its low end 2 is not below its high end 1"),
        (0, math.inf, "the high end must be a finite number"),
        (-1e308, 1e308, "double range"),
    ],
)
def test_scales_that_cannot_be(low, high, said) -> None:
    with pytest.raises(DeliberateError, match=said):
        edits.set_scale(HARBOUR, "days", low, high)


def test_a_number_far_off_the_scale_may_not_fit_on_a_longer_one() -> None:
    far = edits.change_question(HARBOUR, "levy", truth=1e305)
    with pytest.raises(DeliberateError, match="too large on the new scale"):
        edits.set_scale(far, "levy", 0, 1e6)


@pytest.mark.parametrize(
    ("edit", "said"),
    [
        (lambda: edits.change_question(HARBOUR, "levy", pass_mark=2), "scale of"),
        (lambda: edits.change_question(HARBOUR, "levy", text=""), "questions"),
        (lambda: edits.change_question(HARBOUR, "levy", undecided=-1), "questions"),
        (lambda: edits.change_question(HARBOUR, "levy", agreement=(AgreementTest(test="spread"),)), "at_most"),
        (lambda: edits.change_question(HARBOUR, "tax", text="a"), 'no question with the id "tax"'),
        (lambda: edits.add_question(HARBOUR, " "), "questions"),
        (lambda: edits.add_question(HARBOUR, "Q", low=3, high=2), "must be more than low"),
    ],
)
def test_what_cannot_be_done_is_said_in_words(edit, said) -> None:
    with pytest.raises(DeliberateError, match=said):
        edit()


@given(scenarios(), st.sampled_from(SCALES), st.data())
def test_every_number_stays_at_its_place_on_the_scale(scenario, scale, data) -> None:
    before = data.draw(st.sampled_from(scenario.questions))
    after = edits.set_scale(scenario, before.id, *scale)
    new = question_with_id(after, before.id)
    assert (new.low, new.high) == scale

    def place(value: float, question: Question) -> float:
        return (value - question.low) / question.width

    pairs = list(zip(starts(scenario, before.id), starts(after, before.id), strict=True))
    pairs.append((before.pass_mark, new.pass_mark))
    for old_value, new_value in pairs:
        assert (old_value is None) == (new_value is None)
        if old_value is not None:
            assert place(new_value, new) == pytest.approx(place(old_value, before), abs=1e-8)
            assert new.low <= new_value <= new.high
            if old_value in (before.low, before.high):
                assert new_value in scale


@given(scenarios(), st.data())
def test_there_and_back_gives_the_same_places(scenario, data) -> None:
    question = data.draw(st.sampled_from(scenario.questions))
    there = edits.set_scale(scenario, question.id, question.low * 2 - 3, question.high * 2 - 3)
    back = edits.set_scale(there, question.id, question.low, question.high)

    def numbers(person: Person) -> list[float]:
        return [*person.beliefs.values(), *person.margins.values()]

    for variant, again in zip(scenario.variants, back.variants, strict=True):
        for person, same in zip(variant.people, again.people, strict=True):
            assert numbers(same) == pytest.approx(numbers(person), rel=1e-12, abs=1e-12 * question.width)
