"""What the result hangs on: how far each guess moves it, a start, a row of points, an own view or a firmness.

The *result* is the mean belief of those present, at the plan's end and in the long run (the average over a swing).
Every figure is what a rehearsal with that one change would give, not a slope; only `arrows_at_end` and
`arrows_in_long_run`, which are for drawing, are slopes.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np

from deliberate.dynamics.leverage import (
    FULL_PEOPLE,
    Lasting,
    RowChanges,
    pull_at_end,
    pull_in_long_run,
    results_at_end,
    results_in_long_run,
    weight_shares,
    with_row,
)
from deliberate.dynamics.longrun import long_run
from deliberate.dynamics.process import Process
from deliberate.dynamics.rounds import play
from deliberate.errors import DeliberateError
from deliberate.rehearsal.assemble import Assembly, assemble
from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.results import Floats
from deliberate.rehearsal.words import amount, decimals, isolated, number, percent, shown_names
from deliberate.scenario.values import Question, Scenario, Variant

POINTS = 10.0  # of 100: what rows, own views and firmness are changed by
STEPS_IN_SCALE = 5  # the step of a start is the largest power of ten that fits so often into the scale
MOST_REPLAYED = 100  # people; with a hearing range or a repeated plan every change is played by itself
ROUNDING = 1e-9
MOST_PULL = 1e290  # times what is rounding; beyond, differences would overflow
NOTHING = 5e-4  # of the scale's width: a smaller change is told as none

LeverKind = Literal["start", "move", "own-view", "firmness"]


@dataclass(frozen=True)
class Lever:
    """One guess and how far it moves the result, on the question's scale.

    amount: by how much the start is higher, or how many points of 100 are moved. people and arrows are those to
    light up, arrows as (listener, source).
    """

    kind: LeverKind
    says: str
    amount: float
    at_end: float
    in_long_run: float
    people: tuple[str, ...]
    arrows: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, eq=False)
class Leverage:
    """What a result hangs on, the largest first by what it moves at the plan's end.

    step: that of the starts. result_at_end, result_in_long_run: on the question's scale; 0 where nobody is present.
    arrows_at_end, arrows_in_long_run: (arrows,) what ten points more for each arrow of the variant would move, the
    listener's others making room in proportion, at the rate of the first; None, or NaN for one arrow, where there is
    no such rate.
    """

    variant: str
    question: str
    step: float
    result_at_end: float
    result_in_long_run: float
    levers: tuple[Lever, ...]
    arrows_at_end: Floats | None
    arrows_in_long_run: Floats | None


def leverage(scenario: Scenario, variant: str | None = None, question: str | None = None) -> Leverage:
    """How far each start, row, own view and firmness moves the mean belief of those present.

    `variant` is a name and `question` an id; left out, the first ones. Raises DeliberateError for names that are
    not in the scenario and for meetings that are too large.
    """
    setup, asked = pick_variant(scenario, variant), pick_question(scenario, question)
    _require_size(setup, asked)
    return _Levers(setup, asked, assemble(setup, asked)).found()


def step_of(question: Question) -> float:
    """The step by which starts are moved: 10 on a scale from 0 to 100, 1 from 1 to 9, 0.1 from 0 to 1."""
    return 10.0 ** math.floor(math.log10(question.width / STEPS_IN_SCALE) + ROUNDING)


def _require_size(variant: Variant, question: Question) -> None:
    replayed = question.hearing_range is not None or variant.plan.afterwards == "repeat"
    most = MOST_REPLAYED if replayed else FULL_PEOPLE
    if len(variant.people) > most:
        when = "with a hearing range or a repeated plan leverage" if replayed else "leverage"
        raise _too_large(when, most, len(variant.people))


def _too_large(what: str, most: int, people: int) -> DeliberateError:
    return DeliberateError(f"{what} is worked out for up to {most:,} people, there are {people:,}")


@dataclass(frozen=True)
class _Guess:
    """One change before it is computed: in words, and what it does to one person's row."""

    kind: LeverKind
    person: int
    condition: str
    amount: float
    row: Floats
    firmness: float
    others: tuple[int, ...] = ()


