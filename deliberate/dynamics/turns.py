"""One turn as an affine map, full arrays: beliefs after it = kept @ beliefs before it + brought @ firm starts.

A turn is a round, or a whole pass through a plan. Maps are built from sums and products of non-negative numbers
only; a share that is above 0 by the arrows never becomes 0 by underflow, so that structure and numbers agree.
Several turns of one size can stand side by side in leading axes.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from deliberate.dynamics.network import Floats, Indices
from deliberate.dynamics.process import Leg
from deliberate.dynamics.rounds import mover
from deliberate.dynamics.shares import TINY, Shares

# Products of numbers above this cannot underflow.
SAFE_FACTOR = 1e-150
# A leg longer than this is crossed by repeated squaring where the maps are small enough for that to pay.
LONG_LEG = 256
SQUARING_PEOPLE = 400


@dataclass(frozen=True, eq=False)
class Turn:
    """The map of one turn: kept (n, n), brought (n, f) on the starts of the people in `firm` (f,)."""

    kept: Floats
    brought: Floats
    firm: Indices

    def apply(self, beliefs: Floats, starts: Floats) -> Floats:
        """Beliefs one turn on."""
        after = self.kept @ beliefs
        return after + self.brought @ starts[self.firm] if len(self.firm) else after


def round_turn(shares: Shares, firmness: Floats) -> Turn:
    """The map of one round: (I - F) T, and F on the firm people's starts."""
    firm = np.flatnonzero(firmness)
    kept = shares.as_full()
    brought = np.zeros((len(firmness), len(firm)))
    if len(firm):
        open_part = 1.0 - firmness[firm, None]
        rows = kept[firm]
        kept = kept.copy()
        kept[firm] = np.where((rows > 0) & (open_part > 0), np.maximum(open_part * rows, TINY), 0.0)
        brought[firm, np.arange(len(firm))] = np.maximum(firmness[firm], TINY)
    return Turn(kept, brought, firm)


def followed_by(first: Turn, then: Turn) -> Turn:
    """The map of one turn and then another, with rows adding to 1 again."""
    kept = _product(then.kept, first.kept)
    brought = _product(then.kept, first.brought) + then.brought
    total = kept.sum(axis=-1) + brought.sum(axis=-1)
    kept /= total[..., None]
    brought /= total[..., None]
    return Turn(kept, brought, first.firm)


def repeated(turn: Turn, count: int) -> Turn:
    """The map of `count` >= 1 turns, by repeated squaring."""
    result = None
    while True:
        if count & 1:
            result = turn if result is None else followed_by(result, turn)
        count >>= 1
        if not count:
            return result
        turn = followed_by(turn, turn)


def turn_of(legs: Iterable[Leg], firmness: Floats) -> Turn:
    """The map of several legs, one after the other."""
    result = None
    for leg in legs:
        turn = repeated(round_turn(leg.shares, firmness), leg.rounds)
        result = turn if result is None else followed_by(result, turn)
    return result


def _product(left: Floats, right: Floats) -> Floats:
    """left @ right, with at least the smallest normal number wherever the exact product is above 0."""
    product = left @ right
    if min(_least(left), _least(right)) < SAFE_FACTOR:
        # float32 counts paths exactly enough: only "none" and "some" matter.
        joined = ((left > 0).astype(np.float32) @ (right > 0).astype(np.float32)) > 0
        product[joined] = np.maximum(product[joined], TINY)
    return product


def _least(values: Floats) -> float:
    return float(np.min(values, where=values > 0, initial=1.0))


def advance(legs: Iterable[Leg], firmness: Floats, beliefs: Floats, starts: Floats) -> Floats:
    """Beliefs after `legs`, when `beliefs` are held before them."""
    move = mover(firmness, starts)
    for leg in legs:
        if _worth_squaring(leg, firmness):
            beliefs = repeated(round_turn(leg.shares, firmness), leg.rounds).apply(beliefs, starts)
            continue
        for _ in range(leg.rounds):
            beliefs = move(leg.shares, beliefs)
    return beliefs


def give_back(legs: Iterable[Leg], firmness: Floats, voice: Floats) -> tuple[Floats, Floats]:
    """What beliefs before `legs`, and starts brought back during them, count for.

    voice: (n,) what each belief after the legs counts for. Returns the counts of the (n,) beliefs before them and
    of the (n,) starts; together they sum to what `voice` sums to.
    """
    to_starts = np.zeros(len(firmness))
    for leg in reversed(tuple(legs)):
        if _worth_squaring(leg, firmness):
            turn = repeated(round_turn(leg.shares, firmness), leg.rounds)
            to_starts[turn.firm] += voice @ turn.brought
            voice = voice @ turn.kept
            continue
        for _ in range(leg.rounds):
            to_starts += voice * firmness
            voice = leg.shares.give_back(voice * (1.0 - firmness))
    return voice, to_starts


def _worth_squaring(leg: Leg, firmness: Floats) -> bool:
    return leg.rounds > LONG_LEG and len(firmness) <= SQUARING_PEOPLE
