"""Where the curves of a rehearsal end, in figures and words for the chart. Free of Qt."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from deliberate.rehearsal.results import Rehearsal
from deliberate.rehearsal.words import ballot, number, votes
from deliberate.scenario.values import Question

MOST_LINES = 4
SAME = 0.004  # of the scale: closer endings share a line


@dataclass(frozen=True)
class Endings:
    """Values to draw dashed, each with its label, and a warning when the views never settle."""

    lines: tuple[tuple[float, str], ...]
    warning: str = ""


def endings(rehearsal: Rehearsal, question: Question, present: NDArray[np.bool_]) -> Endings:
    """The limit of those present, or all values of their swing when there is none."""
    if not present.any():
        return Endings(())
    if rehearsal.limit is not None:
        values = clusters(rehearsal.limit[present], SAME * question.width)
        if len(values) > MOST_LINES:
            values = [values[0], values[-1]]
            return Endings(tuple((value, f"from {_n(value, question)}" if i == 0 else f"to {_n(value, question)}")
                                 for i, value in enumerate(values)))  # fmt: skip
        return Endings(tuple((value, f"ends at {_n(value, question)}") for value in values))
    if rehearsal.cycle is None:
        return Endings((), "keeps swinging")
    lists = rehearsal.cycle.beliefs[:, present]
    swinging = np.ptp(lists, axis=0) > SAME * question.width / 4
    values = clusters(lists[:, swinging].ravel(), SAME * question.width) if swinging.any() else []
    shown = values if len(values) <= MOST_LINES else [values[0], values[-1]]
    calm = clusters(lists[0, ~swinging], SAME * question.width)[: MOST_LINES - 1]
    lines = [(value, _n(value, question)) for value in shown]
    lines += [(value, f"ends at {_n(value, question)}") for value in calm if len(calm) + len(shown) <= MOST_LINES]
    words = [_n(value, question) for value in shown]
    return Endings(tuple(lines), f"keeps swinging between {', '.join(words[:-1])} and {words[-1]}" if words else "")


def clusters(values: NDArray[np.float64], apart: float) -> list[float]:
    """Means of the runs of sorted `values` in which neighbours lie at most `apart` from each other."""
    if not len(values):
        return []
    ordered = np.sort(values)
    runs = np.split(ordered, np.flatnonzero(np.diff(ordered) > apart) + 1)
    return [float(run.mean()) for run in runs]


def ballot_in_words(rehearsal: Rehearsal) -> str:
    """What the votes of all rounds come to, in one line."""
    if rehearsal.ballot is None:
        return ""
    passes = [tally.passes for tally in rehearsal.ballot]
    last = rehearsal.ballot[-1]
    counts = votes(last)
    if all(passes):
        return f"{counts}: passes at every round"
    if not last.quorum_met or not last.in_favour + last.against + last.abstain:
        return ballot(last)
    if not any(passes):
        return f"{counts}: does not pass at any round"
    changes = [at for at in range(1, len(passes)) if passes[at] != passes[at - 1]]
    if len(changes) == 1:
        at = changes[0]
        return f"{counts}: passes from round {at} on" if passes[-1] else f"{counts}: passes only up to round {at - 1}"
    return f"{counts}: {'passes' if passes[-1] else 'does not pass'} at the end, changes {len(changes)} times"


def _n(value: float, question: Question) -> str:
    return number(value, question)
