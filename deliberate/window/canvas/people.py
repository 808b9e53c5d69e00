"""Painting people: discs, rings, numbers, and the marks that are not colour alone."""

from __future__ import annotations

import math
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRectF, QSizeF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPen, QStaticText

from deliberate.rehearsal.words import decimals, number
from deliberate.scenario.values import Question
from deliberate.window.canvas.scene import Scene
from deliberate.window.canvas.sprites import (
    INNER,
    LEAST_RING_PX,
    MOST_RINGS,
    DiscAtlas,
    RingSprites,
    directions,
    faded,
)
from deliberate.window.theme import Theme, ink_on, shade_indices, shades

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]

ALONE = 0.88  # radius of a disc without a ring, as a part of the whole
LEAST_NUMBER_PX = 10.5  # of the disc
LEAST_TIMES_PX = 9.0  # of the letters that say how many votes
BESIDE = 0.74  # radii to the right of and below the middle, where votes are marked
_TEXTS_KEPT = 3000


class PeoplePainter:
    """Sprites and number layouts of one scene; remade only when size, stage or theme change."""

    def __init__(self) -> None:
        self._atlas: DiscAtlas | None = None
        self._rings: RingSprites | None = None
        self._rings_for: tuple[object, ...] = ()
        self._texts: dict[tuple[int, str], tuple[QStaticText, QSizeF]] = {}  # by size and text
        self._text_font = QFont()
        self.smallest_text = 7  # pixels; numbers that would be smaller are left out
        self.short = False  # a digit less on every number, also at rest, and two where one does not fit

    def with_rings(self, scene: Scene, radius: float) -> bool:
        """Whether there is room for rings at a radius in pixels."""
        return radius >= LEAST_RING_PX and len(scene.ids) <= MOST_RINGS

    def disc_part(self, scene: Scene, radius: float) -> float:
        """Radius of the disc as a part of the whole."""
        return INNER if self.with_rings(scene, radius) else ALONE

    def prepare(
        self, scene: Scene, stage: int, radius: float, ratio: float, theme: Theme, starts: Floats, *, sharp: bool
    ) -> None:
        """Have sprites for people of `radius` pixels. While zooming (not `sharp`) those at hand are scaled."""
        disc = radius * self.disc_part(scene, radius)
        atlas = self._atlas
        if atlas is None or atlas.ratio != ratio or atlas.theme is not theme or (sharp and atlas.radius != disc):
            self._atlas = DiscAtlas(disc, ratio, theme)
        wanted = (scene, stage, ratio, theme)
        if not self.with_rings(scene, radius):
            self._rings, self._rings_for = None, ()
        elif self._rings is None or self._rings_for != wanted or (sharp and self._rings.radius != radius):
            voices = scene.voices(stage)
            angle = directions(scene.places, voices.listener, voices.source)
            start = shade_indices(starts, scene.question)
            self._rings = RingSprites(len(scene.ids), voices, angle, radius, ratio, theme, start)
            self._rings_for = wanted

    def paint(
        self, painter: QPainter, scene: Scene, points: Floats, radius: float, beliefs: Floats, theme: Theme,
        *, gliding: bool, at_start: bool, sharp: bool,
    ) -> None:  # fmt: skip
        """Paint everybody at `points` (pixels) in the colours of `beliefs`."""
        if len(points) == 0 or self._atlas is None:
            return
        shade = shade_indices(beliefs, scene.question)
        here = np.flatnonzero(scene.present)
        painter.setRenderHint(QPainter.RenderHint.SmoothPixmapTransform, sharp)
        disc = radius * self.disc_part(scene, radius)
        if self._rings is not None:
            self._paint_rings(painter, points, radius, shade, here)
        scale = disc / self._atlas.radius
        self._atlas.draw(painter, points[here], shade[here], scale)
        self._paint_absent(painter, scene, points, disc, shade, theme)
        if disc >= LEAST_NUMBER_PX:
            for digits_less in (1, 2) if self.short else (1 if gliding else 0,):
                texts = number_texts(beliefs, scene.question, digits_less)
                self._size_texts(painter, disc, texts)
                if self._text_font.pixelSize() >= self.smallest_text:
                    if at_start:
                        texts = [f"{text}?" if new else text for text, new in zip(texts, scene.unknown, strict=True)]
                    self._paint_numbers(painter, points, shade, texts, scene, theme)
                    break
        if radius >= 8:
            self._paint_no_vote(painter, scene, points, radius, theme)
            self._paint_weighted(painter, scene, points, radius, theme)

    def _paint_rings(self, painter: QPainter, points: Floats, radius: float, shade: Indices, here: Indices) -> None:
        rings = self._rings
        assert rings is not None
        rings.color(shade)
        side = rings.cell / rings.ratio * (radius / rings.radius)
        for person in here.tolist():
            x, y = points[person]
            painter.drawImage(QRectF(x - side / 2, y - side / 2, side, side), rings.image, rings.source(person))

    def _paint_absent(
        self, painter: QPainter, scene: Scene, points: Floats, disc: float, shade: Indices, theme: Theme
    ) -> None:
        away = np.flatnonzero(~scene.present)
        if len(away) == 0:
            return
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
        pen = QPen(QColor(theme.muted), max(1.0, disc * 0.05))
        pen.setDashPattern([3.0, 2.6])
        painter.setPen(pen)
        for person in away.tolist():
            painter.setBrush(faded(shades(theme)[shade[person]], theme))
            painter.drawEllipse(QPointF(*points[person]), disc, disc)

    def _paint_no_vote(self, painter: QPainter, scene: Scene, points: Floats, radius: float, theme: Theme) -> None:
        """A crossed-out ballot paper at the lower right."""
        if len(scene.silent) == 0:
            return
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
        size = min(max(radius * 0.36, 6.0), 17.0)
        pen = QPen(QColor(theme.ink), max(1.0, size * 0.1))
        for person in scene.silent.tolist():
            middle = points[person] + radius * BESIDE
            slip = QRectF(middle[0] - size / 2, middle[1] - size * 0.62, size, size * 1.24)
            painter.setPen(pen)
            painter.setBrush(QColor(theme.canvas))
            painter.drawRoundedRect(slip, 1.5, 1.5)
            painter.drawLine(
                slip.bottomLeft() + QPointF(-size * 0.2, size * 0.2),
                slip.topRight() + QPointF(size * 0.2, -size * 0.2),
            )

    def _paint_weighted(self, painter: QPainter, scene: Scene, points: Floats, radius: float, theme: Theme) -> None:
        """How many votes somebody casts, at the lower right, where it is not one. In small, two ballot papers."""
        if not scene.weighted:
            return
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
        font = QFont(painter.font())
        font.setPixelSize(round(min(max(radius * 0.36, LEAST_TIMES_PX), 14.0)))
        painter.setFont(font)
        metrics = QFontMetricsF(font)
        height = metrics.height() if radius >= LEAST_RING_PX else 8.0
        for person, text in scene.weighted.items():
            width = metrics.horizontalAdvance(text) + 7 if radius >= LEAST_RING_PX else 6.0
            middle = QPointF(*(points[person] + radius * BESIDE))
            slip = QRectF(middle.x() - height * 0.5, middle.y() - height * 0.4, width, height)
            painter.setPen(QPen(QColor(theme.ink), 1.0))
            painter.setBrush(QColor(theme.canvas))
            if radius < LEAST_RING_PX:
                painter.drawRoundedRect(slip.translated(2.5, -2.0), 1.5, 1.5)
            painter.drawRoundedRect(slip, 2.5, 2.5)
            if radius >= LEAST_RING_PX:
                painter.drawText(slip, Qt.AlignmentFlag.AlignCenter, text)

    def _paint_numbers(
        self,
        painter: QPainter,
        points: Floats,
        shade: Indices,
        texts: list[str],
        scene: Scene,
        theme: Theme,
    ) -> None:
        painter.setFont(self._text_font)
        inks = _inks(theme)
        pale = QColor(theme.ink)
        last: QColor | None = None
        for person, text in enumerate(texts):
            layout, size = self._text(text)
            ink = inks[shade[person]] if scene.present[person] else pale
            if ink is not last:
                painter.setPen(ink)
                last = ink
            x, y = points[person]
            painter.drawStaticText(QPointF(x - size.width() / 2, y - size.height() / 2), layout)

    def _size_texts(self, painter: QPainter, disc: float, texts: list[str]) -> None:
        """A bold font in which the longest number of the scale fits into the disc."""
        longest = max(map(len, texts), default=1)
        font = QFont(painter.font())
        font.setBold(True)
        font.setPixelSize(
            max(7, math.floor(min(disc * (0.86 if self.short else 0.74), 1.55 * disc / (0.62 * max(longest, 2)))))
        )
        if font.family() != self._text_font.family() or len(self._texts) > _TEXTS_KEPT:
            self._texts.clear()
        self._text_font = font

    def _text(self, text: str) -> tuple[QStaticText, QSizeF]:
        key = (self._text_font.pixelSize(), text)
        known = self._texts.get(key)
        if known is None:
            layout = QStaticText(text)
            layout.setTextFormat(Qt.TextFormat.PlainText)
            layout.prepare(font=self._text_font)
            metrics = QFontMetricsF(self._text_font)
            known = layout, QSizeF(metrics.horizontalAdvance(text), metrics.height())
            self._texts[key] = known
        return known


def number_texts(beliefs: Floats, question: Question, digits_less: int = 0) -> list[str]:
    """The number on each disc, with fewer digits where it is seen from afar, or between rounds, so that it can be
    read while it changes."""
    if digits_less:
        places = max(decimals(question) - digits_less, 0)
        rounded = np.round(beliefs, places)
        return [f"{value:.{places}f}" for value in (rounded + 0.0).tolist()]
    known: dict[float, str] = {}
    for value in set(beliefs.tolist()):
        known[value] = number(value, question, beside=question.pass_mark)
        if len(known[value]) > 6:
            known[value] = number(value, question)
    return [known[value] for value in beliefs.tolist()]


@lru_cache(maxsize=4)
def _inks(theme: Theme) -> tuple[QColor, ...]:
    """What to write in on each shade."""
    return tuple(ink_on(color.rgb()) for color in shades(theme))
