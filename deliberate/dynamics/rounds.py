"""Playing the rounds: b(t+1) = F b(0) + (I - F) T(t) b(t)."""

from __future__ import annotations

from collections.abc import Callable, Iterator

import numpy as np
from numpy.typing import ArrayLike

from deliberate.dynamics.network import Floats, Mask
from deliberate.dynamics.process import Process
from deliberate.dynamics.shares import Shares, shares

# Beliefs that are exactly the hearing range apart hear each other; rounding must not part them.
RANGE_SLACK = 1e-12


def play(
    process: Process,
    starts: ArrayLike,
    rounds: int,
    hearing_range: float | None = None,
    scale_width: float = 1.0,
) -> Floats:
    """Beliefs after round 0, 1, ..., `rounds`: (rounds + 1, n), or (rounds + 1, n, q) for starts (n, q).

    starts: (n,) beliefs of one question, or (n, q) of q questions side by side.
    hearing_range: in a round, i hears only those j with |b_j - b_i| <= hearing_range (Hegselmann and Krause
        2002); what is not heard is dealt with as the block's `unheard` says. `scale_width` is the length of the
        scale, against which rounding is judged.
    """
    start = np.asarray(starts, dtype=np.float64)
    if hearing_range is not None and start.ndim == 2:
        columns = [play(process, column, rounds, hearing_range, scale_width) for column in start.T]
        return np.stack(columns, axis=-1) if columns else np.empty((rounds + 1, *start.shape))
    played = np.empty((rounds + 1, *start.shape))
    played[0] = held = start
    move = mover(process.firmness, start)
    if hearing_range is None:
        for at, matrix in enumerate(scheduled(process, rounds), 1):
            played[at] = held = move(matrix, held)
        return played
    hearing = Hearing(process, hearing_range, scale_width)
    for at in range(rounds):
        played[at + 1] = held = move(hearing.shares_at(at, held), held)
    return played


def mover(firmness: Floats, start: Floats) -> Callable[[Shares, Floats], Floats]:
    """The function (shares, beliefs) -> beliefs one round on, for people who started at `start`."""
    if not firmness.any():
        return Shares.hear
    shape = firmness.shape + (1,) * (start.ndim - 1)
    brought_back, open_part = firmness.reshape(shape) * start, (1.0 - firmness).reshape(shape)
    return lambda matrix, beliefs: brought_back + open_part * matrix.hear(beliefs)


def block_at(process: Process, at: int) -> int:
    """The index of the block that round at + 1 belongs to."""
    if process.repeat:
        at %= sum(block.rounds for block in process.blocks)
    for index, block in enumerate(process.blocks):
        at -= block.rounds
        if at < 0:
            return index
    return len(process.blocks) - 1


def scheduled(process: Process, rounds: int) -> Iterator[Shares]:
    """The share matrices of the first `rounds` rounds, without a hearing range."""
    left = rounds
    while left > 0:
        for leg in process.legs:
            for _ in range(min(leg.rounds, left)):
                yield leg.shares
            left -= leg.rounds
            if left <= 0:
                return
        if not process.repeat:
            for _ in range(left):
                yield process.legs[-1].shares
            return


class Hearing:
    """Who is near enough to be heard, round by round; matrices are built again only when that changes."""

    def __init__(self, process: Process, hearing_range: float, scale_width: float) -> None:
        self._process = process
        self._reach = hearing_range + RANGE_SLACK * scale_width
        self._rounds = sum(block.rounds for block in process.blocks)
        self._built: dict[tuple[str, int], tuple[Mask, Shares]] = {}

    def heard_at(self, at: int, beliefs: Floats) -> Mask:
        """(m,) the arrows that count in round at + 1, when `beliefs` (n,) are held before it."""
        near = self._gaps(beliefs) <= self._reach
        heard = self._process.blocks[block_at(self._process, at)].heard
        return near if heard is None else near & heard

    def margin_at(self, at: int, beliefs: Floats) -> float:
        """How far the gap of any arrow of round at + 1 is at least from coming into or going out of range."""
        heard = self._process.blocks[block_at(self._process, at)].heard
        off = np.abs(self._gaps(beliefs) - self._reach)
        return float(np.min(off, initial=np.inf, where=True if heard is None else heard))

    def _gaps(self, beliefs: Floats) -> Floats:
        network = self._process.network
        return np.abs(beliefs[network.source] - beliefs[network.listener])

    def shares_at(self, at: int, beliefs: Floats) -> Shares:
        """The shares of round at + 1, when `beliefs` (n,) are held before it; the same object while they last."""
        heard = self.heard_at(at, beliefs)
        index = block_at(self._process, at)
        places = [("block", index)]
        if self._process.repeat:
            places.insert(0, ("round", at % self._rounds))
        for place in places:
            if place in self._built and np.array_equal(self._built[place][0], heard):
                matrix = self._built[place][1]
                break
        else:
            matrix = shares(self._process.network, heard, self._process.blocks[index].unheard)
        for place in places:
            self._built[place] = (heard, matrix)
        return matrix
