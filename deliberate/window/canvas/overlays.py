"""What is written and marked over the picture: selection, focus, legends, the sentence at the foot, hints."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRect, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QLinearGradient, QPainter, QPainterPath, QPen, QPolygonF

from deliberate.rehearsal.words import number
from deliberate.scenario.values import Question
from deliberate.window.canvas import geometry
from deliberate.window.canvas.geometry import Curves
from deliberate.window.theme import Theme, mix

Floats = NDArray[np.float64]
LISTENED = "Arrows point at the person listened to"
TRAVEL = "Arrows show the way beliefs travel"
MOVES = "Arrow thickness: what ten points more would move"
TIMES = "× says how many votes somebody casts"
UP_OR_DOWN = "Filled heads move the mean up, open heads down"
EMPTY = "Double-click to add the first person"
EDGE = 16  # of the picture to what is written on it


def circle_people(
    painter: QPainter, points: Floats, which: Iterable[int], radius: float, theme: Theme, *, gap: float, width: float
) -> None:
    """An accent circle around people: thick and close for selected ones, thin and wider for the focus."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
    painter.setPen(QPen(QColor(theme.accent), width))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for person in which:
        reach = radius + gap
        painter.drawEllipse(QPointF(*points[person]), reach, reach)


def paint_arrow(
    painter: QPainter,
    arrows: Curves,
    ink: QColor,
    width: float,
    *,
    halo: QColor | None = None,
    dashed: bool = False,
    head: QColor | None = None,
) -> None:
    """Arrows over the picture, with a halo of the paper so that they stand out; `head` fills open heads."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
    count = len(arrows)
    long, half = np.full(count, 6.0 + 2.1 * width), np.full(count, 3.0 + 1.05 * width)
    lines = geometry.shortened(arrows, long * 0.8)
    path = QPainterPath()
    for start, control, tip in zip(lines.start.tolist(), lines.control.tolist(), lines.tip.tolist(), strict=True):
        path.moveTo(*start)
        path.quadTo(*control, *tip)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for color, wide in ((halo, width + 5), (ink, width)):
        if color is not None:
            pen = QPen(color, wide, Qt.PenStyle.SolidLine, Qt.PenCapStyle.FlatCap)
            if dashed and color is ink:
                pen.setDashPattern([4.0 / width + 0.5, 3.0 / width + 0.5])
            painter.setPen(pen)
            painter.drawPath(path)
    painter.setPen(Qt.PenStyle.NoPen if head is None else QPen(ink, 1.3))
    painter.setBrush(head or ink)
    for tip, left, right in geometry.heads(arrows, long, half).tolist():
        painter.drawPolygon(QPolygonF([QPointF(*tip), QPointF(*left), QPointF(*right)]))


def paint_band(painter: QPainter, area: QRectF, theme: Theme) -> None:
    """The rubber band."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    ground = QColor(theme.accent)
    ground.setAlpha(28)
    painter.setBrush(ground)
    painter.setPen(QPen(QColor(theme.accent), 1, Qt.PenStyle.DashLine))
    painter.drawRect(area)


def paint_legend(painter: QPainter, width: float, lines: Iterable[str], theme: Theme, right_room: float) -> None:
    """Which way arrows point and what is not shown, top left."""
    metrics, wrap = QFontMetricsF(painter.font()), Qt.TextFlag.TextWordWrap
    top = float(EDGE - 4)
    for line in lines:
        room = QRectF(EDGE, top, max(width - right_room - 3 * EDGE, 60), 1000)
        area = metrics.boundingRect(room, wrap, line)
        _ground(painter, area.adjusted(-6, -1, 6, 0), theme)
        painter.setPen(QColor(theme.muted))
        painter.drawText(area.adjusted(0, 0, 2, 0), wrap, line)
        top += area.height()


def scale_width(metrics: QFontMetricsF, question: Question) -> float:
    """Room that the colour scale takes at the top right."""
    return _BAR + sum(metrics.horizontalAdvance(text) for text in _ends(question)) + 16


_BAR = 108.0


