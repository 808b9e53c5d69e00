"""Arrows as curves, and what lies under the pointer. Free of Qt.

Arrows are quadratic curves from the listener's ring to the source's. Points have shape (arrows, 2).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]
Flags = NDArray[np.bool_]

# How far arrows pass from the straight line in the middle, in radii of a person.
PART = 0.3  # the two between the same two people, each to its right
AROUND = (0.0, 1.25, -1.25, 2.2, -2.2)  # tried in this order where somebody stands in between
AROUND_OF_PAIRS = (PART, 1.25, 1.6, 2.2)
MOST_BENT = 0.26  # of their length
MOST_TO_BEND = 60_000  # arrows times people: beyond it arrows may run behind others' discs
_SAMPLES = np.linspace(0.0, 1.0, 17)


@dataclass(frozen=True, eq=False)
class Curves:
    """Quadratic curves: `start` at the ring of the one whom the arrow leaves, `tip` at the other's."""

    start: Floats
    control: Floats
    tip: Floats

    def __len__(self) -> int:
        return len(self.start)

    def at(self, part: Floats) -> Floats:
        """Points at `part` (0 to 1) of each curve; part (k,) gives shape (curves, k, 2)."""
        t = part[None, :, None]
        start, control, tip = self.start[:, None], self.control[:, None], self.tip[:, None]
        points: Floats = (1 - t) ** 2 * start + 2 * t * (1 - t) * control + t**2 * tip
        return points

    def some(self, which: Indices | Flags) -> Curves:
        """These curves only."""
        return Curves(self.start[which], self.control[which], self.tip[which])

    def lengths(self) -> Floats:
        """About how long each is."""
        points = self.at(_SAMPLES[::4])
        return np.hypot(*np.moveaxis(np.diff(points, axis=1), -1, 0)).sum(axis=1)


def two_way(listener: Indices, source: Indices, count: int) -> Flags:
    """Which arrows have one back."""
    return np.isin(listener * count + source, source * count + listener)


def bends(places: Floats, listener: Indices, source: Indices, radius: float) -> Floats:
    """How far each arrow is bent to its right in the middle, as a part of its length, shape (arrows,).

    Arrows of a two-way pair are bent apart; others are straight unless somebody stands in between.
    """
    pairs = two_way(listener, source, len(places))
    length = np.maximum(np.hypot(*(places[source] - places[listener]).T), 1e-9)
    result = np.where(pairs, _bend(PART, radius, length), 0.0)
    if len(listener) == 0 or len(listener) * len(places) > MOST_TO_BEND:
        return result
    for which, candidates in ((~pairs, AROUND), (pairs, AROUND_OF_PAIRS)):
        waiting = np.flatnonzero(which)
        fewest = np.full(len(listener), np.inf)
        for candidate in candidates:
            if len(waiting) == 0:
                break
            bend = _bend(candidate, radius, length[waiting])
            hits = _discs_hit(places, listener[waiting], source[waiting], bend, radius * 1.12)
            better = hits < fewest[waiting] - 0.05
            result[waiting[better]] = bend[better]
            fewest[waiting[better]] = hits[better]
            waiting = waiting[fewest[waiting] > 0]
    return result


def _bend(offset: float, radius: float, length: Floats) -> Floats:
    """An offset in the middle, in radii, as a part of the length; never a loop."""
    return np.clip(offset * radius / length, -MOST_BENT, MOST_BENT)


def curves(
    places: Floats, listener: Indices, source: Indices, bend: Floats, radius: float, gap: float = 2.0
) -> Curves:
    """Curves from ring to ring, `gap` beyond each."""
    here, there = places[listener], places[source]
    along = there - here
    distance = np.maximum(np.hypot(along[:, 0], along[:, 1]), 1e-9)[:, None]
    right = np.stack([-along[:, 1], along[:, 0]], axis=1)
    control = (here + there) / 2 + right * (2 * bend)[:, None]
    leave, arrive = control - here, control - there
    # Where two overlap there is no room between the rings: the arrow shrinks to nothing in the middle.
    reach = np.minimum(radius + gap, distance * 0.48)
    start = here + leave / np.maximum(np.hypot(leave[:, 0], leave[:, 1]), 1e-9)[:, None] * reach
    tip = there + arrive / np.maximum(np.hypot(arrive[:, 0], arrive[:, 1]), 1e-9)[:, None] * reach
    # The control point of the part between the rings: keeps the shape close to the whole curve's.
    middle = (here + there) / 2 + right * bend[:, None]
    return Curves(start, 2 * middle - (start + tip) / 2, tip)


