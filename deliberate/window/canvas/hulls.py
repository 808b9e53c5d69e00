"""Soft grounds around people who belong together: closed groups, phases of a swing, tables."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPainterPath, QPainterPathStroker, QPen, QPolygonF

from deliberate.window.theme import Theme, mix

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]

# Phases are told apart by dash as well as by label.
DASHES = ((5.0, 3.0), (1.2, 2.6), (9.0, 3.0, 1.5, 3.0), (12.0, 5.0))


@dataclass(frozen=True)
class Ground:
    """People who stand on one ground, what is written on it, and whether it is the lit one (accent) or a table."""

    people: tuple[int, ...]
    title: str
    lit: bool = True


def paint_grounds(
    painter: QPainter, grounds: list[Ground], points: Floats, radius: float, names: float, theme: Theme
) -> None:
    """Paint all grounds, then all titles. `names` is how high a name is."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    outlines = [outline(points, np.array(ground.people, dtype=np.intp), radius, names) for ground in grounds]
    for number, (ground, path) in enumerate(zip(grounds, outlines, strict=True)):
        if ground.lit:
            pen = QPen(mix(theme.accent, theme.canvas, 0.2), 1.6)
            pen.setDashPattern(list(DASHES[number % len(DASHES)]))
            painter.setPen(pen)
            painter.setBrush(mix(theme.canvas, theme.accent, 0.08))
        else:
            painter.setPen(QPen(QColor(theme.line), 1.2))
            painter.setBrush(mix(theme.canvas, theme.line, 0.45))
        painter.drawPath(path)
    for ground, path in zip(grounds, outlines, strict=True):
        if ground.title:
            _write(painter, ground, path.boundingRect(), theme)


def tidy(points: Floats, groups: list[tuple[int, ...]], radius: float) -> bool:
    """Whether grounds around these groups would neither overlap nor take in others."""
    everyone = np.arange(len(points))
    for group in groups:
        inside = outline(points, np.array(group, dtype=np.intp), radius, 0.0)
        others = np.setdiff1d(everyone, group)
        if any(inside.contains(QPointF(*points[other])) for other in others):
            return False
    return True


def outline(points: Floats, people: Indices, radius: float, names: float) -> QPainterPath:
    """A rounded outline around people: their convex hull, or where that would take in others a band along the
    shortest tree that joins them."""
    pad = radius * 1.45 + 6
    own = points[people]
    skeleton = QPainterPath()
    if len(own) == 0:
        return skeleton
    hull = own[_hull(own)] if len(own) > 2 else own
    polygon = QPolygonF([QPointF(x, y) for x, y in hull.tolist()])
    full = QPainterPath()
    full.addPolygon(polygon)
    full.closeSubpath()
    others = np.setdiff1d(np.arange(len(points)), people)
    band = _band(full, pad).united(full)
    if any(band.contains(QPointF(*points[other])) for other in others):
        for one, other in _tree(own):
            skeleton.moveTo(QPointF(*own[one]))
            skeleton.lineTo(QPointF(*own[other]))
        band = _band(skeleton, pad * 0.9) if len(own) > 1 else band
    if names > 0:  # room for names below and above, and for the title
        band = band.united(band.translated(0, names * 0.7)).united(band.translated(0, -names * 1.5))
    return band.simplified()


def _band(path: QPainterPath, pad: float) -> QPainterPath:
    if path.boundingRect().isEmpty() and path.elementCount() < 3:
        return _round_dot(path, pad)
    stroker = QPainterPathStroker()
    stroker.setWidth(2 * pad)
    stroker.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    stroker.setCapStyle(Qt.PenCapStyle.RoundCap)
    stroker.setCurveThreshold(0.2)
    return stroker.createStroke(path).simplified()


def _round_dot(path: QPainterPath, pad: float) -> QPainterPath:
    dot = QPainterPath()
    dot.addEllipse(path.boundingRect().center(), pad, pad)
    return dot


def _hull(points: Floats) -> list[int]:
    """Indices of the convex hull (Andrew's monotone chain, 1979)."""
    order = np.lexsort((points[:, 1], points[:, 0])).tolist()
    halves = []
    for sequence in (order, order[::-1]):
        half: list[int] = []
        for index in sequence:
            while len(half) > 1 and _turn(points, half[-2], half[-1], index) <= 0:
                half.pop()
            half.append(index)
        halves.append(half[:-1])
    return halves[0] + halves[1]


def _turn(points: Floats, a: int, b: int, c: int) -> float:
    one, other = points[b] - points[a], points[c] - points[a]
    return float(one[0] * other[1] - one[1] * other[0])


def _tree(points: Floats) -> list[tuple[int, int]]:
    """Edges of a minimum spanning tree (Prim 1957)."""
    count = len(points)
    distance = np.hypot(*np.moveaxis(points[:, None] - points[None], -1, 0))
    nearest, joined = distance[0].copy(), np.zeros(count, dtype=np.intp)
    inside = np.zeros(count, dtype=bool)
    inside[0] = True
    edges = []
    for _ in range(count - 1):
        index = int(np.where(inside, np.inf, nearest).argmin())
        edges.append((int(joined[index]), index))
        inside[index] = True
        closer = distance[index] < nearest
        nearest[closer], joined[closer] = distance[index][closer], index
    return edges


def _write(painter: QPainter, ground: Ground, area: QRectF, theme: Theme) -> None:
    font = painter.font()
    font.setBold(ground.lit)
    painter.setFont(font)
    metrics = QFontMetricsF(font)
    size = QRectF(0, 0, metrics.horizontalAdvance(ground.title) + 16, metrics.height() + 4)
    size.moveCenter(QPointF(area.center().x(), area.top() + 1))
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(QColor(theme.canvas))
    painter.drawRoundedRect(size, size.height() / 2, size.height() / 2)
    painter.setPen(QColor(theme.accent if ground.lit else theme.muted))
    painter.drawText(size, Qt.AlignmentFlag.AlignCenter, ground.title)
