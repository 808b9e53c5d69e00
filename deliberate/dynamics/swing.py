"""Swings: the belief lists that are visited for ever when some closed group keeps its own time."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from deliberate.dynamics.destination import Destination
from deliberate.dynamics.large import LargeTurn
from deliberate.dynamics.network import Floats, Indices
from deliberate.dynamics.structure import ClosedSet
from deliberate.dynamics.turns import Turn

# Phases of a group that end this close together, on the scale's width, do not swing.
STILL = 1e-12
LARGEST_CYCLE = 5_000_000
# How often a large network goes round before people outside count as having found their place in the swing.
ROUNDS_ABOUT = 5_000


@dataclass(frozen=True, eq=False)
class Swing:
    """One closed group that swings: phase p holds `values` (d,)[(p + t) mod d] after t turns, in the long run.

    d is the least period of the values, which may be a part of the group's period.
    """

    group: ClosedSet
    values: Floats


def swings(reached: Destination, beliefs: Floats, scale_width: float) -> tuple[Swing, ...]:
    """The groups that swing for ever when `beliefs` are held before the first turn."""
    found = []
    for group in reached.groups:
        if group.period == 1:
            continue
        share = reached.within[group.members]
        total = np.bincount(group.phases, share * beliefs[group.members], minlength=group.period)
        values = total / np.bincount(group.phases, share, minlength=group.period)
        least = _least_period(values, STILL * scale_width)
        if least > 1:
            found.append(Swing(group, values.reshape(-1, least).mean(axis=0)))
    return tuple(found)


def _least_period(values: Floats, slack: float) -> int:
    """The smallest part of the period after which the values come again."""
    period = len(values)
    for least in (d for d in range(1, period) if period % d == 0):
        if np.ptp(values.reshape(-1, least), axis=0).max() <= slack:
            return least
    return period


def cycle_period(found: tuple[Swing, ...]) -> int:
    """After how many turns all swings come together again; grows fast with the number of groups."""
    return math.lcm(*(len(swing.values) for swing in found))


def cycle(
    reached: Destination,
    turn: Turn | LargeTurn,
    found: tuple[Swing, ...],
    average: Floats,
    starts: Floats,
    turns_before: int,
) -> Floats:
    """The (d, n) belief lists visited for ever; turns 0, d, 2d, ... counted from round 0 tend to the first."""
    lists = np.tile(average, (cycle_period(found), 1))
    times = np.arange(len(lists))
    for swing in found:
        phases, values = swing.group.phases, swing.values
        lists[:, swing.group.members] = values[(phases[None, :] + times[:, None]) % len(values)]
    if len(reached.passing) and isinstance(turn, Turn):
        inner = turn.kept[np.ix_(reached.passing, reached.passing)]
        for swing in found:
            carried = turn.kept[np.ix_(reached.passing, swing.group.members)]
            lists[:, reached.passing] += _carried(inner, carried, swing, times)
    elif len(reached.passing):
        _carry_round(lists, turn, reached.passing, starts)
    return np.roll(lists, turns_before, axis=0)


def _carried(inner: Floats, carried: Floats, swing: Swing, times: Indices) -> Floats:
    """(times, u) how people outside move around their average because of one swing.

    The swing is split into its frequencies w; each one passes through x e^(iw) = inner x + carried c.
    """
    period = len(swing.values)
    amplitudes = np.fft.fft(swing.values) / period
    moves = np.zeros((len(times), len(inner)))
    for k in range(1, period // 2 + 1):
        turned = np.exp(2j * np.pi * k / period)
        held = amplitudes[k] * turned**swing.group.phases
        answer = np.linalg.solve(turned * np.eye(len(inner)) - inner, carried @ held)
        twice = 1.0 if 2 * k == period else 2.0  # frequencies k and d - k are conjugate
        moves += twice * (turned ** (times % period)[:, None] * answer).real
    return moves


def _carry_round(lists: Floats, turn: LargeTurn, passing: Indices, starts: Floats) -> None:
    """Lets the people outside follow the lists, in place, until a whole cycle no longer moves them."""
    scale = np.ptp(lists) or 1.0
    for _ in range(max(ROUNDS_ABOUT // len(lists), 1)):
        before = lists[0, passing].copy()
        for at in range(len(lists)):
            lists[(at + 1) % len(lists), passing] = turn.apply(lists[at], starts)[passing]
        if np.abs(lists[0, passing] - before).max() <= 1e-14 * scale:
            return
