"""Set-ups side by side: the figures in words, and the course of a rehearsal as a whole."""

from __future__ import annotations

import numpy as np
import pytest
from harbour import HARBOUR
from hypothesis import given
from msgspec.structs import replace
from strategies import scenarios

from deliberate.rehearsal import comparing
from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario.values import Arrow, FrozenDict, Person, Plan, Question, Scenario, Stage, Variant


def meeting(
    starts: tuple[float, ...], own: float, *arrows: tuple[int, int], unit: str = "", rounds: int = 4
) -> Scenario:
    people = tuple(
        Person(id=f"p{place}", own_weight=own, beliefs=FrozenDict(q=start)) for place, start in enumerate(starts)
    )
    drawn = tuple(Arrow(f"p{listener}", f"p{source}", 50.0) for listener, source in arrows)
    variant = Variant("As it stands", people, arrows=drawn, plan=Plan((Stage(rounds=rounds),)))
    question = Question("q", "Adopt it?", 0.0, 100.0, unit=unit, pass_mark=50.0)
    return Scenario(title="Board", questions=(question,), variants=(variant,))


def told(scenario: Scenario) -> dict[str, str]:
    variant, question = scenario.variants[0], scenario.questions[0]
    return dict(zip(comparing.HEADINGS, comparing.figures(rehearse(scenario), variant, question), strict=True))


def test_two_who_hear_each_other_alike_meet_in_the_middle() -> None:
    assert told(meeting((80.0, 30.0), 50.0, (0, 1), (1, 0), unit="points")) == {
        "Settles": "yes",
        "In the long run": "55 points",
        "Agree within 1 % of the scale": "round 1",
        "Spread at the plan's end": "0 points",
        "Effective voices": "2.0",
        "Vote at the plan's end": "2 for, 0 against: passes",
    }


def test_two_who_take_over_each_other_s_view_swing() -> None:
    words = told(meeting((80.0, 30.0), 0.0, (0, 1), (1, 0)))
    assert words["Settles"] == words["Agree within 1 % of the scale"] == "keeps swinging"
    assert words["In the long run"] == "between 30 and 80"


def test_two_who_hear_nobody_stay_where_they_are() -> None:
    words = told(meeting((80.0, 30.0), 50.0))
    assert words["In the long run"] == "30 to 80"
    assert words["Agree within 1 % of the scale"] == "no common view"
    assert words["Vote at the plan's end"] == "1 for, 1 against: does not pass"


def test_without_a_pass_mark_there_is_no_vote() -> None:
    scenario = meeting((80.0, 30.0), 50.0)
    scenario = replace(scenario, questions=(replace(scenario.questions[0], pass_mark=None),))
    assert told(scenario)["Vote at the plan's end"] == "no vote"
    assert comparing.course(rehearse(scenario), scenario.variants[0]).in_favour is None


def test_those_absent_are_left_out_of_the_course() -> None:
    scenario = meeting((80.0, 30.0, 100.0), 50.0, (0, 1), (1, 0))
    people = scenario.variants[0].people
    variant = replace(scenario.variants[0], people=(*people[:2], replace(people[2], present=False)))
    scenario = replace(scenario, variants=(variant,))
    course = comparing.course(rehearse(scenario), variant)
    assert course.highest.tolist() == [80.0, 55.0, 55.0, 55.0, 55.0]
    assert course.lowest.tolist() == [30.0, 55.0, 55.0, 55.0, 55.0]
    assert course.mean.tolist() == [55.0] * 5
    assert told(scenario)["In the long run"] == "55"


@given(scenarios())
def test_the_course_is_that_of_the_rounds(scenario: Scenario) -> None:
    for variant in scenario.variants:
        rehearsal = rehearse(scenario, variant.name)
        course = comparing.course(rehearsal, variant)
        words = comparing.figures(rehearsal, variant, scenario.questions[0])
        assert all(words)
        assert not any(bad in " ".join(words) for bad in ("nan", "inf", "None"))
        here = [place for place, person in enumerate(variant.people) if person.present]
        if not here:
            assert np.isnan(course.mean).all()
            continue
        for round_, beliefs in enumerate(rehearsal.rounds[:, here].tolist()):
            assert course.highest[round_] == max(beliefs)
            assert course.lowest[round_] == min(beliefs)
            assert course.mean[round_] == pytest.approx(sum(beliefs) / len(beliefs), rel=1e-12, abs=1e-12)


def test_the_harbour_is_told_in_full() -> None:
    assert all(told(HARBOUR).values())
