"""Ways of placing everybody anew, in scene units around the origin. Free of Qt.

A scene unit is a pixel at 100 % zoom; y grows downwards. All results have shape (people, 2).
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]

SPACING = 150.0  # between the middles of neighbours: room for two rings, a name and an arrow that can be read
MOST_FOR_STRESS = 700  # the methods below take memory and time quadratic in the number of people


def circle(count: int, spacing: float = SPACING) -> Floats:
    """Around a circle, clockwise from the top, neighbours at least `spacing` apart."""
    if count <= 1:
        return np.zeros((count, 2))
    radius = max(spacing / (2 * math.sin(math.pi / count)), spacing * 0.75)
    angles = np.arange(count) * (2 * math.pi / count)
    if count == 2:
        angles += math.pi * 1.5  # side by side
    return np.stack([np.sin(angles), -np.cos(angles)], axis=1) * radius


def grid(count: int, spacing: float = SPACING) -> Floats:
    """In rows of equal length, somewhat wider than high, the last row centred."""
    if count == 0:
        return np.zeros((0, 2))
    columns = max(1, math.ceil(math.sqrt(count * 1.4)))
    rows = math.ceil(count / columns)
    columns = math.ceil(count / rows)
    place = np.arange(count)
    row, column = place // columns, place % columns
    in_row = np.minimum(columns, count - row * columns)
    x = (column - (in_row - 1) / 2) * spacing
    y = (row - (rows - 1) / 2) * spacing
    return np.stack([x, y], axis=1).astype(np.float64)


def by_group(
    groups: Sequence[Sequence[int]], count: int, spacing: float = SPACING, *, largest_first: bool = True
) -> Floats:
    """Each group (indices of people) in a circle of its own, the circles in rows, the largest first or as given.

    Everybody who is in no group stands in one more circle.
    """
    known = {index for group in groups for index in group}
    rest = [index for index in range(count) if index not in known]
    ordered = [list(group) for group in groups if group]
    if largest_first:
        ordered.sort(key=len, reverse=True)
    if rest:
        ordered.append(rest)
    shapes = [circle(len(group), spacing) for group in ordered]
    reach = [float(np.hypot(*shape.T).max()) + spacing * 0.7 for shape in shapes]
    result = np.zeros((count, 2))
    for group, shape, middle in zip(ordered, shapes, _shelves(reach), strict=True):
        result[group] = shape + middle
    return _centred(result)


def by_hearing(listener: Indices, source: Indices, count: int, spacing: float = SPACING) -> Floats:
    """Those who hear each other, directly or through few others, near each other.

    Stress majorisation (Gansner, Koren and North 2004) of the distances along arrows, in either direction, started
    from classical scaling (Torgerson 1952), so that the same committee always gets the same picture.
    """
    if count > MOST_FOR_STRESS:
        return grid(count, spacing)
    if count < 3 or len(listener) == 0:
        return circle(count, spacing)
    wanted = _distances(listener, source, count)
    places = _classical_scaling(wanted)
    places = _less_stress(places, wanted, sweeps=80 if count <= 200 else 30)
    return _centred(push_apart(_upright(places) * spacing, spacing))


def push_apart(places: Floats, spacing: float, sweeps: int = 60, fixed: NDArray[np.bool_] | None = None) -> Floats:
    """`places` moved as little as is needed that neighbours are about `spacing` apart; `fixed` ones stay."""
    count = len(places)
    if count < 2:
        return places
    # Two at the very same place need a direction to part in; the golden angle gives each its own.
    angle = np.arange(count) * 2.399963
    moved = places + np.stack([np.cos(angle), np.sin(angle)], axis=1) * spacing * 1e-3
    if fixed is not None:
        moved[fixed] = places[fixed]
    free = np.ones(count) if fixed is None else np.where(fixed, 0.0, 1.0)
    for _ in range(sweeps):
        between = moved[:, None] - moved[None]
        distance = np.hypot(between[..., 0], between[..., 1])
        np.fill_diagonal(distance, np.inf)
        short = np.maximum(0.0, spacing - distance)
        if short.max() < spacing * 0.02:
            break
        push = short / np.maximum(distance, 1e-9)
        moved = moved + (between * push[..., None]).sum(axis=1) * (free * 0.45)[:, None]
    return moved


def _shelves(reach: Sequence[float]) -> list[Floats]:
    """Middles for circles of these radii, side by side in rows of about the picture's proportion."""
    widest = max(math.sqrt(sum((2 * r) ** 2 for r in reach) * 1.5), 2 * max(reach, default=0.0))
    middles: list[Floats] = []
    x = y = high = 0.0
    for r in reach:
        if x > 0 and x + 2 * r > widest * 1.05:
            x, y, high = 0.0, y + high, 0.0
        middles.append(np.array([x + r, y + r]))
        x, high = x + 2 * r, max(high, 2 * r)
    return middles


def _centred(places: Floats) -> Floats:
    if len(places) == 0:
        return places
    return places - (places.min(axis=0) + places.max(axis=0)) / 2


def _distances(listener: Indices, source: Indices, count: int) -> Floats:
    """Number of arrows between every two people, whichever way they point; a little more than the longest where
    there is no way at all."""
    linked = np.zeros((count, count), dtype=bool)
    linked[listener, source] = linked[source, listener] = True
    distance = np.full((count, count), np.inf)
    reached = np.eye(count, dtype=bool)
    distance[reached] = 0.0
    edge = reached
    step = 0
    weights = linked.astype(np.float32)
    while edge.any():
        step += 1
        edge = ((edge.astype(np.float32) @ weights) > 0) & ~reached
        distance[edge] = step
        reached = reached | edge
    longest = distance[np.isfinite(distance)].max()
    distance[~np.isfinite(distance)] = longest + 1.5
    return distance


def _classical_scaling(distance: Floats) -> Floats:
    squared = distance**2
    centred = squared - squared.mean(axis=0) - squared.mean(axis=1)[:, None] + squared.mean()
    values, vectors = np.linalg.eigh(-centred / 2)
    top = vectors[:, -2:][:, ::-1]
    top = top * np.sign(top[np.abs(top).argmax(axis=0), [0, 1]])  # an eigenvector's sign is arbitrary
    places: Floats = top * np.sqrt(np.maximum(values[-2:][::-1], 1e-6))
    return places


def _less_stress(places: Floats, wanted: Floats, sweeps: int) -> Floats:
    """Majorisation with weights 1 / distance^2 by Jacobi steps, which need no matrix factorised."""
    weight = np.where(wanted > 0, 1 / np.maximum(wanted, 1e-9) ** 2, 0.0)
    total = weight.sum(axis=1)
    for _ in range(sweeps):
        between = places[:, None] - places[None]
        distance = np.maximum(np.hypot(between[..., 0], between[..., 1]), 1e-9)
        pull = (weight * wanted / distance)[..., None] * between
        places = ((weight @ places) + pull.sum(axis=1)) / total[:, None]
    return places


def _upright(places: Floats) -> Floats:
    """Turned so that the picture is widest from left to right."""
    centred = places - places.mean(axis=0)
    _, axes = np.linalg.eigh(centred.T @ centred)
    axes = axes[:, ::-1]
    axes = axes * np.where(axes[np.abs(axes).argmax(axis=0), [0, 1]] < 0, -1.0, 1.0)
    turned: Floats = centred @ axes
    return turned