class _Levers:
    def __init__(self, variant: Variant, question: Question, sketch: Assembly) -> None:
        self.variant = variant
        self.question = question
        self.people = sketch.people
        self.process = sketch.process
        self.starts = sketch.starts
        self.present = sketch.process.network.present
        self.voice = self.present / max(int(self.present.sum()), 1)
        self.rounds = variant.plan.rounds
        self.weights = weight_shares(sketch.process.network)
        known = shown_names(variant)
        self.names = [isolated(known[person]) for person in sketch.people]
        linear = question.hearing_range is None and not sketch.process.repeat
        self.lasting = Lasting.of(self.process, self.voice) if linear else None
        small = len(sketch.people) <= MOST_REPLAYED
        self.replayed = self.lasting is None or (small and not self.lasting.accurate)
        if not (self.replayed or self.lasting.usable):
            raise _too_large("where groups hardly hear each other leverage", MOST_REPLAYED, len(sketch.people))

    def found(self) -> Leverage:
        at_end, in_long_run = self._results(self.process, self.starts)
        pull_end, counts_end = pull_at_end(self.process, self.starts, self.rounds, self.voice)
        guesses = list(self._guesses(pull_end))
        levers = list(self._of_rows(guesses, at_end, in_long_run))
        if self.lasting is not None:
            pull_long, counts_long = pull_in_long_run(self.process, self.starts, self.lasting)
            levers += self._of_starts(counts_end, counts_long)
            arrows_end, arrows_long = self._of_arrows(pull_end), self._of_arrows(pull_long)
        else:
            levers += self._of_starts_replayed(at_end, in_long_run)
            arrows_end = arrows_long = None
        slack = ROUNDING * self.question.width
        order = sorted(
            levers, key=lambda one: (-round(abs(one.at_end) / slack), -round(abs(one.in_long_run) / slack))
        )
        return Leverage(
            variant=self.variant.name,
            question=self.question.id,
            step=step_of(self.question),
            result_at_end=at_end,
            result_in_long_run=in_long_run,
            levers=tuple(order),
            arrows_at_end=arrows_end,
            arrows_in_long_run=arrows_long,
        )

    def _results(self, process: Process, starts: Floats) -> tuple[float, float]:
        reach, width = self.question.hearing_range, self.question.width
        ends = play(process, starts, self.rounds, reach, width)[-1]
        fate = long_run(process, starts, scale_width=width, hearing_range=reach)
        return float(self.voice @ ends), float(self.voice @ fate.average)

    # Which changes are looked at

    def _guesses(self, pull: Floats) -> Iterator[_Guess]:
        for person in np.flatnonzero(self.present).tolist():
            row, firm = self.weights[person], float(self.process.firmness[person])
            heard = np.flatnonzero((row > 0) & (np.arange(len(row)) != person))
            part = POINTS / 100
            if firm + part <= 1:
                yield self._firmer(person, row, firm)
            if not len(heard) or firm == 1:
                continue
            if row[person] + part < 1 - ROUNDING:
                yield self._more_own_view(person, row, firm)
            yield from self._moved(person, row, firm, heard, pull[person])

    def _firmer(self, person: int, row: Floats, firm: float) -> _Guess:
        more = firm + POINTS / 100
        condition = f"{self.names[person]} brought back {percent(more)} of the start in every round"
        condition += f" instead of {percent(firm)}" if firm else ""
        return _Guess("firmness", person, condition, POINTS, row, more)

    def _more_own_view(self, person: int, row: Floats, firm: float) -> _Guess:
        own = row[person] + POINTS / 100
        changed = row * ((1 - own) / (1 - row[person]))
        changed[person] = own
        condition = f"the own view of {self.names[person]} counted for {amount(POINTS)} of 100 points more"
        return _Guess("own-view", person, condition, POINTS, changed, firm)

    def _moved(self, person: int, row: Floats, firm: float, heard: Sequence[int], pull: Floats) -> Iterator[_Guess]:
        """The move within a row, between two of its voices, that counts most; something stays with either.

        Where several count alike the own view is taken, so that people who are placed alike are told alike.
        """
        part = POINTS / 100
        slack = ROUNDING * self.question.width
        pull = np.round(np.clip(pull, -MOST_PULL * slack, MOST_PULL * slack) / slack)
        voices = np.array([person, *heard])
        able = voices[row[voices] > part + ROUNDING]
        pairs = [(abs(pull[to] - pull[away]), away, to) for away in able for to in _ends(voices, pull) if to != away]
        if not pairs:
            return
        _, away, to = max(pairs, key=lambda pair: pair[0])
        changed = row.copy()
        changed[[away, to]] += -part, part
        name = self.names[person]
        to_whom, from_whom = ("the own view" if one == person else self.names[one] for one in (to, away))
        condition = f"{name} gave {amount(POINTS)} of 100 points to {to_whom} instead of {from_whom}"
        others = tuple(int(one) for one in (to, away) if one != person)
        yield _Guess("move", person, condition, POINTS, changed, firm, others)

    # What they do

    def _of_rows(self, guesses: Sequence[_Guess], at_end: float, in_long_run: float) -> Iterator[Lever]:
        if not guesses:
            return
        changes = RowChanges(
            np.array([guess.person for guess in guesses]),
            np.array([guess.row for guess in guesses]),
            np.array([guess.firmness for guess in guesses]),
        )
        if self.replayed:
            ends, lasting = map(np.array, zip(*map(self._played, guesses), strict=True))
        else:
            ends = results_at_end(self.process, self.starts, self.rounds, self.voice, changes)
            lasting = results_in_long_run(self.process, self.starts, self.lasting, changes)
            for at in np.flatnonzero(np.isnan(lasting)).tolist():
                _, lasting[at] = self._played(guesses[at])
        for guess, end, last in zip(guesses, ends.tolist(), lasting.tolist(), strict=True):
            listener = self.people[guess.person]
            others = tuple(self.people[one] for one in guess.others)
            yield self._lever(
                guess.kind,
                guess.condition,
                guess.amount,
                (end - at_end, last - in_long_run),
                (listener, *others),
                tuple((listener, one) for one in others),
            )

    def _played(self, guess: _Guess) -> tuple[float, float]:
        """The results with one change, by a run of its own."""
        return self._results(with_row(self.process, guess.person, guess.row, guess.firmness), self.starts)

    def _of_starts(self, at_end: Floats, in_long_run: Floats) -> Iterator[Lever]:
        step = step_of(self.question)
        for person in np.flatnonzero(self.present).tolist():
            moved = (step * float(at_end[person]), step * float(in_long_run[person]))
            yield self._start_lever(person, step, moved)

    def _of_starts_replayed(self, at_end: float, in_long_run: float) -> Iterator[Lever]:
        """As `_of_starts`; a start near the upper end of the scale is moved down, told as if it were up."""
        step = step_of(self.question)
        for person in np.flatnonzero(self.present).tolist():
            sign = 1 if self.starts[person] + step <= self.question.high else -1
            starts = self.starts.copy()
            starts[person] += sign * step
            end, last = self._results(self.process, starts)
            yield self._start_lever(person, step, (sign * (end - at_end), sign * (last - in_long_run)))

    def _start_lever(self, person: int, step: float, moved: tuple[float, float]) -> Lever:
        condition = f"{self.names[person]} started {number(step, self.question)} higher"
        return self._lever("start", condition, step, moved, (self.people[person],), ())

    def _lever(
        self,
        kind: LeverKind,
        condition: str,
        amount: float,
        moved: tuple[float, float],
        people: tuple[str, ...],
        arrows: tuple[tuple[str, str], ...],
    ) -> Lever:
        says = f"If {condition}, {moves_in_words(moved, self.question)}."
        return Lever(kind, says, amount, *moved, people, arrows)

    def _of_arrows(self, pull: Floats) -> Floats:
        network = self.process.network
        mean = np.where(self.weights > 0, self.weights * pull, 0.0).sum(axis=1)
        share = self.weights[network.listener, network.source]
        slope = pull[network.listener, network.source] - mean[network.listener]
        alone = share >= 1 - ROUNDING
        effects = np.where(alone, 0.0, POINTS / 100 * slope / np.where(alone, 1.0, 1 - share))
        effects.flags.writeable = False
        return effects


def _ends(voices: Sequence[int], pull: Floats) -> tuple[int, int]:
    """The voices that pull the result lowest and highest."""
    by_pull = sorted((int(one) for one in voices), key=lambda one: pull[one])
    return by_pull[0], by_pull[-1]


def moves_in_words(moved: tuple[float, float], question: Question) -> str:
    """What a change at the plan's end and one in the long run do to the mean: "the mean would be ..."."""
    end, last = (_higher(change, question) for change in moved)
    if end == last:
        same = "the mean would stay as it is"
        return same if end is None else f"the mean would be {end}, at the plan's end and in the long run"
    when_end = f"be {end} at the plan's end" if end else "be the same at the plan's end"
    when_last = f"{last} in the long run" if last else "the same in the long run"
    return f"the mean would {when_end} and {when_last}"


def _higher(change: float, question: Question) -> str | None:
    if abs(change) < NOTHING * question.width:
        return None
    size = round(abs(change), decimals(question) + 6)  # equal figures read alike whatever their last bits
    return f"{number(size, question)} {'higher' if change > 0 else 'lower'}"
