"""Where names go: below the person, or wherever they cover no disc, no other name and as few arrows as may be.

Free of Qt. All in pixels; sizes are those of the measured texts.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]
Mask = NDArray[np.bool_]

CELL = 6.0  # pixels of the grid in which arrows are looked up
GAP = 5.0  # between ring and name
OVER_SOMETHING = 60.0  # what covering a disc costs, or another name
CUT_OFF = 25.0  # what reaching over the edge of the paper costs
_ALL_INK = 20.0  # what lying wholly on arrows costs
# Middle of the name relative to the person: columns times (radius + gap + half a name), rows likewise. Later places
# are only taken when they are better by the price in the last column.
_PLACES = np.array(
    [
        (0.0, 1.0, 0.0),
        (0.0, -1.0, 1.5),
        (1.0, 0.0, 2.5),
        (-1.0, 0.0, 2.5),
        (0.75, 0.8, 3.0),
        (-0.75, 0.8, 3.0),
        (0.75, -0.8, 3.5),
        (-0.75, -0.8, 3.5),
    ]
)


def place_labels(
    places: Floats, radius: float, sizes: Floats, arrow_lines: Floats, paper: tuple[float, float] | None = None
) -> tuple[Indices, Floats]:
    """Which place each name takes (for `offsets`), and what it covers there (0: nothing at all).

    `places` (people, 2), `sizes` (people, 2), `arrow_lines` rows (x1, y1, x2, y2), `paper` the width and height that
    names had better stay on. Shapes (people,).
    """
    count = len(places)
    if count == 0:
        return np.zeros(0, dtype=np.intp), np.zeros(0)
    half = sizes / 2
    middle = places[:, None] + _PLACES[None, :, :2] * _steps(radius, half)[:, None]  # (people, candidates, 2)
    price = np.broadcast_to(_PLACES[:, 2], middle.shape[:2]) + _Ink(arrow_lines).under(middle, half) * _ALL_INK
    price = price + _discs_covered(middle, half, places, radius) * OVER_SOMETHING
    if paper is not None:
        price = price + _cut_off(middle, half, paper) * CUT_OFF
    return _choose(middle, half, price)


def offsets(chosen: Indices, radius: float, sizes: Floats) -> Floats:
    """Middles of the names relative to their people, at places chosen before, shape (people, 2)."""
    result: Floats = _PLACES[chosen, :2] * _steps(radius, sizes / 2)
    return result


def _steps(radius: float, half: Floats) -> Floats:
    """How far a name moves away from the middle of its person, sideways and up or down, shape (people, 2)."""
    return np.stack([radius + GAP * 1.6 + half[:, 0], radius + GAP + half[:, 1]], axis=1)


def _choose(middle: Floats, half: Floats, price: Floats) -> tuple[Indices, Floats]:
    """One place for each, those with the least choice first, and no name on another."""
    count = len(middle)
    rows = np.arange(count)
    chosen = np.zeros(count, dtype=np.intp)
    done = np.zeros(count, dtype=bool)
    order = np.argsort(-np.sort(price, axis=1)[:, 1], kind="stable")
    cost = np.zeros(count)
    for person in order:
        own = price[person]
        if done.any():
            taken = middle[rows[done], chosen[done]]
            apart = np.abs(taken[None] - middle[person][:, None]) - (half[done][None] + half[person])
            own = own + (apart < 0).all(axis=-1).sum(axis=1) * OVER_SOMETHING * 1.5
        best = int(own.argmin())
        chosen[person], done[person] = best, True
        cost[person] = own[best] - _PLACES[best, 2]
    return chosen, cost


def _cut_off(middle: Floats, half: Floats, paper: tuple[float, float]) -> Mask:
    """Which candidates reach over the edge of the paper, shape (people, candidates)."""
    low, high = middle - half[:, None], middle + half[:, None]
    return (low < 0).any(axis=-1) | (high > np.array(paper)).any(axis=-1)


def _discs_covered(middle: Floats, half: Floats, places: Floats, radius: float) -> Floats:
    """How many people each candidate lies on, her own disc included."""
    covered = np.zeros(middle.shape[:2])
    reach = (radius + 1) ** 2
    for candidate in range(middle.shape[1]):
        across = np.maximum(np.abs(middle[:, candidate, None, 0] - places[None, :, 0]) - half[:, None, 0], 0.0)
        down = np.maximum(np.abs(middle[:, candidate, None, 1] - places[None, :, 1]) - half[:, None, 1], 0.0)
        covered[:, candidate] = (across * across + down * down < reach).sum(axis=1)
    return covered


class _Ink:
    """Arrow ink per cell as a summed-area table (Crow 1984), so that any rectangle is looked up in four reads."""

    def __init__(self, lines: Floats) -> None:
        points = _sampled(lines)
        self._low = points.min(axis=0) if len(points) else np.zeros(2)
        cells = np.floor((points - self._low) / CELL).astype(np.intp)
        shape = cells.max(axis=0) + 1 if len(points) else np.array([1, 1])
        flat = np.bincount(cells[:, 0] * shape[1] + cells[:, 1], minlength=shape[0] * shape[1]) if len(points) else 0
        table = np.zeros((shape[0] + 1, shape[1] + 1))
        if len(points):
            table[1:, 1:] = np.minimum(flat.reshape(shape), 1).cumsum(axis=0).cumsum(axis=1)
        self._table = table

    def under(self, middle: Floats, half: Floats) -> Floats:
        """Which part of each candidate rectangle has ink under it, 0 to 1."""
        reach = np.array(self._table.shape) - 1
        low = np.clip(np.floor((middle - half[:, None] - self._low) / CELL), 0, reach).astype(np.intp)
        high = np.clip(np.ceil((middle + half[:, None] - self._low) / CELL), 0, reach).astype(np.intp)
        t = self._table
        inked = (
            t[high[..., 0], high[..., 1]]
            - t[low[..., 0], high[..., 1]]
            - t[high[..., 0], low[..., 1]]
            + t[low[..., 0], low[..., 1]]
        )
        return inked / np.maximum((high - low).prod(axis=-1), 1)


def _sampled(lines: Floats) -> Floats:
    """Points along the lines, about one per cell."""
    if len(lines) == 0:
        return np.zeros((0, 2))
    length = np.hypot(lines[:, 2] - lines[:, 0], lines[:, 3] - lines[:, 1])
    pieces = np.maximum(1, np.ceil(length / CELL)).astype(np.intp)
    owner = np.repeat(np.arange(len(lines)), pieces)
    share = (np.arange(len(owner)) - np.repeat(np.cumsum(pieces) - pieces, pieces)) / pieces[owner]
    return lines[owner, :2] + (lines[owner, 2:] - lines[owner, :2]) * share[:, None]
