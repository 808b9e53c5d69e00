"""Which guesses, if asked about again, would narrow the doubt most."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from deliberate.dynamics.explained import Association, Explained
from deliberate.rehearsal.doubt_draws import Chunk, GuessedMeeting
from deliberate.rehearsal.doubt_results import Guess
from deliberate.rehearsal.results import Floats
from deliberate.rehearsal.words import listing, percent

TOLD = 3
# What is told explains more than noise would in one of a hundred such lists, and enough to be worth a question.
CHANCE = 0.01
WORTH_ASKING = 0.02

Outcome = Literal["vote", "mean"]
OUTCOMES: tuple[Outcome, ...] = ("vote", "mean")


@dataclass(frozen=True, eq=False)
class _Open:
    """One guess and the sums of its draws. A start goes in with its square and cube, because what it explains of a
    vote is a step; a row with its own share and those of `arrows`, all but one, since shares sum to 1."""

    kind: Literal["start", "row"]
    person: int
    arrows: NDArray[np.intp]
    sums: Association


class Guesses:
    """All guesses of a meeting; `add` takes the draws, `weightiest` ranks the guesses."""

    def __init__(self, meeting: GuessedMeeting) -> None:
        self._meeting = meeting
        sketch = meeting.sketch
        present = sketch.present
        votes = sketch.rehearsal.ballot
        passed = 0.5 if votes is None else float(votes[-1].passes)
        self._centre = np.array([passed, self._mean(sketch.ends)])
        self._open = [
            _Open("start", int(person), np.zeros(0, dtype=np.intp), Association(np.zeros(3), self._centre))
            for person in np.flatnonzero((meeting.high > meeting.low) & present)
        ]
        listener = meeting.rows.listener
        for person in np.flatnonzero(meeting.rows.doubtful & present).tolist():
            arrows = np.flatnonzero((listener == person) & (meeting.rows.share > 0))[:-1]
            centre = np.concatenate([meeting.rows.own[[person]], meeting.rows.share[arrows]])
            self._open.append(_Open("row", person, arrows, Association(centre, self._centre)))

    def __len__(self) -> int:
        return len(self._open)

    def _mean(self, beliefs: Floats) -> Floats:
        """The mean belief of those present; 0 where nobody is."""
        present = self._meeting.sketch.present
        return beliefs[present].mean(axis=0) if present.any() else np.zeros(beliefs.shape[1:])

    def add(self, chunk: Chunk) -> None:
        """More draws."""
        mean = self._mean(chunk.played[-1])
        passes = np.zeros(chunk.draws) if chunk.tallies is None else chunk.by_round(chunk.tallies.passes)[-1]
        outcomes = np.stack([passes.astype(float), mean])
        for guess in self._open:
            guess.sums.add(self._numbers(guess, chunk), outcomes)

    def _numbers(self, guess: _Open, chunk: Chunk) -> Floats:
        if guess.kind == "row":
            return np.concatenate([chunk.rows.own[[guess.person]], chunk.rows.weight[guess.arrows]])
        low, high = self._meeting.low[guess.person], self._meeting.high[guess.person]
        start = (2 * chunk.starts[guess.person] - low - high) / (high - low)
        return np.stack([start, start**2, start**3])

    def weightiest(self, outcome: Outcome) -> tuple[Guess, ...]:
        """At most three guesses that explain most of the variance of the outcome, noise left out."""
        found = [(guess, guess.sums.explained(OUTCOMES.index(outcome))) for guess in self._open]
        told = [
            (guess, explained)
            for guess, explained in found
            if explained.chance <= CHANCE / len(found) and explained.share >= WORTH_ASKING
        ]
        told.sort(key=lambda pair: -pair[1].share)
        return tuple(self._told(guess, explained, outcome) for guess, explained in told[:TOLD])

    def _told(self, guess: _Open, explained: Explained, outcome: Outcome) -> Guess:
        sketch = self._meeting.sketch
        name = sketch.names([guess.person])
        what = self._start(guess.person, name) if guess.kind == "start" else self._row(guess, name)
        of = "the vote" if outcome == "vote" else "the mean view at the plan's end"
        says = f"{what}: about {percent(explained.share)} of the doubt about {of}."
        return Guess(guess.kind, sketch.rehearsal.people[guess.person], explained.share, explained.error, says)

    def _start(self, person: int, name: str) -> str:
        sketch, meeting = self._meeting.sketch, self._meeting
        low, high = sketch.number(meeting.low[person]), sketch.number(meeting.high[person])
        if sketch.variant.people[person].id in sketch.rehearsal.unknown_starts:
            return f"Where {name} starts, which is not known"
        return f"Where {name} starts, between {low} and {high}"

    def _row(self, guess: _Open, name: str) -> str:
        arrows = self._meeting.sketch.variant.arrows
        person = self._meeting.sketch.rehearsal.people[guess.person]
        bases = {arrow.basis for arrow in arrows if arrow.listener == person}
        return f"Whose view counts how much for {name} ({listing(list(_in_words(sorted(bases))))})"


def _in_words(bases: Sequence[str]) -> Iterator[str]:
    """Where the points of a row come from."""
    for basis in bases:
        yield {"guess": "guessed", "stated": "stated", "observed": "observed"}[basis]
