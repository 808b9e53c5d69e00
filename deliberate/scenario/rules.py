"""Ballot rules in words, and the ones that bodies use most, ready to be chosen.

Sources: Robert's Rules of Order Newly Revised, 12th ed., section 44 (majority and two-thirds of the votes cast by
those entitled to vote, blanks and abstentions left out; from memory); ISO/IEC Directives Part 1, 2.6.3 (quoted,
to be confirmed against the edition in force); Treaty on European Union, article 16(4). The other rules are common
practice. What a body's own standing orders say comes first.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from msgspec import UNSET

from deliberate.scenario.values import Ballot, BallotTest, FrozenDict, Share

_NAMED_PARTS = {
    Fraction(1, 2): "half",
    Fraction(1, 3): "a third",
    Fraction(2, 3): "two thirds",
    Fraction(1, 4): "a quarter",
    Fraction(3, 4): "three quarters",
    Fraction(1): "all",
}
THRESHOLDS = {"more_than": "more than", "at_least": "at least", "at_most": "at most", "less_than": "less than"}
_EXTREMES = {  # thresholds at an end of [0, 1] read better without a number
    ("more_than", 0): "some of",
    ("at_least", 1): "all of",
    ("at_most", 0): "none of",
    ("less_than", 1): "not all of",
}
_WHOLES = {
    ("ballots", "cast"): "the votes cast",
    ("people", "cast"): "those who vote for or against",
    ("ballots", "present"): "the votes of those present",
    ("people", "present"): "those present with a vote",
    ("ballots", "eligible"): "all votes, absent ones included,",
    ("people", "eligible"): "all those with a vote, absent ones included,",
}
SIDES = {
    ("ballots", "for"): "are for",
    ("people", "for"): "are for",
    ("ballots", "against"): "are against",
    ("people", "against"): "are against",
    ("ballots", "objecting"): "belong to people who object",
    ("people", "objecting"): "object",
}


@dataclass(frozen=True)
class ReadyRule:
    """A rule to choose from a list: its name and tests are those of `ballot`, `wording` says it in one sentence."""

    ballot: Ballot
    wording: str

    @property
    def name(self) -> str:
        """What the rule is called."""
        return self.ballot.name


SIMPLE_MAJORITY = ReadyRule(
    Ballot(name="Simple majority", tests=(BallotTest(side="for", more_than="1/2"),)),
    "More than half of the votes cast are for; abstentions are left out.",
)
ABSOLUTE_MAJORITY = ReadyRule(
    Ballot(name="Absolute majority", tests=(BallotTest(side="for", of="eligible", more_than="1/2"),)),
    "More than half of all votes are for, whether cast or not, so that abstaining and being absent work as a no.",
)
TWO_THIRDS_OF_VOTES_CAST = ReadyRule(
    Ballot(name="Two-thirds of votes cast", tests=(BallotTest(side="for", at_least="2/3"),)),
    "At least two thirds of the votes cast are for; abstentions are left out.",
)
UNANIMITY = ReadyRule(
    Ballot(name="Unanimity", tests=(BallotTest(side="against", at_most=0.0),)),
    "Nobody votes against and somebody votes for; abstentions do not stand in the way.",
)
NO_STANDING_OBJECTION = ReadyRule(
    Ballot(
        name="No standing objection",
        tests=(BallotTest(side="objecting", count="people", of="present", at_most=0.0),),
    ),
    "Nobody present with a vote holds a view below the objection mark; being against is not yet an objection.",
)
TWO_THIRDS_QUARTER_AGAINST = ReadyRule(
    Ballot(
        name="Two-thirds with at most a quarter against",
        tests=(BallotTest(side="for", at_least="2/3"), BallotTest(side="against", at_most="1/4")),
    ),
    "At least two thirds of the votes cast are for and at most a quarter are against; abstentions are left out.",
)
# Article 16(4) also asks a blocking minority of at least four members, which tests joined by "and" cannot say.
DOUBLE_MAJORITY = ReadyRule(
    Ballot(
        name="Double majority",
        tests=(
            BallotTest(side="for", count="people", of="eligible", at_least="11/20"),
            BallotTest(side="for", count="ballots", of="eligible", at_least="13/20"),
        ),
    ),
    "At least 55 % of all those with a vote are for, and they hold at least 65 % of all votes.",
)

READY_RULES = (
    SIMPLE_MAJORITY,
    ABSOLUTE_MAJORITY,
    TWO_THIRDS_OF_VOTES_CAST,
    UNANIMITY,
    NO_STANDING_OBJECTION,
    TWO_THIRDS_QUARTER_AGAINST,
    DOUBLE_MAJORITY,
)


def ready_rule_of(ballot: Ballot) -> ReadyRule | None:
    """The ready-made rule with the same tests, whatever `ballot` is called, or None where it is one of its own."""
    tests = [_key(test) for test in ballot.tests]
    for rule in READY_RULES:
        if tests == [_key(test) for test in rule.ballot.tests]:
            return rule
    return None


def exact(share: Share) -> Fraction:
    """A share as the fraction that is written in the file: "2/3", and 0.55 as 55/100."""
    return Fraction(share) if isinstance(share, str) else Fraction(repr(float(share)))


def threshold(test: BallotTest) -> tuple[str, Fraction]:
    """The comparison of a test (``more_than``, ``at_least``, ``at_most`` or ``less_than``) and its share."""
    for kind in THRESHOLDS:
        share = getattr(test, kind)
        if share is not UNSET:
            return kind, exact(share)
    raise ValueError("a test without a threshold")


def rule_in_words(ballot: Ballot, names: Mapping[str, str] = FrozenDict()) -> str:
    """The rule as one sentence. `names` gives the name behind the id of the casting vote."""
    parts = [
        "Passes when " + " and ".join(map(_test_in_words, ballot.tests)) if ballot.tests else "Passes with any vote"
    ]
    if ballot.quorum is not None and exact(ballot.quorum) > 0:
        part = exact(ballot.quorum)
        needed = "all" if part == 1 else f"at least {_part_in_words(part)}"
        parts.append(f"{needed} of those with a vote must be present")
    if ballot.casting_vote is not None:
        parts.append(f"the vote of {names.get(ballot.casting_vote, ballot.casting_vote)} decides a tie")
    return "; ".join(parts) + "."


def _test_in_words(test: BallotTest) -> str:
    kind, part = threshold(test)
    amount = _EXTREMES.get((kind, part)) or f"{THRESHOLDS[kind]} {_part_in_words(part)} of"
    return f"{amount} {_WHOLES[test.count, test.of]} {SIDES[test.count, test.side]}"


def _part_in_words(part: Fraction) -> str:
    if part in _NAMED_PARTS:
        return _NAMED_PARTS[part]
    percent = part * 100
    if 100 % percent.denominator == 0:  # at most two decimals
        return f"{float(percent):.2f}".rstrip("0").rstrip(".") + " %"
    return f"{part.numerator}/{part.denominator}"


def _key(test: BallotTest) -> tuple[object, ...]:
    return (test.side, test.count, test.of, *threshold(test))
