"""Playing a meeting with its guesses drawn again and again, some draws at a time."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from deliberate.dynamics.drawn_talk import ELIMINATED_PEOPLE, BrokenOff, DrawnEnd, DrawnFate, DrawnTalk
from deliberate.dynamics.draws import Rows, RowSource, draw_starts
from deliberate.dynamics.network import Mask
from deliberate.dynamics.progress import Stopped
from deliberate.rehearsal.ballots import Tallies
from deliberate.rehearsal.doubt_results import Concentration
from deliberate.rehearsal.findings.sketch import Sketch
from deliberate.rehearsal.results import Floats

# Numbers worked on at a time: small enough to stay near the processor, and to look up often whether to stop.
MATRIX_NUMBERS, LARGEST_MATRIX_NUMBERS, ARROW_NUMBERS = 100_000, 500_000, 500_000
SMALLEST_CHUNK, LARGEST_CHUNK = 16, 256


@dataclass(frozen=True, eq=False)
class Chunk:
    """d draws: rows, starts (n, d), beliefs played (rounds + 1, n, d), their long run (n, d) with the draws (d,) that
    settle, and the ballots (k = (rounds + 1) d of them, round by round) of a question with a vote. end: the maps
    behind the long run, where it was not found by stepping."""

    rows: Rows
    starts: Floats
    played: Floats
    long_run: Floats
    settles: Mask
    tallies: Tallies | None
    end: DrawnEnd | None

    @property
    def draws(self) -> int:
        """How many draws these are."""
        return self.starts.shape[1]

    def by_round(self, counted: NDArray) -> NDArray:
        """(rounds + 1, d) from one array of `tallies`."""
        return counted.reshape(len(self.played), -1)


class GuessedMeeting:
    """A meeting with the ranges its guesses are drawn from; `chunks` draws and plays them.

    starts are drawn between `low` and `high` (n,): the margin around the belief as far as it lies on the scale, the
    whole scale where nothing is known.
    """

    def __init__(self, sketch: Sketch, concentration: Concentration) -> None:
        self.sketch = sketch
        self.process = sketch.assembly.process
        people, question = sketch.variant.people, sketch.question
        margins = np.array([person.margins.get(question.id, 0.0) for person in people])
        unknown = np.array([question.id not in person.beliefs for person in people], dtype=bool)
        self.low = np.where(unknown, question.low, np.maximum(sketch.starts - margins, question.low))
        self.high = np.where(unknown, question.high, np.minimum(sketch.starts + margins, question.high))
        by_basis = {
            "guess": concentration.guess,
            "stated": concentration.stated,
            "observed": concentration.observed,
        }
        self.rows = RowSource(self.process.network, [by_basis[arrow.basis] for arrow in sketch.variant.arrows])
        by_elimination = question.hearing_range is None and len(people) <= ELIMINATED_PEOPLE
        self.fate = DrawnFate(self.process, question.low, question.width) if by_elimination else None

    def chunks(self, draws: int, seed: int, stopped: Stopped) -> Iterator[Chunk]:
        """All draws, some at a time; fewer when `stopped` becomes true."""
        for_starts, for_rows = map(np.random.default_rng, np.random.SeedSequence(seed).spawn(2))
        starts = draw_starts(self.low, self.high, draws, for_starts)
        size = self._chunk_size()
        for first in range(0, draws, size):
            part = starts[:, first : first + size]
            rows = self.rows.draw(part.shape[1], for_rows)
            try:
                yield self._chunk(rows, part, stopped)
            except BrokenOff:
                return

    def _chunk_size(self) -> int:
        people, arrows = len(self.low), self.process.network.arrows
        size = max(ARROW_NUMBERS // max(people + arrows, 1), 1)
        if self.fate is not None:
            matrix = max(people * people, 1)
            size = min(size, max(MATRIX_NUMBERS // matrix, min(SMALLEST_CHUNK, LARGEST_MATRIX_NUMBERS // matrix)))
        return min(size, LARGEST_CHUNK)

    def _chunk(self, rows: Rows, starts: Floats, stopped: Stopped) -> Chunk:
        talk = self.talk(rows, starts, stopped)
        played = talk.play(self.sketch.plan_rounds)
        end = None if self.fate is None else self.fate.of(talk)
        long_run, settles = (
            talk.step_to_rest(played[-1]) if end is None else end.long_run(played[self.fate.rounds_before])
        )
        return Chunk(rows, starts, played, long_run, settles, self.tallies(played), end)

    def talk(self, rows: Rows, starts: Floats, stopped: Stopped) -> DrawnTalk:
        """The talk with these rows and starts."""
        question = self.sketch.question
        return DrawnTalk(self.process, rows, starts, question.hearing_range, question.width, stopped)

    def tallies(self, played: Floats) -> Tallies | None:
        """The ballots that beliefs (k, n, d) would give: k d of them; None without a vote."""
        electorate = self.sketch.electorate
        if electorate is None:
            return None
        rounds, people, draws = played.shape
        return electorate.tally(np.moveaxis(played, 1, 2).reshape(rounds * draws, people))
