"""Where everybody stands, in scene units. Free of Qt.

People whose place the file leaves open get one from the program. It is not stored: as long as the window is open it
is remembered by id, so that an edit elsewhere moves nobody.
"""

from __future__ import annotations

from collections.abc import MutableMapping

import numpy as np
from numpy.typing import NDArray

from deliberate.scenario.values import Variant
from deliberate.window.canvas.arrange import SPACING, by_hearing, circle

Floats = NDArray[np.float64]
RADIUS = 36.0  # of a person, ring included
MOST_IN_A_CIRCLE = 12


def places(variant: Variant, remembered: MutableMapping[str, tuple[float, float]]) -> Floats:
    """Places of the variant's people, shape (people, 2). Adds to `remembered` what the program chose."""
    count = len(variant.people)
    stored = np.array([_stored(person.x, person.y) for person in variant.people]).reshape(count, 2)
    known = ~np.isnan(stored[:, 0])
    if known.all():
        return stored
    result = stored.copy()
    for index in np.flatnonzero(~known):
        if (place := remembered.get(variant.people[index].id)) is not None:
            result[index] = place
    placed = ~np.isnan(result[:, 0])
    if not placed.all():
        result = _fill(variant, result, placed)
    for index in np.flatnonzero(~known):
        remembered[variant.people[index].id] = (float(result[index, 0]), float(result[index, 1]))
    return result


def free_place(taken: Floats, near: Floats, spacing: float = SPACING) -> Floats:
    """The first place on a spiral around `near` that is `spacing` away from everybody."""
    if len(taken) == 0:
        return near
    step = np.arange(4 * len(taken) + 60)
    reach, angle = spacing * 0.35 * np.sqrt(step), step * 2.399963  # the golden angle
    spiral = near + np.stack([reach * np.cos(angle), reach * np.sin(angle)], axis=1)
    for place in spiral:
        if np.hypot(*(taken - place).T).min() >= spacing:
            return place
    return spiral[-1]


def disc_radius(placed: Floats) -> float:
    """Radius of a person for these places: `RADIUS` at the usual spacing, larger where there is more room."""
    if len(placed) < 2:
        return RADIUS
    sample = placed if len(placed) <= 400 else placed[:: len(placed) // 400 + 1]
    distance = np.hypot(sample[:, None, 0] - placed[None, :, 0], sample[:, None, 1] - placed[None, :, 1])
    distance[distance == 0] = np.inf
    nearest = np.sort(distance.min(axis=1))
    typical = float(nearest[len(nearest) // 5])  # np.percentile would load numpy.ma before the first frame
    if not np.isfinite(typical):
        return RADIUS
    if 0.6 * SPACING <= typical <= 6 * SPACING:
        return min(RADIUS * max(typical / SPACING, 1.0) ** 0.75 * 1.08, 2 * RADIUS)
    return typical * RADIUS / SPACING  # drawn up in quite other units


def _stored(x: float | None, y: float | None) -> tuple[float, float]:
    return (np.nan, np.nan) if x is None or y is None else (x, y)


def _fill(variant: Variant, result: Floats, placed: NDArray[np.bool_]) -> Floats:
    """Put those without a place where a picture of everybody would have them, and apart from the others."""
    index = {person.id: place for place, person in enumerate(variant.people)}
    if placed.any():
        middle, filled = result[placed].mean(axis=0), result.copy()
        spacing = SPACING * disc_radius(result[placed]) / RADIUS
        for one in np.flatnonzero(~placed):
            filled[one] = free_place(filled[~np.isnan(filled[:, 0])], middle, spacing)
        return filled
    if len(variant.people) <= MOST_IN_A_CIRCLE:
        return circle(len(variant.people))
    listener = np.array([index[arrow.listener] for arrow in variant.arrows], dtype=np.intp)
    source = np.array([index[arrow.source] for arrow in variant.arrows], dtype=np.intp)
    return by_hearing(listener, source, len(variant.people))
