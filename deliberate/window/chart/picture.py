"""Paints everything of the chart that does not move: band, curves, marks, endings. Kept in pixmaps by its item."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPen, QPolygonF

from deliberate.rehearsal.doubt_results import Doubt
from deliberate.rehearsal.results import Rehearsal
from deliberate.scenario.values import Question
from deliberate.window.chart import doubt_bands
from deliberate.window.chart.endings import Endings
from deliberate.window.chart.frame import Frame
from deliberate.window.text import elided
from deliberate.window.theme import Theme, line_color, mix, shade_indices, shades

MOST_POINTS = 800  # rounds drawn per curve; longer plans are thinned evenly
RIMMED = 12  # up to here selected curves get a rim
COLOURED_ALONE = 40  # up to here curves wear their colours when nobody is selected


@dataclass(frozen=True, eq=False)
class Content:
    """What is on the chart. Compared by identity."""

    rehearsal: Rehearsal
    question: Question
    names: tuple[str, ...]
    present: NDArray[np.bool_]
    stage_ends: tuple[int, ...]
    endings: Endings
    selected: frozenset[int]
    lit: frozenset[int]
    doubt: Doubt | None = None


def paint_chart(painter: QPainter, frame: Frame, content: Content, theme: Theme, font: QFont) -> None:
    """Paint band, stages, pass mark, curves and endings into `frame.rect`."""
    painter.setClipRect(frame.rect)
    painter.setFont(font)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    rounds = content.rehearsal.rounds
    at = np.arange(len(rounds))
    if len(at) > MOST_POINTS:
        at = np.unique(np.linspace(0, len(at) - 1, MOST_POINTS).astype(int))
    if content.doubt is None:
        _paint_band(painter, frame, content, theme, at)
    else:
        _paint_doubt(painter, frame, content, content.doubt, theme, at)
    _paint_stages(painter, frame, content, theme)
    _paint_marks(painter, frame, content, theme)
    _paint_curves(painter, frame, content, theme, at)
    taken = _paint_endings(painter, frame, content, theme)
    if content.doubt is not None and content.selected:
        doubt_bands.paint_endings(painter, frame, content.doubt, sorted(content.selected), theme)
    painter.setFont(font)
    _paint_mark_words(painter, frame, content, theme, taken)


def _paint_band(painter: QPainter, frame: Frame, content: Content, theme: Theme, at: NDArray[np.intp]) -> None:
    seen = content.rehearsal.rounds[at][:, content.present]
    if not seen.shape[1]:
        return
    x = np.asarray(frame.x(at.astype(float)))
    top, bottom = np.asarray(frame.y(seen.max(axis=1))), np.asarray(frame.y(seen.min(axis=1)))
    outline = [QPointF(*point) for point in zip(x.tolist(), top.tolist(), strict=True)]
    outline += [QPointF(*point) for point in zip(x[::-1].tolist(), bottom[::-1].tolist(), strict=True)]
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(mix(theme.panel, theme.mark, 0.16))
    painter.drawPolygon(QPolygonF(outline))


def _paint_doubt(
    painter: QPainter, frame: Frame, content: Content, doubt: Doubt, theme: Theme, at: NDArray[np.intp]
) -> None:
    """Bands of those selected or lit; of everybody present when nobody is."""
    chosen = content.selected | content.lit
    people = sorted(chosen) if chosen else np.flatnonzero(content.present).tolist()
    palette, starts = shades(theme), shade_indices(content.rehearsal.rounds[0], content.question)
    if len(people) > COLOURED_ALONE:
        colors = [QColor(theme.mark)] * len(people)
    else:
        # The middle of the scale is nearly the colour of the paper: a haze needs some ink.
        colors = [mix(theme.mark, palette[starts[one]].name(), 0.6) for one in people]
    doubt_bands.paint_bands(painter, frame, doubt, people, colors, at, chosen=bool(chosen))


def _paint_stages(painter: QPainter, frame: Frame, content: Content, theme: Theme) -> None:
    painter.setPen(QPen(QColor(theme.line), 1))
    for end in content.stage_ends[:-1]:
        x = round(float(frame.x(float(end)))) + 0.5
        painter.drawLine(QLineF(x, frame.rect.top(), x, frame.rect.bottom()))


def _paint_marks(painter: QPainter, frame: Frame, content: Content, theme: Theme) -> None:
    question = content.question
    if question.pass_mark is not None and question.undecided:
        top, bottom = (float(frame.y(question.pass_mark + way * question.undecided)) for way in (1, -1))
        painter.fillRect(
            QRectF(frame.rect.left(), top, frame.rect.width(), bottom - top), mix(theme.panel, theme.mark, 0.28)
        )
    painter.setPen(QPen(QColor(theme.mark), 1, Qt.PenStyle.DotLine))
    for value, _ in _marks(question):
        y = round(float(frame.y(value))) + 0.5
        painter.drawLine(QLineF(frame.rect.left(), y, frame.rect.right(), y))


def _marks(question: Question) -> list[tuple[float, str]]:
    """The marks on the scale that decide something, with their words."""
    both = ((question.pass_mark, "pass mark"), (question.objection_mark, "objection below"))
    return [(value, words) for value, words in both if value is not None]


def _paint_mark_words(painter: QPainter, frame: Frame, content: Content, theme: Theme, taken: list[QRectF]) -> None:
    """What the marks are, on top of the curves: at the right, or in the middle where an ending stands there."""
    metrics = QFontMetricsF(painter.font())
    for value, words in _marks(content.question):
        width, y = metrics.horizontalAdvance(words), float(frame.y(value))
        box = QRectF(frame.rect.right() - width - 6, y - metrics.height() - 1, width, metrics.height())
        if any(box.intersects(other) for other in taken):
            box.moveLeft(frame.rect.center().x() - width / 2)
        painter.fillRect(box.adjusted(-2, 1, 2, -1), mix(theme.panel, theme.mark, 0.16))
        painter.setPen(QColor(theme.muted))
        painter.drawText(box, Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextDontClip, words)
        taken.append(box)


def _paint_curves(painter: QPainter, frame: Frame, content: Content, theme: Theme, at: NDArray[np.intp]) -> None:
    beliefs = content.rehearsal.rounds[at]
    x = np.asarray(frame.x(at.astype(float)))
    y = np.asarray(frame.y(beliefs))
    people = range(beliefs.shape[1])
    chosen = content.selected | content.lit
    palette = shades(theme)
    starts = shade_indices(content.rehearsal.rounds[0], content.question)
    everybody = not chosen and len(people) <= COLOURED_ALONE
    quiet = [one for one in people if one not in chosen]
    for one in quiet:
        color = line_color(palette[starts[one]].name(), theme) if everybody else mix(theme.panel, theme.mark, 0.5)
        painter.setPen(QPen(color, 1.4 if everybody else 1.0, _dash(content, one)))
        _polyline(painter, x, y[:, one])
    for one in sorted(content.lit - content.selected):
        painter.setPen(QPen(line_color(palette[starts[one]].name(), theme), 1.8, _dash(content, one)))
        _polyline(painter, x, y[:, one])
    for one in sorted(content.selected):
        if len(content.selected) <= RIMMED:
            # A belief near the middle is pale; a rim of ink keeps its curve visible.
            painter.setPen(QPen(QColor(theme.ink), 3.2, _dash(content, one)))
            _polyline(painter, x, y[:, one])
        painter.setPen(QPen(palette[starts[one]], 2.0, _dash(content, one)))
        _polyline(painter, x, y[:, one])
    if 0 < len(content.selected) <= 3:
        _paint_names(painter, frame, content, theme)


def _dash(content: Content, person: int) -> Qt.PenStyle:
    return Qt.PenStyle.SolidLine if content.present[person] else Qt.PenStyle.DashDotLine


def _polyline(painter: QPainter, x: NDArray[np.float64], y: NDArray[np.float64]) -> None:
    painter.drawPolyline(QPolygonF([QPointF(*point) for point in zip(x.tolist(), y.tolist(), strict=True)]))


def _paint_names(painter: QPainter, frame: Frame, content: Content, theme: Theme) -> None:
    metrics = QFontMetricsF(painter.font())
    taken: list[QRectF] = []
    for one in sorted(content.selected):
        name = elided(content.names[one], painter.font(), frame.rect.width() * 0.45)
        y = float(frame.y(float(content.rehearsal.rounds[0][one])))
        left = max(float(frame.x(0.0)), frame.rect.left()) + 6  # clear of the cursor at the start
        box = QRectF(left, y - metrics.height() - 2, metrics.horizontalAdvance(name), metrics.height())
        box = _kept_apart(box, taken, frame.rect)
        painter.setPen(QColor(theme.ink))
        painter.drawText(box.bottomLeft() - QPointF(0, metrics.descent()), name)
        taken.append(box)


def _paint_endings(painter: QPainter, frame: Frame, content: Content, theme: Theme) -> list[QRectF]:
    """Where views end, with its words; returns where these stand."""
    font = QFont(painter.font())
    font.setWeight(QFont.Weight.DemiBold)
    painter.setFont(font)
    metrics = QFontMetricsF(font)
    accent = QColor(theme.accent)
    taken: list[QRectF] = []
    for value, _ in content.endings.lines:
        y = round(float(frame.y(value))) + 0.5
        painter.setPen(QPen(accent, 1.5, Qt.PenStyle.DashLine))
        painter.drawLine(QLineF(frame.rect.left(), y, frame.rect.right(), y))
    if content.endings.warning:
        words = elided(content.endings.warning, font, frame.rect.width() - 12)
        box = QRectF(frame.rect.left() + 8, frame.rect.top() + 3, metrics.horizontalAdvance(words), metrics.height())
        _paint_label(painter, box, words, theme)
        taken.append(box)
    # From the nearer edge inwards, so that words that make room for others keep the order of their values.
    lines = sorted(content.endings.lines)
    upper = bool(lines) and float(frame.y(lines[len(lines) // 2][0])) < frame.rect.center().y()
    for value, words in reversed(lines) if upper else lines:
        width = metrics.horizontalAdvance(words)
        y = float(frame.y(value))
        box = QRectF(frame.rect.right() - width - 6, y - metrics.height() - 2, width, metrics.height())
        box = _kept_apart(box, taken, frame.rect)
        _paint_label(painter, box, words, theme)
        taken.append(box)
    return taken


def _paint_label(painter: QPainter, box: QRectF, words: str, theme: Theme) -> None:
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(mix(theme.panel, theme.tint, 0.6))
    painter.drawRoundedRect(box.adjusted(-3, 0, 3, 0), 3, 3)
    painter.setPen(QColor(theme.accent))
    painter.drawText(box, Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextDontClip, words)


def _kept_apart(box: QRectF, taken: list[QRectF], inside: QRectF) -> QRectF:
    """`box` moved up or down by its height until it is free of those `taken`, and inside."""
    if box.top() < inside.top():
        box = box.translated(0, box.height() + 5)
    for step in (0, 1, -1, 2, -2, 3, -3, 4, -4):
        moved = box.translated(0, step * (box.height() + 3))
        free = all(not moved.intersects(other) for other in taken)
        if free and moved.top() >= inside.top() and moved.bottom() <= inside.bottom():
            return moved
    return box
