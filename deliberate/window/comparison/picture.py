"""Paints the lines of the compared variants: told apart by dash and letter, with one of them brought forward."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPen, QPolygonF

from deliberate.rehearsal.comparing import Course
from deliberate.window.chart.frame import Frame
from deliberate.window.text import elided
from deliberate.window.theme import Theme, mix

Figure = Literal["beliefs", "spread", "votes"]
Floats = NDArray[np.float64]

# On and off in line widths; the first is solid. Letters tell further ones apart.
DASHES: tuple[tuple[float, ...], ...] = ((), (7, 3), (1.5, 2.5), (8, 2.5, 1.5, 2.5), (14, 4), (4, 2, 1.5, 2, 1.5, 2))
MOST_POINTS = 800
LINE, THIN, FORWARD = 2.0, 1.0, 3.0
PASS_MARK = "pass mark"
GAP = 8.0  # pixels between a line's end and its label


@dataclass(frozen=True, eq=False)
class Line:
    """One variant on the chart."""

    place: int
    letter: str
    name: str
    course: Course

    def of(self, figure: Figure) -> Floats | None:
        """The line's values after each round."""
        match figure:
            case "beliefs":
                return self.course.mean
            case "spread":
                return self.course.spread
            case "votes":
                return self.course.in_favour

    @property
    def dashes(self) -> tuple[float, ...]:
        """How its line is broken."""
        return DASHES[self.place % len(DASHES)]


def paint_lines(
    painter: QPainter,
    frame: Frame,
    lines: Sequence[Line],
    figure: Figure,
    forward: int,
    pass_mark: float | None,
    last: int,
    theme: Theme,
    font: QFont,
) -> None:
    """Paint all `lines`, that of the variant at place `forward` on top in the accent, and their labels at the right
    of round `last`."""
    painter.setClipRect(frame.rect)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setFont(font)
    ordered = sorted(lines, key=lambda line: line.place == forward)
    if figure == "beliefs":
        for line in reversed(ordered):  # the filled range goes below what lies within it
            _paint_range(painter, frame, line, theme, forward=line.place == forward)
        if pass_mark is not None:
            ends = [float(line.course.mean[-1]) for line in lines]
            _paint_mark(
                painter, frame, pass_mark, last, theme, below=sum(end > pass_mark for end in ends) * 2 > len(ends)
            )
    for line in ordered:
        values = line.of(figure)
        if values is not None:
            front = line.place == forward
            pen = _pen(line, theme.accent if front else theme.ink, FORWARD if front else LINE)
            _paint_curve(painter, frame, values, pen)
    _paint_labels(painter, frame, lines, figure, forward, last, theme)


def _pen(line: Line, color: str | QColor, width: float) -> QPen:
    pen = QPen(QColor(color), width, Qt.PenStyle.SolidLine, Qt.PenCapStyle.FlatCap)
    if line.dashes:
        pen.setDashPattern([part * LINE / width for part in line.dashes])
    return pen


def _paint_mark(painter: QPainter, frame: Frame, pass_mark: float, last: int, theme: Theme, *, below: bool) -> None:
    """The pass mark, with its words on the side where fewer lines end."""
    y = round(float(frame.y(pass_mark))) + 0.5
    painter.setPen(QPen(QColor(theme.mark), 1, Qt.PenStyle.DotLine))
    painter.drawLine(QLineF(frame.rect.left(), y, float(frame.x(float(last))), y))
    painter.setPen(QColor(theme.muted))
    metrics = QFontMetricsF(painter.font())
    left = float(frame.x(float(last))) - metrics.horizontalAdvance(PASS_MARK) - 6
    painter.drawText(QPointF(left, y + metrics.ascent() + 1 if below else y - 3), PASS_MARK)


def _paint_range(painter: QPainter, frame: Frame, line: Line, theme: Theme, *, forward: bool) -> None:
    """From the lowest to the highest belief: filled for the one brought forward, its edges for all."""
    highest, lowest = _points(frame, line.course.highest), _points(frame, line.course.lowest)
    if forward:
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(mix(theme.panel, theme.accent, 0.12))
        painter.drawPolygon(QPolygonF([*highest, *reversed(lowest)]))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(_pen(line, mix(theme.panel, theme.accent if forward else theme.mark, 0.9), THIN))
    for edge in (highest, lowest):
        painter.drawPolyline(QPolygonF(edge))


def _paint_curve(painter: QPainter, frame: Frame, values: Floats, pen: QPen) -> None:
    points = _points(frame, values)
    painter.setPen(pen)
    painter.drawPolyline(QPolygonF(points))
    if points:
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(pen.color())
        painter.drawEllipse(points[-1], 3.5, 3.5)
        painter.setBrush(Qt.BrushStyle.NoBrush)


def _points(frame: Frame, values: Floats) -> list[QPointF]:
    at = np.arange(len(values))
    if len(at) > MOST_POINTS:
        at = np.unique(np.linspace(0, len(at) - 1, MOST_POINTS).astype(int))
    at = at[np.isfinite(values[at])]
    x, y = np.asarray(frame.x(at.astype(float))), np.asarray(frame.y(values[at]))
    return [QPointF(*point) for point in zip(x.tolist(), y.tolist(), strict=True)]


def _paint_labels(
    painter: QPainter, frame: Frame, lines: Sequence[Line], figure: Figure, forward: int, last: int, theme: Theme
) -> None:
    """Letter and name of each line at its height, one below the other where they would touch, with a thin link."""
    bold = QFont(painter.font())
    bold.setWeight(QFont.Weight.DemiBold)
    metrics = QFontMetricsF(bold)
    step = metrics.height() + 2
    ended = [(line, values) for line in lines if (values := line.of(figure)) is not None and np.isfinite(values[-1])]
    ended.sort(key=lambda one: -float(one[1][-1]))
    heights = spaced([float(frame.y(float(values[-1]))) for _, values in ended], step, frame.rect)
    left = float(frame.x(float(last))) + GAP
    for (line, values), middle in zip(ended, heights, strict=True):
        end = QPointF(float(frame.x(float(len(values) - 1))), float(frame.y(float(values[-1]))))
        color = QColor(theme.accent if line.place == forward else theme.ink)
        painter.setPen(QPen(QColor(theme.line), 1))
        painter.drawLine(QLineF(end + QPointF(5, 0), QPointF(left - 2, middle)))
        painter.setPen(color)
        painter.setFont(bold)
        text = elided(f"{line.letter}  {line.name}", bold, frame.rect.right() - left - 4)
        painter.drawText(QRectF(left, middle - step / 2, frame.rect.right() - left, step), _MIDDLE, text)


_MIDDLE = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter


def spaced(heights: Sequence[float], step: float, inside: QRectF) -> list[float]:
    """`heights`, which grow, moved so that neighbours are at least `step` apart, and inside as far as there is
    room."""
    placed: list[float] = []
    for height in heights:
        placed.append(max(height, placed[-1] + step if placed else inside.top() + step / 2))
    limit = inside.bottom() - step / 2
    for place in range(len(placed) - 1, -1, -1):
        placed[place] = min(placed[place], limit)
        limit = placed[place] - step
    return placed
