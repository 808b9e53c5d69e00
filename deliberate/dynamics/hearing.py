"""Talk with a hearing range, followed until who hears whom no longer changes; from then on it is plain averaging.

Hegselmann and Krause 2002, Journal of Artificial Societies and Social Simulation 5(3), for equal weights.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from deliberate.dynamics.network import Floats
from deliberate.dynamics.process import Course, Leg, Process
from deliberate.dynamics.rounds import Hearing, mover
from deliberate.dynamics.shares import Shares
from deliberate.dynamics.turns import Turn, followed_by, round_turn

# Beliefs that move less than this in a turn, on the scale's width, have come to rest.
REST = 1e-13
RECURS = 1e-12
# After so many turns without a change in who hears whom, the next change is looked for by squaring.
PATIENCE = 50
SQUARING_PEOPLE = 1000
DOUBLINGS = 50
# So often it is looked for closely; after that only at the ends of stretches.
LOOKS = 20_000
PLAYED_AT_MOST = 20_000
PLAYED_WORK = 3_000_000_000
LONGEST_RECURRENCE = 1_000
# Share matrices are kept so that influence can be traced back to the starts, up to so many numbers.
KEPT_ENTRIES = 50_000_000

BY_STEPPING = (
    "limit found by stepping because of a hearing range; groups and rate are those of the network heard in the end"
)
STILL_MOVING = (
    "who hears whom, or beliefs, still changed after {rounds} rounds; long-run numbers are those of that moment"
)
KEEPS_CHANGING = "who hears whom keeps changing; groups and influence are those of one round among many"
NOT_TRACED = "too many rounds to trace: influence counts beliefs after round {rounds}, not starts"


@dataclass(frozen=True, eq=False)
class Heard:
    """How it went: the course with the networks that were heard, and what the reader should know.

    lists: (d, n) the beliefs that come again for ever while who hears whom keeps changing; None otherwise.
    """

    course: Course
    lists: Floats | None
    notes: tuple[str, ...]


def follow_hearing(process: Process, start: Floats, hearing_range: float, scale_width: float) -> Heard:
    """Follows beliefs from `start` (n,) until who hears whom no longer changes."""
    return _Follower(process, start, hearing_range, scale_width).follow()


class _Follower:
    def __init__(self, process: Process, start: Floats, hearing_range: float, scale_width: float) -> None:
        self._process = process
        self._start = start
        self._scale = scale_width
        self._hearing = Hearing(process, hearing_range, scale_width)
        self._move = mover(process.firmness, start)
        self._beliefs = start
        self._at = 0
        self._legs: list[Leg] | None = []
        self._entries = 0
        self._looks = 0
        blocks = process.blocks
        self._rounds_in_turn = sum(block.rounds for block in blocks) if process.repeat else 1
        self._first_turn = 0 if process.repeat else sum(block.rounds for block in blocks[:-1])

    def follow(self) -> Heard:
        while self._at < self._first_turn:
            self._round()
        people = len(self._start)
        affordable = PLAYED_WORK // max(self._process.network.arrows + people, 1)
        last_at = self._first_turn + min(PLAYED_AT_MOST, affordable)
        before: list[Shares] = []
        unchanged = turns = 0
        mark, mark_at = self._beliefs, 0
        while self._at <= last_at:
            held = self._beliefs
            turn = [self._round() for _ in range(self._rounds_in_turn)]
            same = len(turn) == len(before) and all(a is b for a, b in zip(turn, before, strict=True))
            unchanged = unchanged + 1 if same else 0
            before = turn
            # Beliefs that come again while who hears whom changes do so for ever (found as in Brent 1980).
            turns += 1
            if unchanged < turns - mark_at - 1 and self._moved(mark) <= RECURS:
                return self._done(turn, self._recurrence())
            if turns >= 2 * mark_at:
                mark, mark_at = self._beliefs, turns
            resting = same and self._moved(held) <= REST
            if not resting and unchanged < PATIENCE:
                continue
            if self._hearing.shares_at(self._at, self._beliefs) is not turn[0]:
                continue  # it changes right now
            if people > SQUARING_PEOPLE or self._rounds_in_turn > 1:
                if resting:
                    return self._done(turn)
                continue
            leap = self._leap(turn[0])
            if leap is None:
                return self._done(turn)
            rounds, self._beliefs = leap
            self._keep(turn[0], rounds)
            self._at += rounds
            last_at += rounds
            unchanged = 0
        return self._done(before, self._recurrence(), STILL_MOVING.format(rounds=self._at))

    def _round(self) -> Shares:
        """Plays one round and notes its share matrix."""
        shares = self._hearing.shares_at(self._at, self._beliefs)
        self._keep(shares, 1)
        self._beliefs = self._move(shares, self._beliefs)
        self._at += 1
        return shares

    def _moved(self, before: Floats) -> float:
        """The furthest anybody has moved, in parts of the scale."""
        return float(np.abs(self._beliefs - before).max(initial=0.0)) / self._scale

    def _keep(self, shares: Shares, rounds: int) -> None:
        if self._legs is None or not rounds:
            return
        if self._legs and self._legs[-1].shares is shares:
            self._legs[-1] = Leg(shares, self._legs[-1].rounds + rounds)
            return
        self._legs.append(Leg(shares, rounds))
        self._entries += shares.entries
        if self._entries > KEPT_ENTRIES:
            self._legs = None

    def _leap(self, shares: Shares) -> tuple[int, Floats] | None:
        """After how many more rounds somebody comes into or out of range, and the beliefs then; None: never."""
        powers = [round_turn(shares, self._process.firmness)]
        rounds, beliefs = 0, self._beliefs
        for exponent in range(DOUBLINGS):
            first = self._first_change(powers, beliefs, exponent)
            if first is not None:
                for at, power in enumerate(powers):
                    if first >> at & 1:
                        beliefs = power.apply(beliefs, self._start)
                return rounds + first, beliefs
            later = powers[exponent].apply(beliefs, self._start)
            if np.abs(later - beliefs).max(initial=0.0) <= REST / 100 * self._scale:
                return None
            rounds, beliefs = rounds + 2**exponent, later
            powers.append(followed_by(powers[-1], powers[-1]))
        return None

    def _first_change(self, powers: list[Turn], beliefs: Floats, exponent: int) -> int | None:
        """After how many of the next 2 ** exponent rounds somebody first comes into or out of range; None: never.

        Steps never get longer, so in so many rounds no gap changes by more than twice as many steps of now. Where
        that does not settle it, the earlier half is looked at first.
        """
        self._looks += 1
        step = np.abs(powers[0].apply(beliefs, self._start) - beliefs).max(initial=0.0)
        if 2 * 2**exponent * step < self._hearing.margin_at(self._at, beliefs):
            return None
        if exponent == 0 or self._looks > LOOKS:
            later = powers[exponent].apply(beliefs, self._start)
            return 2**exponent if self._changes(later) else None
        first = self._first_change(powers, beliefs, exponent - 1)
        if first is not None:
            return first
        half = 2 ** (exponent - 1)
        second = self._first_change(powers, powers[exponent - 1].apply(beliefs, self._start), exponent - 1)
        return None if second is None else half + second

    def _changes(self, beliefs: Floats) -> bool:
        """Another network is heard with `beliefs` than with those of now."""
        held = self._hearing.heard_at(self._at, self._beliefs)
        return not np.array_equal(self._hearing.heard_at(self._at, beliefs), held)

    def _recurrence(self) -> Floats | None:
        """The belief lists from now on when they come again exactly, ordered so that round 0 falls on the first."""
        held, at = self._beliefs, self._at
        lists = [held]
        for step in range(LONGEST_RECURRENCE * self._rounds_in_turn):
            held = self._move(self._hearing.shares_at(at + step, held), held)
            if (step + 1) % self._rounds_in_turn:
                continue
            if np.abs(held - lists[0]).max(initial=0.0) <= RECURS * self._scale:
                return np.roll(np.array(lists), self._turns(), axis=0) if len(lists) > 1 else None
            lists.append(held)
        return None

    def _turns(self) -> int:
        return self._at // self._rounds_in_turn

    def _done(self, turn: list[Shares], lists: Floats | None = None, warning: str | None = None) -> Heard:
        """The course so far, with `turn` for ever after."""
        notes = [BY_STEPPING]
        if lists is not None:
            notes.append(KEEPS_CHANGING)
        elif warning is not None:
            notes.append(warning)
        held = None
        if self._legs is None:
            held = self._beliefs
            notes.append(NOT_TRACED.format(rounds=self._at))
        course = Course(
            firmness=self._process.firmness,
            before=tuple(self._legs or ()),
            lasting=tuple(Leg(shares, 1) for shares in turn),
            turns_before=self._turns(),
            rounds_before=self._at,
            held=held,
        )
        return Heard(course, lists, tuple(notes))