def turned(arrows: Curves) -> Curves:
    """The same curves with the tip at the other end."""
    return Curves(arrows.tip, arrows.control, arrows.start)


def shortened(arrows: Curves, by: Floats) -> Curves:
    """Curves that end `by` before the tip, so that a head fits there."""
    back = arrows.control - arrows.tip
    length = np.maximum(np.hypot(back[:, 0], back[:, 1]), 1e-9)
    return Curves(arrows.start, arrows.control, arrows.tip + back * np.minimum(by / length, 0.9)[:, None])


def strokes(arrows: Curves, pieces: Indices, inked: float = 1.0) -> tuple[Floats, Indices]:
    """Each curve cut into `pieces` straight lines of which the first `inked` part is drawn (under 1: dashes).

    Returns lines as rows (x1, y1, x2, y2), and the curve each belongs to.
    """
    owner = np.repeat(np.arange(len(arrows)), pieces)
    number = np.arange(len(owner)) - np.repeat(np.cumsum(pieces) - pieces, pieces)
    share = number / pieces[owner]
    lines = np.empty((len(owner), 4))
    for column, t in ((0, share), (2, share + inked / pieces[owner])):
        a, b, c = (1 - t) ** 2, 2 * t * (1 - t), t**2
        for axis in (0, 1):
            lines[:, column + axis] = (
                a * arrows.start[owner, axis] + b * arrows.control[owner, axis] + c * arrows.tip[owner, axis]
            )
    return lines, owner


def heads(arrows: Curves, length: Floats, half_width: Floats) -> Floats:
    """Arrowheads as triangles (tip, left, right), shape (arrows, 3, 2)."""
    along = arrows.tip - arrows.control
    size = np.hypot(along[:, 0], along[:, 1])
    straight = arrows.tip - arrows.start
    along = np.where((size > 1e-6)[:, None], along, straight)
    along = along / np.maximum(np.hypot(along[:, 0], along[:, 1]), 1e-9)[:, None]
    side = np.stack([-along[:, 1], along[:, 0]], axis=1) * half_width[:, None]
    base = arrows.tip - along * length[:, None]
    return np.stack([arrows.tip, base + side, base - side], axis=1)


def nearest_person(places: Floats, point: Floats, reach: float) -> int | None:
    """The person whose middle is nearest to `point`, within `reach`; the last one on top."""
    if len(places) == 0:
        return None
    distance = np.hypot(places[:, 0] - point[0], places[:, 1] - point[1])
    index = len(distance) - 1 - int(distance[::-1].argmin())
    return index if distance[index] <= reach else None


def nearest_arrow(arrows: Curves, point: Floats, reach: float) -> int | None:
    """The curve that passes nearest to `point`, within `reach`."""
    if len(arrows) == 0:
        return None
    points = arrows.at(_SAMPLES)
    here, step = points[:, :-1], np.diff(points, axis=1)
    length = np.maximum((step**2).sum(axis=-1), 1e-12)
    share = np.clip((((point - here) * step).sum(axis=-1)) / length, 0.0, 1.0)
    offset = here + step * share[..., None] - point
    distance = np.sqrt((offset**2).sum(axis=-1).min(axis=1))
    index = int(distance.argmin())
    return index if distance[index] <= reach else None


def within(places: Floats, corner: Floats, other: Floats) -> Indices:
    """People whose middle lies in the rectangle between two corners."""
    low, high = np.minimum(corner, other), np.maximum(corner, other)
    return np.flatnonzero(((places >= low) & (places <= high)).all(axis=1))


def _discs_hit(places: Floats, listener: Indices, source: Indices, bend: Floats, radius: float) -> Floats:
    """How many other people each arrow would run behind with this bend, counted by depth so that less is better."""
    here, there = places[listener], places[source]
    along = there - here
    right = np.stack([-along[:, 1], along[:, 0]], axis=1)
    control = (here + there) / 2 + right * (2 * bend)[:, None]
    points = Curves(here, control, there).at(_SAMPLES[1:-1])
    offset = points[:, :, None] - places[None, None]
    distance = np.sqrt((offset**2).sum(axis=-1).min(axis=1))
    rows = np.arange(len(listener))
    distance[rows, listener] = distance[rows, source] = np.inf
    return np.maximum(0.0, 1 - distance / radius).sum(axis=1)
