"""Starts that are not known, and people who are not there."""

from __future__ import annotations

import pytest
from meetings import meeting
from telling import all_told, kinds, talk, told

from deliberate.scenario.values import Ballot, BallotTest, Plan, Question, Stage

LEVY = Question("q", "Raise the levy?", 0, 100, pass_mark=50)
EVEN = [[1] * 3] * 3
KEEP = [[1, 0, 0], [0, 1, 0], [0, 0, 1]]


def test_a_start_that_matters() -> None:
    # All end at the mean: (0 + 60 + 90) / 3 and (100 + 60 + 90) / 3.
    finding = told(meeting(EVEN, [None, 60, 90], plan=talk(1)), "unknown-starts")
    assert finding.says == "Where a starts is not known, and it matters."
    assert finding.why == (
        "The sketch takes 50, the middle of the scale; over the whole scale, 0 to 100, that start would move the"
        " average at the plan's end from 50 to 83.3."
    )
    assert finding.figures == pytest.approx({"people": 1, "lowest": 50, "highest": 250 / 3, "turns_vote": 0})


def test_starts_on_which_the_vote_hangs() -> None:
    finding = told(meeting(EVEN, [None, None, 90], question=LEVY, plan=talk(1)), "unknown-starts")
    assert finding.says == "Where a and b start is not known, and the vote hangs on it."
    assert finding.why.endswith(
        "those starts would move the average at the plan's end from 30 to 96.7 and turn the vote."
    )
    assert finding.people == ("a", "b")


def test_where_nothing_is_known_that_comes_first() -> None:
    found = all_told(meeting(EVEN, [None, None, None], question=LEVY, plan=talk(1)))
    assert found[0].says == "Nobody's start is known, and the vote hangs on it."
    (settles,) = [one.says for one in found if one.kind == "settles"]
    assert settles == "Taken to be at 50 where not known, all start within 1 of each other, and they settle on 50."
    assert kinds(meeting(EVEN, [None, None, 90], question=LEVY, plan=talk(1)))[0] != "unknown-starts"


def test_the_vote_hangs_on_it_also_before_there_is_a_quorum() -> None:
    rule = Ballot(quorum="2/3", tests=(BallotTest("for", more_than="1/2"),))
    people = {one: {"present": False} for one in "cd"}
    scenario = meeting([[1] * 4] * 4, [None, 60, 90, 90], question=LEVY, ballot=rule, people=people, plan=talk(1))
    assert told(scenario, "unknown-starts").figures["turns_vote"] == 1


def test_with_a_hearing_range_the_ends_of_the_scale_are_played() -> None:
    # a is out of the others' hearing at both ends: they stay at 60, a at 0 or at 100.
    question = Question("q", "What is asked?", 0, 100, hearing_range=30)
    figures = told(meeting(EVEN, [None, 60, 60], question=question, plan=talk(1)), "unknown-starts").figures
    assert figures == pytest.approx({"people": 1, "lowest": 40, "highest": 220 / 3, "turns_vote": 0})


def test_starts_that_do_not_matter() -> None:
    assert "unknown-starts" not in kinds(meeting(EVEN, [50, 60, 90]))
    # Nobody hears a, who hears the others only.
    assert "unknown-starts" not in kinds(meeting([[0, 1, 1], [0, 1, 1], [0, 1, 1]], [None, 60, 90], plan=talk(2)))
    assert "unknown-starts" not in kinds(meeting(EVEN, [None, 60, 90], people={"a": {"present": False}}))


# Absent


def test_somebody_absent_whom_the_others_would_hear() -> None:
    finding = told(meeting(EVEN, [50, 60, 90], question=LEVY, people={"c": {"present": False}}), "absent")
    assert finding.says == "c is absent and heard by nobody, and 1 vote is missing."
    assert finding.why == "a and b give points to somebody absent; in the sketch these stay with the own view."
    assert finding.people == ("c",)
    assert finding.figures == {"people": 1, "ballots": 1, "hear_them": 2}


def test_what_is_not_heard_may_go_to_the_others() -> None:
    plan = Plan((Stage("Plenary", 1, unheard="rescale"),))
    finding = told(meeting(EVEN, [50, 60, 90], people={"c": {"present": False}}, plan=plan), "absent")
    assert finding.says == "c is absent and heard by nobody."
    assert finding.why.endswith("in the sketch these go to the own view or to those still heard.")


def test_somebody_absent_whom_nobody_would_hear() -> None:
    people = {"b": {"present": False, "ballots": 2.5}, "c": {"present": False}}
    finding = told(meeting(KEEP, [50, 60, 90], question=LEVY, people=people), "absent")
    assert finding.says == "b and c are absent and heard by nobody, and 3.5 votes are missing."
    assert finding.why == "Nobody present gives them points, so the talk of the others is the same without them."


def test_nobody_is_there() -> None:
    finding = told(meeting([[1]], [50], people={"a": {"present": False}}), "absent")
    assert finding.says == "a is absent and heard by nobody."
    assert finding.why == "So nobody is there to talk, and no view moves."


def test_all_are_there() -> None:
    assert "absent" not in kinds(meeting(EVEN, [50, 60, 90]))