def paint_scale(painter: QPainter, width: float, question: Question, theme: Theme) -> None:
    """What the colours mean, top right: the scale with its ends, and the pass mark as a tick with its number."""
    metrics = QFontMetricsF(painter.font())
    low, high = _ends(question)
    line = metrics.height()
    right = width - EDGE - metrics.horizontalAdvance(high)
    bar = QRectF(right - 8 - _BAR, EDGE - 4 + (line - 8) / 2, _BAR, 8)
    rows = 2 if question.pass_mark is not None else 1
    left_end = bar.left() - 14 - metrics.horizontalAdvance(low)
    _ground(painter, QRectF(left_end, EDGE - 6, width - EDGE + 6 - left_end, line * rows + 6), theme)
    painter.setPen(QColor(theme.muted))
    painter.drawText(QPointF(right, EDGE - 4 + metrics.ascent()), high)
    painter.drawText(QPointF(bar.left() - 8 - metrics.horizontalAdvance(low), EDGE - 4 + metrics.ascent()), low)
    gradient = QLinearGradient(bar.topLeft(), bar.topRight())
    mark = question.pass_mark
    share = 0.5 if mark is None else (mark - question.low) / question.width
    share = min(max(share, 0.0), 1.0)
    for place, stop in enumerate(theme.stops):
        part = place / (len(theme.stops) - 1)
        gradient.setColorAt(part * 2 * share if part <= 0.5 else share + (part - 0.5) * 2 * (1 - share), QColor(stop))
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
    painter.setBrush(gradient)
    painter.setPen(QPen(mix(theme.mark, theme.canvas, 0.3), 1))
    painter.drawRoundedRect(bar.adjusted(0.5, 0.5, -0.5, -0.5), 4, 4)
    if mark is not None:
        x = bar.left() + share * bar.width()
        painter.setPen(QPen(QColor(theme.ink), 1.4))
        painter.drawLine(QPointF(x, bar.top() - 3), QPointF(x, bar.bottom() + 3))
        text = f"pass mark {number(mark, question)}"
        left = min(x - metrics.horizontalAdvance(text) / 2, width - EDGE - metrics.horizontalAdvance(text))
        painter.setPen(QColor(theme.muted))
        painter.drawText(QPointF(left, EDGE - 4 + line + metrics.ascent() + 2), text)


def _ends(question: Question) -> tuple[str, str]:
    return number(question.low, question), number(question.high, question)


def paint_foot(painter: QPainter, width: float, height: float, sentence: str, theme: Theme) -> None:
    """The sentence at the foot, on the paper so that it can be read over the picture."""
    if not sentence:
        return
    metrics = QFontMetricsF(painter.font())
    text = metrics.elidedText(sentence, Qt.TextElideMode.ElideRight, width - 2 * EDGE)
    area = QRectF(
        EDGE - 6, height - EDGE - metrics.height() - 2, metrics.horizontalAdvance(text) + 12, metrics.height() + 6
    )
    _ground(painter, area, theme)
    painter.setPen(QColor(theme.ink))
    painter.drawText(area.adjusted(6, 0, 0, 0), Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft, text)


def _ground(painter: QPainter, area: QRectF, theme: Theme) -> None:
    """Paper behind words, so that they can be read over the picture."""
    ground = QColor(theme.canvas)
    ground.setAlpha(215)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(ground)
    painter.drawRoundedRect(area, 4, 4)


def paint_empty(painter: QPainter, area: QRectF, theme: Theme) -> None:
    """The invitation on an empty canvas: a ring to come, and what to do."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
    pen = QPen(QColor(theme.mark), 1.6)
    pen.setDashPattern([4.0, 4.0])
    painter.setPen(pen)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    middle = area.center() - QPointF(0, 24)
    painter.drawEllipse(middle, 34, 34)
    painter.setPen(QPen(QColor(theme.muted), 2))
    painter.drawLine(middle - QPointF(8, 0), middle + QPointF(8, 0))
    painter.drawLine(middle - QPointF(0, 8), middle + QPointF(0, 8))
    painter.setPen(QColor(theme.muted))
    text = area.adjusted(EDGE, 0, -EDGE, 0)
    text.setTop(middle.y() + 48)
    painter.drawText(text, Qt.AlignmentFlag.AlignHCenter | Qt.TextFlag.TextWordWrap, EMPTY)


def paint_edge(painter: QPainter, area: QRect, theme: Theme) -> None:
    """The edge of a canvas that is worked by key."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QColor(theme.accent))
    painter.drawRect(area.adjusted(0, 0, -1, -1))
