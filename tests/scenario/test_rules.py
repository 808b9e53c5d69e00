"""Ballot rules in words, and the ready-made ones against their sources."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st
from strategies import ballot_tests, shares

from deliberate.scenario import rules
from deliberate.scenario.values import Ballot, BallotTest


def holds(test: BallotTest, part: int, whole: int) -> bool:
    """Whether `part` of `whole` meets the test, in exact fractions."""
    kind, mark = rules.threshold(test)
    share = Fraction(part, whole)
    return {
        "more_than": share > mark,
        "at_least": share >= mark,
        "at_most": share <= mark,
        "less_than": share < mark,
    }[kind]


# Robert's Rules of Order Newly Revised, 12th ed., section 44 (figures from memory)


@pytest.mark.parametrize(("needed", "cast"), [(10, 19), (11, 20), (11, 21)])
def test_majority_figures(needed, cast) -> None:
    (test,) = rules.SIMPLE_MAJORITY.ballot.tests
    assert (test.side, test.of) == ("for", "cast")
    assert holds(test, needed, cast)
    assert not holds(test, needed - 1, cast)


@pytest.mark.parametrize(("needed", "cast"), [(20, 30), (21, 31), (22, 32), (22, 33)])
def test_two_thirds_figures(needed, cast) -> None:
    (test,) = rules.TWO_THIRDS_OF_VOTES_CAST.ballot.tests
    assert (test.side, test.of) == ("for", "cast")
    assert holds(test, needed, cast)
    assert not holds(test, needed - 1, cast)


def test_iso_iec_directives_part_1_2_6_3() -> None:
    """Two-thirds of the votes cast in favour, not more than a quarter negative; abstentions do not count."""
    in_favour, against = rules.TWO_THIRDS_QUARTER_AGAINST.ballot.tests
    assert (in_favour.side, in_favour.count, in_favour.of) == ("for", "ballots", "cast")
    assert (against.side, against.count, against.of) == ("against", "ballots", "cast")
    assert holds(in_favour, 2, 3)
    assert holds(against, 1, 4)
    assert not holds(against, 26, 100)


def test_treaty_on_european_union_article_16_4() -> None:
    """At least 55 % of the members and at least 65 % of the population, absent ones included.

    "Comprising at least fifteen of them" (from memory) is 55 % of 27.
    """
    members, population = rules.DOUBLE_MAJORITY.ballot.tests
    assert (members.count, members.of, population.count, population.of) == (
        "people",
        "eligible",
        "ballots",
        "eligible",
    )
    assert holds(members, 15, 27)
    assert not holds(members, 14, 27)
    assert holds(population, 65, 100)
    assert not holds(population, 6499, 10000)


# Common practice


def test_unanimity_and_objections_allow_none() -> None:
    for rule in (rules.UNANIMITY, rules.NO_STANDING_OBJECTION):
        (test,) = rule.ballot.tests
        assert holds(test, 0, 12)
        assert not holds(test, 1, 1000)


def test_an_absolute_majority_is_of_all_votes() -> None:
    (test,) = rules.ABSOLUTE_MAJORITY.ballot.tests
    assert test.of == "eligible"
    assert not holds(test, 5, 10)


def test_ready_rules_have_their_own_names_and_one_sentence_each() -> None:
    assert len({rule.name for rule in rules.READY_RULES}) == len(rules.READY_RULES) == 7
    for rule in rules.READY_RULES:
        assert rule.wording.endswith(".")
        assert rule.wording.count(".") == 1
        assert rules.ready_rule_of(rule.ballot) is rule


def test_a_ready_rule_is_known_by_its_tests_alone() -> None:
    ballot = Ballot(name="Ours", quorum=None, tests=(BallotTest(side="for", more_than=0.5),))
    assert rules.ready_rule_of(ballot) is rules.SIMPLE_MAJORITY
    assert rules.ready_rule_of(Ballot(tests=(BallotTest(side="for", at_least="1/2"),))) is None
    assert rules.ready_rule_of(Ballot(tests=())) is None


@pytest.mark.parametrize(
    ("ballot", "words"),
    [
        (
            rules.SIMPLE_MAJORITY.ballot,
            "Passes when more than half of the votes cast are for; "
            "at least half of those with a vote must be present.",
        ),
        (
            Ballot(quorum=None, casting_vote="ines", tests=rules.TWO_THIRDS_QUARTER_AGAINST.ballot.tests),
            "Passes when at least two thirds of the votes cast are for and at most a quarter of the votes cast are "
            "against; the vote of Ines decides a tie.",
        ),
        (
            Ballot(quorum=1.0, casting_vote="wei", tests=rules.NO_STANDING_OBJECTION.ballot.tests),
            "Passes when none of those present with a vote object; all of those with a vote must be present; "
            "the vote of wei decides a tie.",
        ),
        (
            Ballot(quorum=0.0, tests=rules.DOUBLE_MAJORITY.ballot.tests),
            "Passes when at least 55 % of all those with a vote, absent ones included, are for and at least 65 % of "
            "all votes, absent ones included, are for.",
        ),
        (
            Ballot(quorum="5/7", tests=(BallotTest(side="objecting", of="present", less_than=0.125),)),
            "Passes when less than 12.5 % of the votes of those present belong to people who object; at least 5/7 of "
            "those with a vote must be present.",
        ),
        (Ballot(quorum=None, tests=()), "Passes with any vote."),
        (
            Ballot(quorum=None, tests=(BallotTest(side="for", count="people", at_least=1.0),)),
            "Passes when all of those who vote for or against are for.",
        ),
    ],
)
def test_rules_in_words(ballot, words) -> None:
    assert rules.rule_in_words(ballot, {"ines": "Ines"}) == words


@given(shares)
def test_shares_are_taken_as_they_are_written(share) -> None:
    exact = rules.exact(share)
    assert 0 <= exact <= 1
    if isinstance(share, float):
        assert float(exact) == share
    assert rules.exact(0.55) == Fraction(11, 20)


@given(st.lists(ballot_tests(), max_size=3), st.one_of(st.none(), shares))
def test_any_rule_can_be_said_in_one_sentence(tests, quorum) -> None:
    words = rules.rule_in_words(Ballot(quorum=quorum, tests=tuple(tests)))
    assert words.startswith("Passes w")
    assert words.endswith(".")
    assert "  " not in words
    assert words.count(" are for") == sum(test.side == "for" for test in tests)
