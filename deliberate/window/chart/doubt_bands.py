"""Paints how far apart the draws are: bands around curves and endings, whiskers on the spread, odds of the ballot."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPen, QPolygonF

from deliberate.rehearsal.doubt_results import Doubt, Odds
from deliberate.window.chart.frame import Frame
from deliberate.window.chart.strips import cell_edges, shown_rounds
from deliberate.window.theme import Theme, mix

OUTER, INNER = (0, -1), (1, -2)  # of the bands' levels: 8 of 10 draws, and half of them
OPACITY, OPACITY_OF_MANY = (60, 80), (26, 0)  # of the outer and the inner band, of 255
ENDING_WIDTH = 5.0


def paint_bands(
    painter: QPainter,
    frame: Frame,
    doubt: Doubt,
    people: list[int],
    colors: list[QColor],
    at: NDArray[np.intp],
    *,
    chosen: bool,
) -> None:
    """Where the beliefs of `people` lie in 8 of 10 draws and in half of them, at the rounds `at`; the `chosen`
    ones stand out, the others lie over each other as a haze."""
    x = np.asarray(frame.x(at.astype(float)))
    painter.setPen(Qt.PenStyle.NoPen)
    for one, color in zip(people, colors, strict=True):
        for (low, high), opacity in zip((OUTER, INNER), OPACITY if chosen else OPACITY_OF_MANY, strict=True):
            if opacity:
                painter.setBrush(_through(color, opacity))
                bottom, top = (np.asarray(frame.y(doubt.beliefs[level, at, one])) for level in (low, high))
                painter.drawPolygon(_outline(x, top, bottom))


def paint_endings(painter: QPainter, frame: Frame, doubt: Doubt, people: list[int], theme: Theme) -> None:
    """The same for the long run, as bars at the right edge: a thin one for 8 of 10 draws, a thick one for half."""
    right = frame.rect.right() - 2
    for one in people:
        levels = [float(frame.y(value)) for value in doubt.long_run[:, one]]
        painter.setPen(QPen(QColor(theme.accent), 1.5))
        painter.drawLine(QLineF(right, levels[OUTER[0]], right, levels[OUTER[1]]))
        painter.setPen(QPen(QColor(theme.accent), ENDING_WIDTH, Qt.PenStyle.SolidLine, Qt.PenCapStyle.FlatCap))
        painter.drawLine(QLineF(right, levels[INNER[0]], right, levels[INNER[1]]))


def paint_spread_whiskers(painter: QPainter, frame: Frame, doubt: Doubt, widest: float, theme: Theme) -> None:
    """On each bar of the spread: a line over 8 of 10 draws."""
    if widest <= 0:
        return
    painter.setClipRect(frame.rect)
    painter.setPen(QPen(QColor(theme.ink), 1.2))
    rounds = doubt.spread.shape[1]
    for at in shown_rounds(frame, rounds):
        left, right = cell_edges(frame, rounds, at)
        middle = (left + right) / 2
        low, high = (
            frame.rect.bottom() - frame.rect.height() * min(float(doubt.spread[level, at]) / widest, 1.0)
            for level in OUTER
        )
        painter.drawLine(QLineF(middle, low, middle, high))


def paint_odds(painter: QPainter, frame: Frame, passes: tuple[Odds, ...], theme: Theme) -> None:
    """For each round a column filled from below by the share of draws in which it passes, with a line at half."""
    painter.setClipRect(frame.rect)
    top, height = frame.rect.top() + 3, frame.rect.height() - 4
    painter.setPen(Qt.PenStyle.NoPen)
    for at in shown_rounds(frame, len(passes)):
        left, right = cell_edges(frame, len(passes), at)
        painter.fillRect(QRectF(left, top, right - left, height), QColor(theme.line))
        filled = height * passes[at].share
        painter.fillRect(QRectF(left, top + height - filled, right - left, filled), mix(theme.panel, theme.ink, 0.62))
    painter.setPen(QPen(QColor(theme.muted), 1, Qt.PenStyle.DotLine))
    middle = round(top + height / 2) + 0.5
    painter.drawLine(QLineF(frame.rect.left(), middle, frame.rect.right(), middle))


def _outline(x: NDArray[np.float64], top: NDArray[np.float64], bottom: NDArray[np.float64]) -> QPolygonF:
    points = [QPointF(*point) for point in zip(x.tolist(), top.tolist(), strict=True)]
    return QPolygonF(
        points + [QPointF(*point) for point in zip(x[::-1].tolist(), bottom[::-1].tolist(), strict=True)]
    )


def _through(color: QColor, opacity: int) -> QColor:
    seen_through = QColor(color)
    seen_through.setAlpha(opacity)
    return seen_through
