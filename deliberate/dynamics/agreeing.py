"""The first round from which the spread stays within a tolerance: counted, never taken from the rate.

The rate misleads: in a line of 40 people who each give the one before 0.9 and themselves 0.1 it is 0.1, which says
two rounds to 1 %, and the truth is 49. So rounds are played; when many are needed, turns are squared and the
rounds bisected. Two facts make that exact: without firm people the spread never rises, and with them the largest
distance to the limit never does, nor the largest step from one turn to the next.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from deliberate.dynamics.longrun import LongRun
from deliberate.dynamics.network import Floats, Indices
from deliberate.dynamics.process import Course, Leg, Process, course
from deliberate.dynamics.rounds import Hearing, mover
from deliberate.dynamics.turns import Turn, advance, followed_by, turn_of

# Rounds that are played before turns are squared, and how large maps may be for that.
PLAYED_FIRST = 256
SQUARING_PEOPLE = 1000
# Above that size: as many rounds as cost about so many multiplications, and at most so many.
PLAYED_WORK = 4_000_000_000
PLAYED_AT_MOST = 100_000
DOUBLINGS = 62
LOOKS = 50_000
SLACK = 1e-13


@dataclass(frozen=True)
class Agreeing:
    """`rounds` as `rounds_to_agree` gives it; `estimated` when it was carried on from the pace of the last
    rounds played, because the network is too large to count so many."""

    rounds: int | None
    estimated: bool


def rounds_to_agree(
    process: Process,
    starts: ArrayLike,
    tolerance: float,
    long_run: LongRun,
    hearing_range: float | None = None,
    scale_width: float = 1.0,
    among: Indices | None = None,
) -> int | None:
    """The first round from which the largest minus the smallest belief stays <= `tolerance`; None when never.

    Arguments as for `long_run`, whose result is given. `among` says whose beliefs are compared, when not all are:
    people who hear nobody else. None also when the tolerance is below what doubles can
    tell apart. See `agreeing` for whether the number is an estimate.
    """
    return agreeing(process, starts, tolerance, long_run, hearing_range, scale_width, among).rounds


def agreeing(
    process: Process,
    starts: ArrayLike,
    tolerance: float,
    long_run: LongRun,
    hearing_range: float | None = None,
    scale_width: float = 1.0,
    among: Indices | None = None,
) -> Agreeing:
    """`rounds_to_agree`, and whether it is an estimate."""
    start = np.asarray(starts, dtype=np.float64)
    if not len(start):
        return Agreeing(0, False)
    track = long_run.course if hearing_range is not None else course(process)
    judge = _Judge(track.firmness, start, tolerance, SLACK * scale_width, among)
    if track.held is not None:
        return _after_untraced(process, judge, track, long_run, Hearing(process, hearing_range, scale_width))
    held = [start]
    for leg in track.before:
        held.append(advance((leg,), track.firmness, held[-1], start))
    lasting = _Run(judge, track.lasting, _cycle_from(long_run, track.turns_before))
    if lasting.never():
        return Agreeing(None, False)
    try:
        last = lasting.last_wide_round(held[-1], None)
        estimated = False
    except _TooLarge as too_large:
        if too_large.rounds is None:
            return Agreeing(None, True)
        last, estimated = too_large.rounds, True
    if last is not None:
        return Agreeing(track.rounds_before + last + 1, estimated)
    return Agreeing(_within(judge, track.before, held), False)


def _after_untraced(process: Process, judge: _Judge, track: Course, long_run: LongRun, hearing: Hearing) -> Agreeing:
    """The answer when the rounds before what lasts were too many to be kept: they are played again."""
    held, last = judge.start, None
    move = mover(judge.firmness, judge.start)
    for at in range(track.rounds_before):
        if judge.wide(held):
            last = at
        held = move(hearing.shares_at(at, held), held)
    lasting = _Run(judge, track.lasting, _cycle_from(long_run, track.turns_before))
    if lasting.never():
        return Agreeing(None, False)
    try:
        later = lasting.last_wide_round(held, None)
    except _TooLarge as too_large:
        return Agreeing(
            None if too_large.rounds is None else track.rounds_before + too_large.rounds + 1, estimated=True
        )
    if later is not None:
        return Agreeing(track.rounds_before + later + 1, False)
    return Agreeing(0 if last is None else last + 1, False)


def _within(judge: _Judge, legs: Sequence[Leg], held: Sequence[Floats]) -> int:
    """The answer when the spread is within the tolerance after `legs`; `held` are the beliefs before each."""
    rounds = sum(leg.rounds for leg in legs)
    for leg, beliefs in zip(reversed(legs), reversed(held[:-1]), strict=True):
        rounds -= leg.rounds
        last = _Run(judge, (Leg(leg.shares, 1),), None).last_wide_round(beliefs, leg.rounds)
        if last is not None:
            return rounds + last + 1
    return 0


def _cycle_from(long_run: LongRun, turns_before: int) -> Floats | None:
    """(d, n) the lists that turns 0, 1, ..., counted from the first one, tend to; None when there are too many."""
    if long_run.limit is not None:
        return long_run.limit[None, :]
    return None if long_run.cycle is None else np.roll(long_run.cycle, -turns_before, axis=0)


class _TooLarge(Exception):  # noqa: N818 - carries an answer, is no error
    """The run needs more rounds than the size allows to play; `rounds` is the estimated last wide one."""

    def __init__(self, rounds: int | None) -> None:
        super().__init__(rounds)
        self.rounds = rounds


@dataclass(frozen=True, eq=False)
class _Judge:
    """What beliefs are held against."""

    firmness: Floats
    start: Floats
    tolerance: float
    slack: float
    among: Indices | None

    @property
    def steady(self) -> bool:
        """Nobody is firm, so the spread never rises."""
        return not self.firmness.any()

    def spread(self, beliefs: Floats) -> float:
        """Largest minus smallest belief of those who are compared."""
        compared = beliefs if self.among is None else beliefs[self.among]
        return float(compared.max() - compared.min())

    def wide(self, beliefs: Floats) -> bool:
        """The spread is beyond the tolerance."""
        return self.spread(beliefs) > self.tolerance


class _Run:
    """The same turn again and again, and where it leads (for a run without end)."""

    def __init__(self, judge: _Judge, legs: Sequence[Leg], leads_to: Floats | None) -> None:
        self._judge = judge
        self._legs = tuple(legs)
        self._rounds = sum(leg.rounds for leg in legs)
        self._move = mover(judge.firmness, judge.start)
        self._powers: list[Turn] = []
        self._leads_to = leads_to
        self._ends_within = -np.inf if leads_to is None else max(self._widest(held) for held in leads_to)
        self._looks = 0

    def never(self) -> bool:
        """The tolerance is not even reached in the long run."""
        return self._ends_within > self._judge.tolerance + self._judge.slack

    def last_wide_round(self, beliefs: Floats, turns: int | None) -> int | None:
        """The last round, counted from `beliefs` before round 0 of the run, whose beliefs before it are too far
        apart; over `turns` turns, or for ever. None when there is none."""
        last, beliefs_then = None, beliefs
        played = 0
        limit = self._turns_to_play()
        while turns is None or played < turns:
            if self._at_rest(beliefs, played):
                return self._round_in_turn(last, beliefs_then)
            if played >= limit:
                break
            if self._wide(beliefs):
                last, beliefs_then = played, beliefs
            beliefs = advance(self._legs, self._judge.firmness, beliefs, self._judge.start)
            played += 1
        else:
            return self._round_in_turn(last, beliefs_then)
        if len(beliefs) > SQUARING_PEOPLE:
            raise _TooLarge(self._carried_on(beliefs, played))
        left = self._turns_until_rest(beliefs, played) if turns is None else turns - played
        later = self._last_wide(beliefs, left)
        if later is None:
            return self._round_in_turn(last, beliefs_then)
        turn, beliefs_then = later
        return self._round_in_turn(played + turn, beliefs_then)

    def _turns_to_play(self) -> int:
        people = len(self._judge.start)
        if people <= SQUARING_PEOPLE:
            return max(PLAYED_FIRST // self._rounds, 1)
        work = sum(leg.rounds * leg.shares.entries for leg in self._legs)
        return max(min(PLAYED_WORK // work, PLAYED_AT_MOST), 1)

    def _widest(self, beliefs: Floats) -> float:
        """The largest spread before any round of the turn that starts with `beliefs`."""
        widest = self._judge.spread(beliefs)
        if not self._judge.steady and self._rounds > 1:
            for held in self._inside(beliefs):
                widest = max(widest, self._judge.spread(held))
        return widest

    def _inside(self, beliefs: Floats) -> list[Floats]:
        """Beliefs before each round of the turn."""
        held = [beliefs]
        for leg in self._legs:
            for _ in range(leg.rounds):
                held.append(self._move(leg.shares, held[-1]))
        return held[:-1]

    def _wide(self, beliefs: Floats) -> bool:
        return self._widest(beliefs) > self._judge.tolerance

    def _at_rest(self, beliefs: Floats, turn: int) -> bool:
        """From here on the spread stays within the tolerance, whatever the turn."""
        if self._judge.steady:
            return not self._judge.wide(beliefs)
        if self._leads_to is None:
            return False
        distance = np.abs(beliefs - self._leads_to[turn % len(self._leads_to)]).max()
        return self._ends_within + 2 * distance <= self._judge.tolerance + self._judge.slack

    def _round_in_turn(self, turn: int | None, beliefs: Floats) -> int | None:
        """The last wide round of the last wide turn, which starts with `beliefs`."""
        if turn is None:
            return None
        wide = [at for at, held in enumerate(self._inside(beliefs)) if self._judge.wide(held)]
        return turn * self._rounds + wide[-1]

    def _power(self, exponent: int) -> Turn:
        """The map of 2 ** exponent turns."""
        if not self._powers:
            self._powers.append(turn_of(self._legs, self._judge.firmness))
        while len(self._powers) <= exponent:
            self._powers.append(followed_by(self._powers[-1], self._powers[-1]))
        return self._powers[exponent]

    def _turns_until_rest(self, beliefs: Floats, played: int) -> int:
        """A number of turns after which everything stays within the tolerance."""
        for exponent in range(DOUBLINGS):
            later = self._power(exponent).apply(beliefs, self._judge.start)
            if self._at_rest(later, played + 2**exponent):
                return 2**exponent
        raise _TooLarge(None)

    def _last_wide(self, beliefs: Floats, turns: int) -> tuple[int, Floats] | None:
        """The last wide turn of so many, and the beliefs before it; the later half is looked at first."""
        self._looks += 1
        if self._looks > LOOKS:
            raise _TooLarge(None)
        if self._stays_within(beliefs, turns):
            return None
        if turns == 1:
            return (0, beliefs) if self._wide(beliefs) else None
        half = (turns - 1).bit_length() - 1
        later = self._last_wide(self._power(half).apply(beliefs, self._judge.start), turns - 2**half)
        if later is not None:
            return 2**half + later[0], later[1]
        return self._last_wide(beliefs, 2**half)

    def _stays_within(self, beliefs: Floats, turns: int) -> bool:
        """Bounds say that none of the next `turns` turns is wide."""
        if self._judge.steady:
            return not self._judge.wide(beliefs)
        after = self._power(0).apply(beliefs, self._judge.start)
        widest, step = self._widest(beliefs), np.abs(after - beliefs).max()
        if widest + 2 * (turns - 1) * step <= self._judge.tolerance:
            return True
        if self._leads_to is None or len(self._leads_to) > 1:
            return False
        if self._at_rest(beliefs, 0):
            return True
        extra = self._beyond_straight(beliefs - self._leads_to[0], after - self._leads_to[0], turns - 1)
        return max(widest, self._ends_within) + extra <= self._judge.tolerance

    def _beyond_straight(self, gap: Floats, next_gap: Floats, turns: int) -> float:
        """How far spreads can go, within so many turns, beyond those of now and of the long run.

        Where every gap to the long run shrinks by a factor between low and high, and nobody hears gaps of both
        signs, the same holds in all turns to come, since shares are not negative: gap low^k <= gap(k) <= gap high^k.
        Were all factors one, beliefs would go straight to where they end.
        """
        open_ = np.abs(gap) > self._judge.slack
        size, later = np.abs(gap[open_]), np.abs(next_gap[open_])
        heard = self._power(0).kept[:, open_] @ size
        one_sign = np.abs(heard - np.abs(next_gap)).max(initial=0.0) <= self._judge.slack
        same_sign = (gap[open_] * next_gap[open_] >= 0).all() and (
            np.abs(next_gap[~open_]) <= self._judge.slack
        ).all()
        if not (one_sign and same_sign and (later <= size).all()):
            return np.inf
        factors = later / size
        return float(min(1.0, turns * np.ptp(factors)) * size.max(initial=0.0)) if len(size) else 0.0

    def _carried_on(self, beliefs: Floats, played: int) -> int | None:
        """The last wide round if the pace of the next few turns goes on."""
        gaps = []
        for _ in range(2):
            gaps.append(max(self._judge.spread(beliefs) - max(self._ends_within, 0.0), 0.0))
            for _ in range(8):
                beliefs = advance(self._legs, self._judge.firmness, beliefs, self._judge.start)
        wanted = self._judge.tolerance - max(self._ends_within, 0.0)
        if not 0 < gaps[1] < gaps[0] or wanted <= 0:
            return None
        turns = 8 * np.log(wanted / gaps[0]) / np.log(gaps[1] / gaps[0])
        return int((played + max(turns, 0.0)) * self._rounds)
