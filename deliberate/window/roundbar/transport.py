"""Buttons that move the talk on, drawn by hand so that they stay sharp at every size."""

from __future__ import annotations

from typing import Literal

from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen, QPolygonF
from PySide6.QtWidgets import QAbstractButton, QWidget

from deliberate.window.theme import Look

Sign = Literal["play", "on", "back", "start", "loop"]


def _triangle(centre: QPointF, half: float, direction: int) -> QPolygonF:
    tip = centre + QPointF(direction * half, 0)
    back = centre.x() - direction * half * 0.75
    return QPolygonF([tip, QPointF(back, centre.y() - half), QPointF(back, centre.y() + half)])


class TransportButton(QAbstractButton):
    """A round button with a sign. "play" turns into pause, "loop" into a lit sign, while it is checked."""

    def __init__(self, sign: Sign, name: str, look: Look, parent: QWidget, *, size: int = 30) -> None:
        super().__init__(parent)
        self._sign, self._look = sign, look
        self._size = size
        self.setFixedSize(size, size)
        self.setAccessibleName(name)
        self.setToolTip(name)
        self.setFocusPolicy(Qt.FocusPolicy.TabFocus)
        self.setAttribute(Qt.WidgetAttribute.WA_Hover)
        look.changed.connect(self.update)

    def sizeHint(self) -> QSize:
        return QSize(self._size, self._size)

    def paintEvent(self, event: QPaintEvent) -> None:
        theme = self._look.theme
        main = self._sign == "play"
        with QPainter(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            disc = QRectF(self.rect()).adjusted(2, 2, -2, -2)
            painter.setPen(Qt.PenStyle.NoPen)
            if main:
                painter.setBrush(QColor(theme.accent))
                painter.drawEllipse(disc)
            elif self.underMouse() or self.isChecked():
                painter.setBrush(QColor(theme.tint))
                painter.setPen(QColor(theme.accent) if self.isChecked() else Qt.PenStyle.NoPen)
                painter.drawEllipse(disc)
            if self.hasFocus():
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.setPen(QPen(QColor(theme.on_accent if main else theme.accent), 2))
                inset = 3 if main else 0
                painter.drawEllipse(disc.adjusted(inset, inset, -inset, -inset))
            lit = self.underMouse() or self.isChecked()
            ink = theme.on_accent if main else theme.accent if lit else theme.muted
            painter.setPen(Qt.PenStyle.NoPen)
            painter.setBrush(QColor(ink))
            self._paint_sign(painter, QPointF(disc.center()), disc.width())

    def _paint_sign(self, painter: QPainter, centre: QPointF, width: float) -> None:
        half = width * 0.21
        bar = width * 0.09
        match self._sign:
            case "play" if self.isChecked():
                for side in (-1, 1):
                    painter.drawRect(
                        QRectF(centre.x() + side * half * 0.6 - bar / 2, centre.y() - half, bar, 2 * half)
                    )
            case "play":
                painter.drawPolygon(_triangle(centre + QPointF(half * 0.12, 0), half * 1.1, 1))
            case "on" | "back":
                way = 1 if self._sign == "on" else -1
                painter.drawPolygon(_triangle(centre - QPointF(way * half * 0.25, 0), half, way))
                painter.drawRect(QRectF(centre.x() + way * half * 0.95 - bar / 2, centre.y() - half, bar, 2 * half))
            case "start":
                painter.drawRect(QRectF(centre.x() - half * 1.3 - bar / 2, centre.y() - half, bar, 2 * half))
                painter.drawPolygon(_triangle(centre - QPointF(half * 0.1, 0), half * 0.8, -1))
                painter.drawPolygon(_triangle(centre + QPointF(half * 1.0, 0), half * 0.8, -1))
            case "loop":
                painter.setBrush(Qt.BrushStyle.NoBrush)
                pen = painter.pen()
                pen.setStyle(Qt.PenStyle.SolidLine)
                pen.setWidthF(bar)
                pen.setColor(QColor(self._look.theme.accent if self.isChecked() else self._look.theme.muted))
                painter.setPen(pen)
                ring = QRectF(centre.x() - half, centre.y() - half, 2 * half, 2 * half)
                painter.drawArc(ring, 60 * 16, 300 * 16)
                painter.setPen(Qt.PenStyle.NoPen)
                painter.setBrush(pen.color())
                painter.drawPolygon(_triangle(centre + QPointF(half * 0.35, -half * 0.95), half * 0.55, 1))
