"""The vote that beliefs would give under the body's own rule, compared in whole numbers, never in rounded ones.

A vote follows from a belief: for above ``pass_mark + undecided``, against below ``pass_mark - undecided``,
abstaining otherwise. What those votes decide is arithmetic on counts and thresholds, and 2/3 of 30 must be 20
and not 19.999: ballots and thresholds are read as the decimal text they were written as, brought to one common
denominator, and compared as integers (Python's own where 64 bits do not suffice).
"""

from __future__ import annotations

import math
import sys
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from deliberate.rehearsal.results import Floats, Tally
from deliberate.scenario.rules import exact, threshold
from deliberate.scenario.values import Ballot, BallotTest, Person, Question

_HALF = Fraction(1, 2)
_COMPARISONS = {
    "more_than": np.greater,
    "at_least": np.greater_equal,
    "at_most": np.less_equal,
    "less_than": np.less,
}


def rounding(question: Question) -> float:
    """How near to a mark of the scale a belief counts as exactly at it, because rounding is not a vote."""
    magnitude = max(abs(question.low), abs(question.high))
    return max(1e-12 * question.width, 4 * math.ulp(magnitude))


@dataclass(frozen=True, eq=False)
class Tallies:
    """The ballots that k lists of beliefs would give; every array has shape (k,), counted in ballots."""

    in_favour: Floats
    against: Floats
    abstain: Floats
    objecting: Floats
    quorum_met: bool
    passes: NDArray[np.bool_]

    def __len__(self) -> int:
        return len(self.passes)

    def __iter__(self) -> Iterator[Tally]:
        columns = (self.in_favour, self.against, self.abstain, self.objecting)
        for *counts, passes in zip(*(column.tolist() for column in columns), self.passes.tolist(), strict=True):
            yield Tally(*counts, self.quorum_met, passes)


class Electorate:
    """Those who may vote on a question, prepared once so that many lists of beliefs can be counted.

    People with a vote are those with more than 0 ballots; absent ones are eligible and do not vote. The holder
    of the casting vote breaks a tie with the vote that her belief gives, when she is present, also if she has
    no ballot of her own (a chair who votes in ties alone).
    """

    def __init__(self, question: Question, ballot: Ballot, people: Sequence[Person]) -> None:
        if question.pass_mark is None:
            raise ValueError("a question without a pass mark has no vote")
        self.ballot = ballot
        slack = rounding(question)
        self._for_above = question.pass_mark + question.undecided + slack
        self._against_below = question.pass_mark - question.undecided - slack
        self._objects_below = None if question.objection_mark is None else question.objection_mark - slack
        has_vote = np.fromiter((person.ballots > 0 for person in people), bool, len(people))
        present = np.fromiter((person.present for person in people), bool, len(people))
        self.voters = np.flatnonzero(has_vote & present)
        self.eligible = int(has_vote.sum())
        self._casting = next(
            (at for at, person in enumerate(people) if person.id == ballot.casting_vote and person.present), None
        )
        self._weigh(people)

    def _weigh(self, people: Sequence[Person]) -> None:
        """Bring all ballots to whole numbers of 1/`_unit`."""
        as_written = {ballots: exact(ballots) for ballots in {person.ballots for person in people}}
        self._unit = math.lcm(*(weight.denominator for weight in as_written.values()))
        whole = {given: int(weight * self._unit) for given, weight in as_written.items()}
        self._eligible_weight = sum(whole[person.ballots] for person in people)
        thresholds = [threshold(test)[1] for test in self.ballot.tests]
        largest = max((max(limit.numerator, limit.denominator) for limit in thresholds), default=1)
        # Counts are multiplied by numerators and denominators: beyond 64 bits Python's integers take over.
        self._whole_type = np.int64 if max(self._eligible_weight, 1) * largest < 2**63 else object
        self._weights = np.array([whole[people[at].ballots] for at in self.voters], dtype=self._whole_type)
        self._ones = np.ones(len(self.voters), dtype=self._whole_type)

    @cached_property
    def quorum_met(self) -> bool:
        """Whether enough of the people with a vote are present."""
        if self.ballot.quorum is None:
            return True
        return len(self.voters) >= exact(self.ballot.quorum) * self.eligible

    @property
    def marks(self) -> tuple[float, ...]:
        """The beliefs at which a vote or an objection becomes another."""
        marks = (self._for_above, self._against_below)
        return marks if self._objects_below is None else (*marks, self._objects_below)

    @property
    def deciding(self) -> NDArray[np.intp]:
        """The voters, and the holder of the casting vote."""
        return self.voters if self._casting is None else np.union1d(self.voters, [self._casting])

    def sides(self, beliefs: Floats) -> dict[str, NDArray[np.bool_]]:
        """Which voters are for, against and objecting with k lists of beliefs: (k, voters) each."""
        held = beliefs[:, self.voters]
        nobody = np.zeros(held.shape, dtype=bool)
        return {
            "for": held > self._for_above,
            "against": held < self._against_below,
            "objecting": nobody if self._objects_below is None else held < self._objects_below,
        }

    def tally(self, beliefs: Floats) -> Tallies:
        """Count k lists of beliefs, shape (k, people)."""
        sides = self.sides(beliefs)
        votes = {side: self._count(chosen, self._weights) for side, chosen in sides.items()}
        cast = votes["for"] + votes["against"]
        passes = (cast > 0).astype(bool) & self.quorum_met
        for test in self.ballot.tests:
            passes &= self._holds(test, sides, votes, beliefs)
        return Tallies(
            self._as_ballots(votes["for"]),
            self._as_ballots(votes["against"]),
            self._as_ballots(self._whole(self._weights) - cast),
            self._as_ballots(votes["objecting"]),
            self.quorum_met,
            passes,
        )

    def _holds(
        self, test: BallotTest, sides: dict[str, NDArray], votes: dict[str, NDArray], beliefs: Floats
    ) -> NDArray[np.bool_]:
        """Whether one condition holds, for each list of beliefs: side / of against the threshold, multiplied out."""
        by_ballots = test.count == "ballots"
        weights = self._weights if by_ballots else self._ones
        counts = votes if by_ballots else {side: self._count(chosen, weights) for side, chosen in sides.items()}
        cast = counts["for"] + counts["against"]
        of = {
            "cast": cast,
            "present": self._whole(weights),
            "eligible": self._eligible_weight if by_ballots else self.eligible,
        }[test.of]
        kind, limit = threshold(test)
        share, bar = counts[test.side] * limit.denominator, of * limit.numerator
        holds = _COMPARISONS[kind](share, bar).astype(bool)
        majority = (test.side, test.of, kind, limit) == ("for", "cast", "more_than", _HALF)
        if majority and self._casting is not None:
            holds |= (share == bar).astype(bool) & (beliefs[:, self._casting] > self._for_above)
        return holds

    def _count(self, chosen: NDArray[np.bool_], weights: NDArray) -> NDArray:
        return chosen.astype(self._whole_type) @ weights

    @staticmethod
    def _whole(weights: NDArray) -> int:
        return int(weights.sum())

    def _as_ballots(self, counts: NDArray) -> Floats:
        """Whole numbers back to ballots; the true quotient of integers of any size, rounded once."""
        if max(self._eligible_weight, self._unit) < 2**53:  # doubles hold both exactly
            return counts.astype(np.float64) / self._unit
        largest = int(sys.float_info.max) * self._unit
        return np.array([min(count, largest) / self._unit for count in counts.tolist()], dtype=float)
