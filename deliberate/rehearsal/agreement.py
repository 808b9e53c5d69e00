"""Whether beliefs amount to an agreement, by definitions fixed beforehand.

Each test looks at the people present with a vote, one belief each, however many ballots they cast. A test
other than RAND/UCLA is met ("agreement") or not met ("neither"): not meeting a bar is no disagreement.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from deliberate.rehearsal.ballots import rounding
from deliberate.rehearsal.results import Agreement, Floats, Verdict
from deliberate.scenario.rules import exact
from deliberate.scenario.values import AgreementTest, Person, Question

Figures = tuple[NDArray[np.bool_], NDArray[np.bool_], Floats]  # agreement, disagreement, figure, each (k,)

RAND_PANELS = range(8, 17)
_THIRD_STARTS = (4, 7)  # 1-3, 4-6, 7-9


def voters(people: Sequence[Person]) -> NDArray[np.intp]:
    """Where the people present with a vote stand in the list."""
    return np.flatnonzero(np.fromiter((p.present and p.ballots > 0 for p in people), bool, len(people)))


def judge(question: Question, people: Sequence[Person], beliefs: Floats) -> tuple[tuple[Agreement, ...], ...]:
    """The verdicts of the question's agreement tests on k lists of beliefs, shape (k, people).

    Where nobody present has a vote every verdict is "neither", with the figure 0.
    """
    held = beliefs[:, voters(people)]
    if held.shape[1] == 0:
        return (tuple(Agreement(test, "neither", 0.0) for test in question.agreement),) * len(held)
    columns = [_verdicts(test, held, rounding(question)) for test in question.agreement]
    return tuple(zip(*columns, strict=True)) if columns else ((),) * len(held)


def notes(question: Question, people: Sequence[Person]) -> tuple[str, ...]:
    """What a reader should know about the tests on this group: RAND/UCLA has no rule for every panel size."""
    size = len(voters(people))
    if size in RAND_PANELS or all(test.test != "rand-ucla" for test in question.agreement):
        return ()
    return (
        f"the RAND/UCLA test is defined for 8 to 16 people; {size} are present with a vote, so it says neither"
        " agreement nor disagreement",
    )


def _verdicts(test: AgreementTest, held: Floats, slack: float) -> list[Agreement]:
    agrees, disagrees, figure = _figures(test, held, slack)

    def verdict(agreed: bool, disagreed: bool) -> Verdict:
        return "agreement" if agreed else "disagreement" if disagreed else "neither"

    rows = zip(agrees.tolist(), disagrees.tolist(), figure.tolist(), strict=True)
    return [Agreement(test, verdict(agreed, disagreed), value) for agreed, disagreed, value in rows]


def _figures(test: AgreementTest, held: Floats, slack: float) -> Figures:
    match test.test:
        case "rand-ucla":
            return _rand_ucla(held, slack)
        case "share-within":
            return _share_within(test, held, slack)
        case "quartile-range":
            return _quartile_range(test, held, slack)
        case "spread":
            return _spread(test, held, slack)


def _rand_ucla(held: Floats, slack: float) -> Figures:
    """RAND/UCLA Appropriateness Method (Fitch et al. 2001; table in BMC Med. Inform. Decis. Mak. 2012;12:93).

    Ratings are beliefs rounded half up. A median between two thirds (3.5, 6.5) counts to the upper one, as the
    method's handbook has it (from memory). The figure is how many ratings lie outside the median's third.
    """
    ratings = np.floor(held + 0.5 + slack)
    thirds = np.searchsorted(_THIRD_STARTS, ratings, side="right")
    # Rounding the median itself half up moves 3.5 and 6.5 to the upper third and no other median across.
    median_third = np.searchsorted(_THIRD_STARTS, np.floor(np.median(ratings, axis=1) + 0.5), side="right")
    outside = (thirds != median_third[:, None]).sum(axis=1)
    both_ends = np.minimum((thirds == 0).sum(axis=1), (thirds == 2).sum(axis=1))
    size = held.shape[1]
    if size not in RAND_PANELS:
        neither = np.zeros(len(held), bool)
        return neither, neither, outside.astype(float)
    most_outside = 2 + (size - 8) // 3  # panels of 8-10, 11-13, 14-16: 2, 3, 4
    return outside <= most_outside, both_ends > most_outside, outside.astype(float)


def _share_within(test: AgreementTest, held: Floats, slack: float) -> Figures:
    inside = ((held >= test.low - slack) & (held <= test.high + slack)).sum(axis=1)
    bar = exact(test.at_least)
    met = np.array([count >= bar * held.shape[1] for count in inside.tolist()], bool)
    return met, np.zeros_like(met), inside / held.shape[1]


def _quartile_range(test: AgreementTest, held: Floats, slack: float) -> Figures:
    """Upper less lower quartile, linearly interpolated (Hyndman and Fan 1996, type 7)."""
    lower, upper = np.percentile(held, (25, 75), axis=1)
    return _at_most(test, upper - lower, slack)


def _spread(test: AgreementTest, held: Floats, slack: float) -> Figures:
    return _at_most(test, held.max(axis=1) - held.min(axis=1), slack)


def _at_most(test: AgreementTest, figure: Floats, slack: float) -> Figures:
    met = figure <= test.at_most + slack
    return met, np.zeros_like(met), figure
