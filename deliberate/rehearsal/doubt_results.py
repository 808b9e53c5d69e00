"""What drawing the guesses many times gives back: bands, odds, and the guesses that most of the doubt hangs on.

Arrays over people follow `Doubt.people`, arrays over rounds start with round 0, and bands have their LEVELS in the
first axis. All arrays are read-only.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from deliberate.rehearsal.results import Finding, Floats

LEVELS = (0.10, 0.25, 0.50, 0.75, 0.90)


@dataclass(frozen=True)
class Concentration:
    """How closely rows are drawn around their shares, by where a weight comes from (see `draws.RowSource`).

    A share of s of 100 varies by about sqrt(s (100 - s) / (k + 1)): with the defaults a share of 30 is drawn give or
    take 14 where it is a guess, 7 where it was stated and 4 where it was observed. Four times k halves that. inf
    takes the shares as they are. The values are common sense, not measurements.
    """

    guess: float = 10.0
    stated: float = 40.0
    observed: float = 160.0


@dataclass(frozen=True)
class Odds:
    """In what share of the draws something holds, and how far that is the odds themselves.

    error: half the width of Wilson's interval for one standard deviation (Wilson 1927), which does not vanish where
    all draws agree. sure: what share the commoner of the two, holding or not, has at least, to two standard
    deviations. Both are those of independent draws; draws of starts are spread more evenly, so they are on the safe
    side.
    """

    share: float
    error: float
    sure: float

    @staticmethod
    def of(hits: float, draws: int) -> Odds:
        """The odds when `hits` of `draws` draws show it."""
        share = hits / draws
        _, error = _wilson(share, draws, 1.0)
        middle, width = _wilson(max(share, 1 - share), draws, 2.0)
        return Odds(share, error, middle - width)

    @property
    def against(self) -> Odds:
        """The odds of the opposite."""
        return Odds(1 - self.share, self.error, self.sure)


ALWAYS = Odds(1.0, 0.0, 1.0)


def _wilson(share: float, draws: int, deviations: float) -> tuple[float, float]:
    """The middle of Wilson's interval for a share, and half its width."""
    squared = deviations**2 / draws
    width = math.sqrt(squared * share * (1 - share) + squared**2 / 4)
    return (share + squared / 2) / (1 + squared), width / (1 + squared)


Call = Literal["too-close", "leans", "nearly-all", "all"]

# What the commoner outcome has of the draws at least, to two standard deviations.
LEANS_FROM = 0.80
NEARLY_ALL_FROM = 0.95


def call_of(odds: Odds) -> Call:
    """How sure the draws are, whichever way, and never surer than that."""
    if odds.sure < LEANS_FROM:
        return "too-close"
    if odds.sure < NEARLY_ALL_FROM:
        return "leans"
    return "all" if odds.share in (0.0, 1.0) else "nearly-all"


@dataclass(frozen=True, eq=False)
class VoteDoubt:
    """The ballot over all draws. passes: by round; in_favour, against: (levels, rounds + 1) bands of the ballots.

    passes_in_long_run: None where views swing, since there is no limit to vote on.
    """

    passes: tuple[Odds, ...]
    passes_in_long_run: Odds | None
    in_favour: Floats
    against: Floats
    quorum_met: bool


@dataclass(frozen=True)
class FindingOdds:
    """How often a finding of the sketch holds in the draws.

    by_structure: it follows from which arrows there are and who is present, which is the same in all draws.
    odds: None where it is not looked at in the draws.
    """

    finding: Finding
    odds: Odds | None
    by_structure: bool


@dataclass(frozen=True)
class Guess:
    """One guess that the doubt hangs on: a person's start, or the row of points of a listener.

    share: part of the variance of the outcome that would go on average if this guess were known; error: its
    standard error. says: one sentence.
    """

    kind: Literal["start", "row"]
    person: str
    share: float
    error: float
    says: str


@dataclass(frozen=True, eq=False)
class Doubt:
    """Everything drawn: `draws` times, from `seed`, rows with `concentration`.

    mean is the mean view of those present (0 where nobody is); spread, and what is said about it, is that of the
    people who take part in the talk. settles: there is a limit (no swing). agrees: the spread is within `tolerance`
    at the plan's end. The long run is the average over a swing where there is one. hangs_on: at most three guesses,
    the weightiest first, about the vote or about the mean view of those present at the plan's end (`hangs_about`).
    says: the vote, or the mean view where there is no vote.
    """

    variant: str
    question: str
    people: tuple[str, ...]
    draws: int
    seed: int
    concentration: Concentration
    beliefs: Floats  # (levels, rounds + 1, people)
    long_run: Floats  # (levels, people)
    mean: Floats  # (levels, rounds + 1)
    mean_in_long_run: Floats  # (levels,)
    spread: Floats  # (levels, rounds + 1)
    spread_in_long_run: Floats  # (levels,)
    settles: Odds
    agrees: Odds
    tolerance: float
    vote: VoteDoubt | None
    findings: tuple[FindingOdds, ...]
    hangs_on: tuple[Guess, ...]
    hangs_about: Literal["vote", "mean"]
    says: str
    notes: tuple[str, ...]
