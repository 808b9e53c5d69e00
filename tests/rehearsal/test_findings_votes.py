"""The vote round by round, and the quorum."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st
from meetings import meeting
from telling import all_told, kinds, talk, told

from deliberate.scenario.values import Ballot, BallotTest, Question

LEVY = Question("q", "Raise the levy?", 0, 100, pass_mark=50)
ABSENT = {"present": False}
EVEN = [[1] * 3] * 3


def votes_by_round(points, starts, rounds: int) -> list[tuple[int, int]]:
    """For and against after each round, in exact fractions."""
    beliefs, counted = [Fraction(start) for start in starts], []
    for _ in range(rounds + 1):
        counted.append((sum(one > 50 for one in beliefs), sum(one < 50 for one in beliefs)))
        beliefs = [
            sum(Fraction(weight) * belief for weight, belief in zip(row, beliefs, strict=True)) / sum(row)
            for row in points
        ]
    return counted


def test_a_vote_that_passes_throughout() -> None:
    finding = told(meeting(EVEN, [80, 70, 30], question=LEVY, plan=talk(2)), "vote")
    assert finding.says == "By the sketch the vote would be 3 for, 0 against at the plan's end: it passes."
    assert finding.why == (
        "It passes at every point of the plan; by the rule it passes when more than half of the votes cast are for."
    )
    assert finding.figures == {
        "for": 3, "against": 0, "abstain": 0, "objecting": 0, "passes": 1, "changes": 0, "first_passes": 0,
    }  # fmt: skip
    assert finding.groups == (("a", "b", "c"),)


def test_a_vote_that_turns() -> None:
    # After one round all are at 130/3 or at 110/3.
    turned = told(meeting(EVEN, [80, 60, 0], question=LEVY, plan=talk(2)), "vote")
    assert turned.why.startswith("It passes at the start and does not pass from round 1 on; by the rule")
    assert turned.figures["first_stops_passing"] == 1


def test_a_vote_that_would_turn_later() -> None:
    finding = told(meeting([[9, 1], [0, 1]], [0, 100], question=LEVY, plan=talk(1)), "vote")
    assert "; if talk went on it would pass in the end; " in finding.why


def test_abstaining_and_objecting() -> None:
    question = Question("q", "Raise the levy?", 0, 100, pass_mark=50, undecided=5, objection_mark=20)
    rule = Ballot(tests=(BallotTest("objecting", count="people", of="present", at_most=0.0),))
    alone = [[1, 0, 0], [0, 1, 0], [0, 0, 1]]
    finding = told(meeting(alone, [80, 52, 10], question=question, ballot=rule), "vote")
    assert finding.says == (
        "By the sketch the vote would be 1 for, 1 against, 1 abstaining, 1 objecting at the plan's end:"
        " it does not pass."
    )
    assert "; c is below the objection mark of 20; " in finding.why
    assert finding.people == ("c",)
    assert finding.groups == (("a",), ("c",), ("b",))


def test_ballots_have_weight() -> None:
    people = {"a": {"ballots": 2.5}, "c": {"ballots": 0}}
    says = told(meeting([[1, 0, 0], [0, 1, 0], [0, 0, 1]], [80, 20, 10], question=LEVY, people=people), "vote").says
    assert says == "By the sketch the vote would be 2.5 for, 1 against at the plan's end: it passes."


def test_no_vote_without_a_mark_or_without_voters() -> None:
    assert "vote" not in kinds(meeting(EVEN, [80, 70, 30]))
    nobody = {one: {"ballots": 0} for one in "abc"}
    assert not {"vote", "quorum"} & set(kinds(meeting(EVEN, [80, 70, 30], question=LEVY, people=nobody)))


@given(
    st.lists(st.lists(st.integers(0, 4), min_size=4, max_size=4), min_size=4, max_size=4),
    st.lists(st.integers(0, 100), min_size=4, max_size=4),
)
def test_votes_are_those_of_exact_fractions(points: list[list[int]], starts: list[int]) -> None:
    for at, row in enumerate(points):
        row[at] += 1
    counted = votes_by_round(points, starts, 4)
    outcomes = [favour > against for favour, against in counted]
    figures = told(meeting(points, starts, question=LEVY, plan=talk(4)), "vote").figures
    assert (figures["for"], figures["against"]) == counted[-1]
    assert figures["changes"] == sum(a != b for a, b in pairwise(outcomes))
    assert figures.get("first_passes") == next((at for at, passed in enumerate(outcomes) if passed), None)
    stops = [at for at in range(1, 5) if outcomes[at - 1] and not outcomes[at]]
    assert figures.get("first_stops_passing") == next(iter(stops), None)


# Quorum


def quorum(share: str, absent: str, people: int = 5, **fields: object):
    who = dict.fromkeys(absent, ABSENT)
    rule = Ballot(quorum=share, tests=(BallotTest("for", more_than="1/2"),))
    return meeting([[1] * people] * people, [80] * people, question=LEVY, ballot=rule, people=who, **fields)


@pytest.mark.parametrize(
    ("absent", "missing", "why"),
    [
        ("abc", 1, "2 of 5 people with a vote are present and the rule asks for 3, so nothing can pass; a, b and c"),
        (
            "abcd",
            2,
            "1 of 5 people with a vote is present and the rule asks for 3, so nothing can pass; a, b, c and d",
        ),
        (
            "abcde",
            3,
            "None of 5 people with a vote are present and the rule asks for 3, so nothing can pass; a, b, c",
        ),
    ],
)
def test_no_quorum(absent: str, missing: int, why: str) -> None:
    finding = all_told(quorum("1/2", absent))[0]
    assert finding.kind == "quorum"
    more = "1 more person" if missing == 1 else f"{missing} more people"
    assert finding.says == f"There is no quorum: {more} with a vote would have to be there."
    assert finding.why.startswith(why)
    assert finding.figures == {"present": 5 - len(absent), "eligible": 5, "needed": 3, "missing": missing}


def test_without_a_quorum_the_vote_says_so() -> None:
    assert told(quorum("1/2", "abc"), "vote").says.endswith("at the plan's end: it cannot pass without a quorum.")


def test_a_bare_quorum() -> None:
    finding = told(quorum("1/2", "ab"), "quorum")
    assert finding.says == "The quorum is just met: one more absence would break it."
    assert finding.why == "3 of 5 people with a vote are present and the rule asks for 3."
    assert "quorum" not in kinds(quorum("1/2", "a"))
    assert "quorum" not in kinds(quorum("0/1", "ab"))


def test_a_quorum_of_two_thirds_of_six_is_four_and_not_five() -> None:
    assert told(quorum("2/3", "ab", 6), "quorum").figures["missing"] == 0


def test_the_only_person_with_a_vote() -> None:
    assert "quorum" not in kinds(quorum("1/2", "", 1))
    assert told(quorum("1/2", "a", 1), "quorum").why == (
        "The only person with a vote is absent and the rule asks for 1, so nothing can pass; a is absent."
    )
