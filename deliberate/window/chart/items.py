"""What the chart is made of in pyqtgraph: pictures that are kept, and axes with words and whole rounds."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QPainter, QPixmap, QTransform
from PySide6.QtWidgets import QStyleOptionGraphicsItem, QWidget

from deliberate.window.chart.frame import Frame
from deliberate.window.rounds_ruler import tick_step
from deliberate.window.theme import Look, Theme

TICK_ROOM = 42.0  # pixels a round number and its gap take

PaintPart = Callable[[QPainter, Frame, Theme], None]


class StillItem(pg.GraphicsObject):
    """Fills its view with what `paint_part` paints, and keeps it in a pixmap until view, size or content change."""

    def __init__(self, paint_part: PaintPart, look: Look) -> None:
        super().__init__()
        self._paint_part, self._look = paint_part, look
        self._kept: QPixmap | None = None
        self._key: tuple[float, ...] = ()
        self.setZValue(-10)

    def boundingRect(self) -> QRectF:
        return self.viewRect() or QRectF()

    def viewTransformChanged(self) -> None:
        super().viewTransformChanged()
        self.prepareGeometryChange()
        self.update()

    def forget(self) -> None:
        """Paint anew: the content is another one."""
        self._key = ()
        self.update()

    def paint(self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None) -> None:
        view = self.viewRect()
        if view is None or view.width() == 0 or view.height() == 0:
            return
        to_device = painter.worldTransform()
        rect = to_device.mapRect(view)
        ratio = painter.device().devicePixelRatioF()
        key = (*rect.getRect(), *view.getRect(), ratio)
        if key != self._key or self._kept is None:
            self._kept = self._painted(rect, view, ratio)
            self._key = key
        painter.setWorldTransform(QTransform())
        painter.drawPixmap(rect.topLeft(), self._kept)

    def _painted(self, rect: QRectF, view: QRectF, ratio: float) -> QPixmap:
        pixmap = QPixmap(max(round(rect.width() * ratio), 1), max(round(rect.height() * ratio), 1))
        pixmap.setDevicePixelRatio(ratio)
        pixmap.fill(Qt.GlobalColor.transparent)
        frame = Frame(QRectF(0, 0, rect.width(), rect.height()), view.left(), view.right(), view.top(), view.bottom())
        with QPainter(pixmap) as painter:
            self._paint_part(painter, frame, self._look.theme)
        return pixmap


class RoundAxis(pg.AxisItem):
    """Ticks at whole rounds only."""

    def tickValues(self, low: float, high: float, size: float) -> list[tuple[float, list[float]]]:
        step = tick_step(max(round(high - low), 1), size, TICK_ROOM)
        first = -(-int(np.ceil(low)) // step) * step
        return [(step, [float(at) for at in range(max(first, 0), int(np.floor(high)) + 1, step)])]

    def tickStrings(self, values: list[float], scale: float, spacing: float) -> list[str]:
        return [f"{value:.0f}" for value in values]


class StripAxis(pg.AxisItem):
    """The name of a strip where its scale would be."""

    def __init__(self, words: str) -> None:
        super().__init__("left")
        self._words = words
        self.setStyle(tickLength=0)

    def tickValues(self, low: float, high: float, size: float) -> list[tuple[float, list[float]]]:
        return [(1.0, [(low + high) / 2])]

    def tickStrings(self, values: list[float], scale: float, spacing: float) -> list[str]:
        return [self._words for _ in values]
