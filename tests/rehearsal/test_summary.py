import textwrap

import numpy as np
import pytest
from hypothesis import given
from meetings import meeting, meetings

from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import Finding, Introduce
from deliberate.rehearsal.summary import CAUTION, summary
from deliberate.scenario.values import AgreementTest, Plan, Question, Stage

LEVY = Question("q", "Raise the harbour levy?", 0, 100, low_label="no", high_label="yes", pass_mark=50)


def said(scenario, findings=(), **asked):
    return summary(scenario, rehearse(scenario, **asked), findings)


def test_the_whole_page():
    scenario = meeting(
        [[88, 12, 0], [50, 45, 5], [50, 5, 45]],
        [80, 40, 30],
        question=LEVY,
        plan=Plan((Stage("Go-round", 1), Stage("Plenary", 5))),
        people={"a": {"name": "Amina"}, "b": {"name": "Bilal"}},
    )
    finding = Finding(
        "carries",
        "Amina's start makes up most of the final view.",
        "Everybody gives her half of their points.",
        ("a",),
        {},
        suggestion=Introduce("a", "b", 30),
    )
    assert said(scenario, [finding]) == textwrap.dedent(
        """\
        A test
        Raise the harbour levy?
        Scale: 0 (no) to 100 (yes). Votes: for above 50.
        As it stands: 3 people; 6 rounds (Go-round 1, Plenary 5).

                   low  mean  high  spread  for  against  abstain  vote
        Start     30.0  50.0  80.0    50.0    1        2        0  fails
        Round 1   55.5  63.4  75.2    19.7    3        0        0  passes
        Round 6   71.9  72.0  72.1     0.2    3        0        0  passes
        Long run  72.1  72.1  72.1     0.0    3        0        0  passes

        Settles  yes, on 72.1
        Agree    within 1 of each other from round 5 on
        Pace     every round more than halves the rest of the way
        Voices   carried as if by 1.5 equal voices; 3 people are present
        Rule     Simple majority

        What stands out
          1. Amina's start makes up most of the final view.
             Everybody gives her half of their points.
             To try: Let Amina hear Bilal: 30 of 100 points

        A sketch, not a forecast of people.
        """
    )


def test_a_swing_shows_its_lists():
    text = said(meeting([[0, 1], [1, 0]], [80, 20]))
    assert "Swing 1 of 2" in text
    assert "no, views keep swinging with period 2" in text
    assert "Long run" not in text
    assert "Pace" not in text


def test_views_that_stay_apart():
    text = said(meeting([[1, 0], [0, 1]], [80, 20]))
    assert "yes, on views from 20 to 80" in text
    assert "Agree" not in text


def test_figures_are_those_of_people_who_are_present():
    scenario = meeting([[1, 1, 0], [1, 1, 0], [0, 0, 1]], [40, 60, 100], people={"c": {"present": False}})
    text = said(scenario)
    assert "3 people, 2 present" in text
    assert "yes, on 50" in text
    assert "within 1 of each other from round 1 on" in text
    assert "carried as if by 2 equal voices; 2 people are present" in text
    assert "Note: one person is absent" in text.replace("\n", " ")
    assert "100" not in text.partition("Start")[2].partition("Settles")[0]


def test_agreement_of_those_present_is_counted_beyond_the_rounds_played():
    # A spread of 4^-t (DeGroot 1974, from memory), and somebody absent at the other end of the scale.
    points, away = [[1, 1, 0], [1, 3, 0], [0, 0, 1]], {"c": {"present": False}}
    for rounds in (0, 2, 9):
        text = said(meeting(points, [0, 90, 100], people=away), rounds=rounds)
        assert "within 1 of each other from round 4 on" in text
    # Views of firm people can meet and come apart again: a and b start at 0 and take in c, who starts at 100.
    firm = {"a": {"firmness": 0.5}, "b": {"firmness": 0.5}, "d": {"present": False}}
    apart = meeting([[0, 0, 1, 0], [0, 0, 1, 0], [1, 1, 0, 0], [0, 0, 0, 1]], [0, 0, 100, 50], people=firm)
    spreads = np.ptp(rehearse(apart, rounds=60).rounds[:, :3], axis=1)
    last_wide = int(np.flatnonzero(spreads > 1)[-1])
    assert f"within 1 of each other from round {last_wide + 1} on" in said(apart)


def test_one_person_has_nobody_to_agree_with():
    text = said(meeting([[1]], [20]))
    assert "Settles  yes, on 20" in text
    assert "Agree" not in text
    assert "Pace" not in text


def test_agreement_tests_and_quorum_are_told():
    tests = (
        AgreementTest("share-within", low=70, high=100, at_least="3/4"),
        AgreementTest("share-within", low=70, high=100, at_least=0.5),
        AgreementTest("quartile-range", at_most=10),
        AgreementTest("spread", at_most=60),
    )
    question = Question("q", "t", 0, 100, pass_mark=50, undecided=5, objection_mark=10, agreement=tests)
    absent = {one: {"present": False} for one in "bc"}
    text = said(meeting([[1, 0, 0, 0]] + [[0, 1, 0, 0]] * 3, [80, 20, 20, 5], question=question, people=absent))
    assert "Votes: for above 55, against below 45, objections below 10." in " ".join(text.split())
    assert "3/4 within 70 to 100: none at the start" in text
    assert "50 % within 70 to 100: agreement at the start" in text
    assert "quartile range at most 10: none at the start" in text
    absent["d"] = {"present": False}
    assert "no quorum" in said(
        meeting([[1, 0, 0, 0]] + [[0, 1, 0, 0]] * 3, [80, 20, 20, 5], question=question, people=absent)
    )


def test_a_long_plan_is_shortened():
    stages = tuple(Stage(f"Stage {i}", 2) for i in range(40))
    text = said(meeting([[1, 1], [1, 1]], [0, 100], plan=Plan(stages)))
    assert "32 more stages" in text
    assert text.count("\nRound ") <= 10
    assert "\nRound 80 " in text


def test_nobody_is_there():
    for scenario in (meeting([], []), meeting([[1]], [5], people={"a": {"present": False}})):
        assert "nobody is present" in said(scenario)


@pytest.mark.parametrize("rounds", [0, 1, 30])
def test_other_rounds_than_the_plan_has(rounds):
    text = said(meeting([[1, 1], [1, 1]], [0, 100], question=LEVY), rounds=rounds)
    assert (f"Round {rounds}" in text) == (rounds > 0)


@given(meetings())
def test_every_page_is_readable_at_80_columns_and_ends_with_the_caution(scenario):
    text = said(scenario)
    assert all(len(line) <= 80 for line in text.splitlines())
    assert text.endswith(f"\n\n{CAUTION}\n")
    assert text.isascii()
    assert "nan" not in text


def test_a_table_too_wide_for_the_page_becomes_two():
    question = Question("q", "What is it worth?", 1e9, 9e9, pass_mark=2e9, objection_mark=1.5e9)
    text = said(meeting([[1, 1], [1, 2]], [1e9, 9e9], question=question))
    assert "\n\n          for  against  abstain  object  vote\n" in text
    assert max(map(len, text.splitlines())) <= 80
