"""The figures by which set-ups of one meeting are laid side by side, in words. One wording wherever they stand."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from deliberate.rehearsal.results import Rehearsal
from deliberate.rehearsal.words import ballot, number, with_unit
from deliberate.scenario.values import Question, Variant

SETTLES = "Settles"
LIMIT = "In the long run"
AGREE = "Agree within 1 % of the scale"
SPREAD = "Spread at the plan's end"
VOICES = "Effective voices"
VOTE = "Vote at the plan's end"
HEADINGS = (SETTLES, LIMIT, AGREE, SPREAD, VOICES, VOTE)
SWINGS = "keeps swinging"
NOBODY = "nobody present"


@dataclass(frozen=True)
class Course:
    """Highest, mean and lowest belief of those present, spread, and ballots in favour, after each round, shape
    (rounds + 1,).

    Without anybody present the beliefs are NaN; `in_favour` is None where nothing is voted on.
    """

    highest: NDArray[np.float64]
    mean: NDArray[np.float64]
    lowest: NDArray[np.float64]
    spread: NDArray[np.float64]
    in_favour: NDArray[np.float64] | None


def course(rehearsal: Rehearsal, variant: Variant) -> Course:
    """How a rehearsal of `variant` goes from round to round, on the whole."""
    beliefs = rehearsal.rounds[:, present(variant)]
    ballot = rehearsal.ballot
    in_favour = None if ballot is None else np.array([tally.in_favour for tally in ballot])
    if not beliefs.shape[1]:
        nothing = np.full(len(beliefs), np.nan)
        return Course(nothing, nothing, nothing, rehearsal.spread, in_favour)
    return Course(beliefs.max(axis=1), beliefs.mean(axis=1), beliefs.min(axis=1), rehearsal.spread, in_favour)


def figures(rehearsal: Rehearsal, variant: Variant, question: Question) -> tuple[str, ...]:
    """What stands under each of `HEADINGS`."""
    return (
        "yes" if rehearsal.settles else SWINGS,
        limit(rehearsal, variant, question),
        agree(rehearsal),
        spread(rehearsal, question),
        voices(rehearsal),
        vote(rehearsal),
    )


def limit(rehearsal: Rehearsal, variant: Variant, question: Question) -> str:
    """Where those present end: on one figure, on views from one to another, or in a swing between two."""
    here = present(variant)
    if not here.any():
        return NOBODY
    if rehearsal.limit is None and rehearsal.cycle is None:
        return SWINGS
    ends = rehearsal.limit[None] if rehearsal.limit is not None else rehearsal.cycle.beliefs  # type: ignore[union-attr]
    low, high = (number(float(value), question) for value in (ends[:, here].min(), ends[:, here].max()))
    unit = f" {question.unit}" if question.unit else ""
    if low == high:
        return f"{low}{unit}"
    return f"{low} to {high}{unit}" if rehearsal.limit is not None else f"between {low} and {high}{unit}"


def agree(rehearsal: Rehearsal) -> str:
    """From which round on all are within the tolerance of each other, if ever."""
    if not rehearsal.settles:
        return SWINGS
    if rehearsal.rounds_to_agree is None:
        return "no common view"
    return f"round {rehearsal.rounds_to_agree}"


def spread(rehearsal: Rehearsal, question: Question) -> str:
    """How far apart views are at the plan's end."""
    return with_unit(float(rehearsal.spread[-1]), question)


def voices(rehearsal: Rehearsal) -> str:
    """As if by how many equal voices the result is carried."""
    return f"{rehearsal.effective_voices:.1f}"


def vote(rehearsal: Rehearsal) -> str:
    """The ballots at the plan's end and what they come to."""
    return ballot(rehearsal.ballot[-1]) if rehearsal.ballot else "no vote"


def present(variant: Variant) -> NDArray[np.bool_]:
    """Who of the variant is there, shape (people,)."""
    return np.array([person.present for person in variant.people], dtype=bool)
