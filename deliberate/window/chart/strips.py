"""The two strips under the chart: how far apart views are, and the ballot, round by round."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPolygonF

from deliberate.rehearsal.results import Tally
from deliberate.window.chart.frame import Frame
from deliberate.window.theme import Theme

WIDEST_CELL = 26.0


def cell_edges(frame: Frame, rounds: int, at: int) -> tuple[float, float]:
    """Left and right pixel of round `at`: centred on its tick, with a gap to the next where there is room."""
    per_round = frame.rect.width() / (frame.right - frame.left)
    width = min(per_round * 0.72, WIDEST_CELL) if per_round > 4 else per_round
    middle = float(frame.x(float(at)))
    left, right = middle - width / 2, middle + width / 2
    return max(left, frame.rect.left()), min(right, frame.rect.right())


def paint_spread(painter: QPainter, frame: Frame, spread: NDArray[np.float64], widest: float, theme: Theme) -> None:
    """Bars as tall as the spread, against the widest there can be."""
    painter.setClipRect(frame.rect)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(QColor(theme.mark))
    for at in shown_rounds(frame, len(spread)):
        left, right = cell_edges(frame, len(spread), at)
        height = max(frame.rect.height() * float(spread[at]) / widest, 1.0) if widest > 0 else 1.0
        painter.drawRect(QRectF(left, frame.rect.bottom() - height, right - left, height))


def paint_ballot(painter: QPainter, frame: Frame, ballot: tuple[Tally, ...], theme: Theme) -> None:
    """For on top, abstaining between, against below, each as tall as its share; a tick where it passes.

    Colours are those of the belief scale; the place in the bar and the tick say the same without them.
    """
    painter.setClipRect(frame.rect)
    for at in shown_rounds(frame, len(ballot)):
        tally = ballot[at]
        total = tally.in_favour + tally.abstain + tally.against
        left, right = cell_edges(frame, len(ballot), at)
        top, height = frame.rect.top() + 9, frame.rect.height() - 10
        parts = (
            (tally.in_favour, theme.stops[9]),
            (tally.abstain, theme.line),
            (tally.against, theme.stops[1]),
        )
        painter.setPen(Qt.PenStyle.NoPen)
        for votes, color in parts:
            part = height * votes / total if total else 0.0
            painter.fillRect(QRectF(left, top, right - left, max(part - 0.5, 0.0)), QColor(color))
            top += part
        if tally.passes:
            middle, foot = (left + right) / 2, frame.rect.top() + 7
            half = min(4.0, max((right - left) / 2, 1.5))
            painter.setBrush(QColor(theme.ink))
            mark = [QPointF(middle - half, foot - 6), QPointF(middle + half, foot - 6), QPointF(middle, foot)]
            painter.drawPolygon(QPolygonF(mark))


def shown_rounds(frame: Frame, rounds: int) -> range:
    """The rounds inside the frame, thinned to one a pixel."""
    first = max(int(np.floor(frame.left)), 0)
    last = min(int(np.ceil(frame.right)), rounds - 1)
    step = max(1, int((frame.right - frame.left) / max(frame.rect.width(), 1)))
    return range(first, last + 1, step)
