"""How scene units become pixels: zoom, and what stands in the middle. Free of Qt."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
LEAST_ZOOM, MOST_ZOOM = 0.02, 6.0
ZOOM_STEP = 1.25
MOST_FIT_ZOOM = 1.3  # a committee of three does not need discs as large as plates


@dataclass(frozen=True)
class Viewport:
    """pixel = scene * zoom + (x, y)."""

    zoom: float = 1.0
    x: float = 0.0
    y: float = 0.0

    def to_screen(self, places: Floats) -> Floats:
        """Scene places as pixels."""
        return places * self.zoom + (self.x, self.y)

    def to_scene(self, points: Floats) -> Floats:
        """Pixels as scene places."""
        return (points - (self.x, self.y)) / self.zoom

    def moved(self, dx: float, dy: float) -> Viewport:
        """The picture moved by whole pixels, so that what was painted can be reused as it is."""
        return replace(self, x=self.x + round(dx), y=self.y + round(dy))

    def zoomed(self, factor: float, x: float, y: float, radius: float) -> Viewport:
        """Nearer or farther by `factor`, with what is at pixel (x, y) staying there. A person of `radius` scene
        units stays between a dot and half a screen."""
        unit = 36.0 / radius
        zoom = min(max(self.zoom * factor, LEAST_ZOOM * unit), MOST_ZOOM * unit)
        share = zoom / self.zoom
        return Viewport(zoom, x - (x - self.x) * share, y - (y - self.y) * share)


def fitted(
    places: Floats, radius: float, width: float, height: float, margins: tuple[float, float, float, float]
) -> Viewport:
    """The viewport that shows everybody in `width` x `height` pixels less the margins (left, top, right, bottom)."""
    left, top, right, bottom = margins
    wide, high = max(width - left - right, 40.0), max(height - top - bottom, 40.0)
    middle = np.array([left + wide / 2, top + high / 2])
    unit = 36.0 / radius
    if len(places) == 0:
        return Viewport(unit, *middle)
    low, high_end = places.min(axis=0) - radius, places.max(axis=0) + radius
    size = np.maximum(high_end - low, 1e-9)
    zoom = min(wide / size[0], high / size[1], MOST_FIT_ZOOM * unit)
    offset = middle - (low + high_end) / 2 * zoom
    return Viewport(float(zoom), float(np.round(offset[0])), float(np.round(offset[1])))
