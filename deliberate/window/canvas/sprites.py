"""People as sprites: a disc per shade painted once, and listening rings coloured from a table of pixels.

A ring's pixels know their arc and their coverage; a frame of playback only looks up the arc's present colour. That
costs a tenth of painting the arcs.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QImage, QPainter, QPen, QPixmap
from shiboken6 import Shiboken

from deliberate.rehearsal.voices import Voices
from deliberate.window.theme import SHADES, Theme, mix, shades

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]

INNER = 0.74  # radius of the disc inside a ring, as a part of the whole
RING = (0.80, 1.0)  # inner and outer edge of the ring
LEAST_RING_PX = 16.0
MOST_RINGS = 200
_COLUMNS = 16
_LEVELS = 32  # steps of coverage
_GAP_PX = 1.6  # between arcs
_HATCH_PX = 3.2


class DiscAtlas:
    """Discs of one size in all belief shades, painted when first needed."""

    def __init__(self, radius: float, ratio: float, theme: Theme) -> None:
        self.radius, self.ratio = radius, ratio
        self.theme = theme
        self.cell = 2 * math.ceil((radius + 1.5) * ratio) + 2
        rows = SHADES // _COLUMNS
        self.pixmap = QPixmap(_COLUMNS * self.cell, rows * self.cell)
        self.pixmap.fill(Qt.GlobalColor.transparent)
        self._done = np.zeros(SHADES, dtype=bool)

    def draw(self, painter: QPainter, points: Floats, shade: Indices, scale: float) -> None:
        """Put a disc of each shade at each point (pixels)."""
        if len(points) == 0:
            return
        self._paint_missing(shade)
        # The ten doubles of QPainter::PixmapFragment: middle, source corner and size, scale, rotation, opacity.
        fragments = np.zeros((len(points), 10))
        fragments[:, 0:2] = points
        fragments[:, 2] = shade % _COLUMNS * self.cell
        fragments[:, 3] = shade // _COLUMNS * self.cell
        fragments[:, 4:6] = self.cell
        fragments[:, 6:8] = scale / self.ratio
        fragments[:, 9] = 1.0
        first = Shiboken.wrapInstance(fragments.ctypes.data, QPainter.PixmapFragment)
        painter.drawPixmapFragments(first, len(fragments), self.pixmap)

    def _paint_missing(self, shade: Indices) -> None:
        missing = [index for index in sorted(set(shade.tolist())) if not self._done[index]]
        if not missing:
            return
        colors = shades(self.theme)
        with QPainter(self.pixmap) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            reach = self.radius * self.ratio
            width = max(1.0, min(1.5, self.radius * 0.06)) * self.ratio
            painter.setPen(QPen(QColor(self.theme.mark), width))
            for index in missing:
                middle = QPointF((index % _COLUMNS + 0.5) * self.cell, (index // _COLUMNS + 0.5) * self.cell)
                painter.setBrush(colors[index])
                painter.drawEllipse(middle, reach - width / 2, reach - width / 2)
                self._done[index] = True


class RingSprites:
    """The rings of everybody in one stage, at one size.

    The colours are numbered: 0 .. people-1 the present belief of each, then the starting belief of each, then the
    hairline around the ring.
    """

    def __init__(
        self, people: int, voices: Voices, angle: Floats, radius: float, ratio: float, theme: Theme, start: Indices
    ) -> None:
        """`angle` (arrows that count,) is the clockwise direction from the top, in radians, in which each source
        stands: arcs are in that order. `start` are the shades of the starting beliefs."""
        self.radius, self.ratio = radius, ratio
        self.cell = 2 * math.ceil((radius + 1) * ratio) + 2
        self._start = start
        self._worn: Indices | None = None  # the shades that the image shows now
        self._colors = _coverage_table(theme)
        self._columns = max(1, math.ceil(math.sqrt(people)))
        rows = math.ceil(people / self._columns) if people else 1
        self._pixels = np.zeros((rows * self.cell, self._columns * self.cell), dtype=np.uint32)
        self.image = QImage(
            self._pixels.data,
            self._pixels.shape[1],
            self._pixels.shape[0],
            self._pixels.shape[1] * 4,
            QImage.Format.Format_ARGB32_Premultiplied,
        )
        self._draw_up(people, voices, angle)

    def source(self, person: int) -> QRectF:
        """Where a person's ring lies in the image."""
        return QRectF(
            person % self._columns * self.cell,
            person // self._columns * self.cell,
            float(self.cell),
            float(self.cell),
        )

    def color(self, shade: Indices) -> None:
        """Give all arcs the colours of these present beliefs."""
        if self._worn is not None and np.array_equal(self._worn, shade):
            return
        self._worn = shade
        numbers = np.concatenate([shade, self._start, [SHADES]])
        self._pixels.reshape(-1)[self._where] = self._colors[self._level, numbers[self._voice]]

    def _draw_up(self, people: int, voices: Voices, angle: Floats) -> None:
        offset, reach, around, ring, line = _template(self.cell, self.radius * self.ratio, self.ratio)
        where, voice, level = [], [], []
        by_listener = _split(people, voices, angle)
        hatched = _stripes(offset, _HATCH_PX * self.ratio)
        row_length = self._columns * self.cell
        for person in range(people):
            edges, owners = _arcs(person, people, voices, by_listener[person])
            covered, arc = _on_arcs(edges, around, reach, self.ratio)
            owner = owners[arc]
            firm = (owner >= people) & (owner < 2 * people)
            covered = covered * np.where(firm & ~hatched, 0.22, 1.0) * ring
            # The hairline lies over the arcs.
            over = line > covered
            owner, covered = np.where(over, 2 * people, owner), np.maximum(covered, line)
            steps = np.rint(covered * (_LEVELS - 1)).astype(np.intp)
            seen = steps > 0
            corner = (person // self._columns) * self.cell * row_length + (person % self._columns) * self.cell
            where.append(corner + offset[seen, 1] * row_length + offset[seen, 0])
            voice.append(owner[seen])
            level.append(steps[seen])
        none = [np.zeros(0, dtype=np.intp)]
        self._where = np.concatenate(where or none)
        self._voice = np.concatenate(voice or none)
        self._level = np.concatenate(level or none)


def directions(places: Floats, listener: Indices, source: Indices) -> Floats:
    """Clockwise angle from the top in which each source stands as seen by its listener, 0 to 2 pi."""
    along = places[source] - places[listener]
    angle: Floats = np.arctan2(along[:, 0], -along[:, 1]) % (2 * math.pi)
    return angle


def _coverage_table(theme: Theme) -> NDArray[np.uint32]:
    """Premultiplied ARGB for each level of coverage and each shade; the last column is the hairline's colour."""
    colors = [*shades(theme), QColor(theme.mark)]
    rgb = np.array([color.getRgb()[:3] for color in colors], dtype=np.float64)
    alpha = np.linspace(0, 1, _LEVELS)[:, None, None]
    mixed = np.rint(rgb[None] * alpha).astype(np.uint32)
    solid = np.rint(alpha[..., 0] * 255).astype(np.uint32)
    return (solid << 24) | (mixed[..., 0] << 16) | (mixed[..., 1] << 8) | mixed[..., 2]


def _template(cell: int, radius: float, ratio: float) -> tuple[Indices, Floats, Floats, Floats, Floats]:
    """The pixels of a ring, the same for everybody: place in the cell, distance and clockwise angle from the
    middle, coverage by the ring and by the hairline at its outer edge."""
    rows, columns = np.mgrid[0:cell, 0:cell]
    x, y = columns + 0.5 - cell / 2, rows + 0.5 - cell / 2
    reach = np.hypot(x, y)
    inner, outer = radius * RING[0], radius * RING[1]
    ring = np.clip(reach - inner + 0.5, 0, 1) * np.clip(outer - reach + 0.5, 0, 1)
    line = np.clip(0.5 + 0.55 * ratio - np.abs(reach - outer + 0.5 * ratio), 0, 1) * (
        0.9 if radius > 20 * ratio else 0.6
    )
    seen = (ring > 0) | (line > 0)
    offset = np.stack([columns[seen], rows[seen]], axis=1)
    around = np.arctan2(x[seen], -y[seen]) % (2 * math.pi)
    return offset, reach[seen], around, ring[seen], line[seen]


def _split(people: int, voices: Voices, angle: Floats) -> list[Indices]:
    """For each person, which of the arrows that count are hers, in the order of their angles."""
    order = np.lexsort((angle, voices.listener))
    ends = np.searchsorted(voices.listener[order], np.arange(people + 1))
    return [order[ends[person] : ends[person + 1]] for person in range(people)]


def _arcs(person: int, people: int, voices: Voices, own_arrows: Indices) -> tuple[Floats, Indices]:
    """Edges of the arcs in radians from the first one's beginning, and whose colour each wears. Her own view, with
    the firm part before it, has its middle at the top; the first arc begins half of it before the top."""
    firm, own = float(voices.firm[person]), float(voices.own[person])
    widths = np.concatenate([[firm, own], voices.share[own_arrows]])
    owners = np.concatenate([[people + person, person], voices.source[own_arrows]])
    drawn = widths > 1e-9
    edges = np.concatenate([[0.0], np.cumsum(widths[drawn])]) * (2 * math.pi) - (firm + own) * math.pi
    return edges, owners[drawn]


def _on_arcs(edges: Floats, around: Floats, reach: Floats, ratio: float) -> tuple[Floats, Indices]:
    """Coverage of each pixel by its arc, less the gaps, and which arc it is."""
    count = len(edges) - 1
    if count == 1:
        return np.ones(len(around)), np.zeros(len(around), dtype=np.intp)
    turned = (around - edges[0]) % (2 * math.pi)
    arc = np.clip(np.searchsorted(edges - edges[0], turned, side="right") - 1, 0, count - 1)
    begin, end = edges[arc] - edges[0], edges[arc + 1] - edges[0]
    width = (end - begin) * reach
    gap = np.minimum(_GAP_PX * ratio, width * 0.35)
    away = np.minimum(turned - begin, end - turned) * reach
    return np.clip(away - gap / 2 + 0.5, 0, 1), arc


def _stripes(offset: Indices, period: float) -> NDArray[np.bool_]:
    """Diagonal hatching."""
    return ((offset[:, 0] + offset[:, 1]) % max(period, 2.0)) < period * 0.5


def faded(color: QColor, theme: Theme) -> QColor:
    """The paler colour of somebody who is not there."""
    return mix(color.name(), theme.canvas, 0.65)
