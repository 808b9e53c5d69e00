"""Tests of agreement over the rounds, and the calm of an average."""

from __future__ import annotations

import pytest
from meetings import meeting
from telling import all_told, kinds, talk, told

from deliberate.scenario.values import AgreementTest, Question, Scenario

CALM = "so it may be the calm of an average."


def judged(
    test: AgreementTest, starts: list[float], points=None, rounds: int = 2, scale=(0, 100), **more
) -> Scenario:
    question = Question("q", "What is asked?", *scale, agreement=(test,))
    people = len(starts)
    return meeting(points or [[1] * people] * people, starts, question=question, plan=talk(rounds), **more)


def test_two_camps_that_an_average_calms() -> None:
    # RAND/UCLA (Fitch et al. 2001): ten ratings, five in each outer third are disagreement; at 5 all agree.
    ratings = [9, 8, 8, 7, 7, 3, 3, 2, 2, 1]
    finding = told(judged(AgreementTest("rand-ucla"), ratings, scale=(1, 9)), "agreement")
    assert finding.says == "RAND/UCLA test: disagreement at the start, agreement from round 1 on."
    assert finding.why == (
        "At the plan's end no ratings lie outside the third of the scale that holds the median;"
        f" but all are then at 5, where nobody of 10 started, {CALM}"
    )
    assert finding.figures["since"] == 1


def test_agreement_from_the_start() -> None:
    ratings = [9, 8, 8, 7, 7, 8, 8, 9, 7, 6]
    finding = told(judged(AgreementTest("rand-ucla"), ratings, scale=(1, 9)), "agreement")
    assert finding.says == "RAND/UCLA test: agreement from the start to the plan's end."
    assert CALM not in finding.why


def test_one_side_that_comes_over_is_no_average() -> None:
    # The first keeps her view and is heard by all others: nobody starts above 90.
    points = [[1, 0, 0, 0], [9, 1, 0, 0], [9, 0, 1, 0], [9, 0, 0, 1]]
    finding = told(judged(AgreementTest("spread", at_most=10), [90, 10, 20, 0], points), "agreement")
    assert finding.says == "Agreement test, spread at most 10: not met at the start, met from round 1 on."
    assert CALM not in finding.why


def test_a_share_is_counted_and_not_rounded() -> None:
    # Two of three are less than 67 %, and would be 67 % when rounded.
    keep = [[1, 0, 0], [0, 1, 0], [0, 0, 1]]
    finding = told(
        judged(AgreementTest("share-within", low=50, high=100, at_least=0.67), [60, 70, 20], keep), "agreement"
    )
    assert finding.says == "Agreement test, 67 % within 50 to 100: not met from the start to the plan's end."
    assert finding.why == "At the plan's end 2 of 3 are within."
    nobody = told(
        judged(AgreementTest("share-within", low=99, high=100, at_least="3/4"), [60, 70, 20], keep), "agreement"
    )
    assert nobody.says.startswith("Agreement test, 3/4 within 99 to 100: not met")
    assert nobody.why == "At the plan's end nobody of 3 is within."


def test_a_figure_can_be_told_from_its_bound() -> None:
    keep = [[1, 0], [0, 1]]
    finding = told(judged(AgreementTest("spread", at_most=10), [50, 60.01], keep), "agreement")
    assert finding.why == "At the plan's end the spread is 10.01."
    assert finding.figures == pytest.approx({"at_start": 10.01, "at_end": 10.01, "since": 0})


def test_lost_and_found_again() -> None:
    # a and b take over from c, c from d, who keeps her view: four of five within, then three, then all.
    points = [[0, 0, 1, 0, 0], [0, 0, 1, 0, 0], [0, 0, 0, 1, 0], [0, 0, 0, 1, 0], [0, 0, 0, 1, 0]]
    test = AgreementTest("share-within", low=50, high=100, at_least="4/5")
    finding = told(judged(test, [60, 70, 0, 80, 90], points, rounds=3), "agreement")
    assert finding.says == "Agreement test, 4/5 within 50 to 100: met at the start and again from round 2 on."
    assert finding.figures["since"] == 2


def test_one_finding_for_each_test_and_none_without() -> None:
    tests = (AgreementTest("spread", at_most=10), AgreementTest("quartile-range", at_most=5))
    question = Question("q", "What is asked?", 0, 100, agreement=tests)
    found = all_told(meeting([[1, 1], [1, 1]], [0, 100], question=question))
    assert [finding.says.partition(":")[0] for finding in found if finding.kind == "agreement"] == [
        "Agreement test, spread at most 10",
        "Agreement test, quartile range at most 5",
    ]
    assert "agreement" not in kinds(meeting([[1, 1], [1, 1]], [0, 100]))
    nobody = {one: {"ballots": 0} for one in "ab"}
    assert "agreement" not in kinds(meeting([[1, 1], [1, 1]], [0, 100], question=question, people=nobody))
