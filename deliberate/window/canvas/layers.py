"""The ground layer: grounds and arrows in one opaque pixmap, painted when they change and reused otherwise.

Coarse (not antialiased, a tenth of the cost) while something moves in a crowd, fine at rest.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPen, QPixmap, QPolygonF
from shiboken6 import Shiboken

from deliberate.window.canvas import geometry
from deliberate.window.canvas.geometry import Curves
from deliberate.window.canvas.scene import STRONG, Scene
from deliberate.window.canvas.viewport import Viewport
from deliberate.window.theme import Theme, mix

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]
Flags = NDArray[np.bool_]

QUIET, WEAK, PALE, PLAIN, MARKED = range(5)  # how an arrow is drawn, in the order of painting
_WIDTH_STEP = 0.4
_OVERLAP = 0.6  # pixels
OPEN_LINE = 1.3  # pixels: the outline of an open head


@dataclass(frozen=True, eq=False)
class ArrowLook:
    """How the arrows are drawn: which, in what manner, dashed or not, and at which end the head is."""

    shown: Flags
    manner: Indices
    dashed: Flags
    flow: bool


def manners(scene: Scene, counting: Flags, marked: Flags, lit: Flags | None) -> Indices:
    """How each arrow is drawn. `marked` belong to the selection; `lit`, where a finding is pointed at, to it."""
    manner = np.full(len(scene.share), PLAIN)
    manner[weak(scene)] = WEAK
    manner[~counting] = PALE
    if lit is not None:
        manner[:] = QUIET
        manner[lit] = MARKED
    manner[marked] = MARKED
    return manner


def weak(scene: Scene) -> Flags:
    """In a crowd, the arrows weaker than the `STRONG` strongest; equal ones are treated alike unless that would
    leave too many."""
    if len(scene.share) <= STRONG:
        return np.zeros(len(scene.share), dtype=bool)
    least = scene.strength[scene.rank == STRONG - 1]
    fainter = scene.strength < least * (1 - 1e-9)
    return fainter if int((~fainter).sum()) <= 2 * STRONG else scene.rank >= STRONG


def screen_curves(scene: Scene, view: Viewport, which: Flags | Indices) -> Curves:
    """The curves of some arrows in pixels."""
    return geometry.curves(
        view.to_screen(scene.places),
        scene.listener[which],
        scene.source[which],
        scene.bend[which],
        scene.radius * view.zoom,
        gap=min(3.0, scene.radius * view.zoom * 0.12),
    )


def widths(scene: Scene, view: Viewport, which: Flags | Indices, manner: Indices) -> Floats:
    """Thickness of arrows in pixels."""
    scale = np.clip(scene.radius * view.zoom / 30, 0.45, 1.3)
    # Shares of a crowd are small by themselves; what arrows move is measured against the largest and is not.
    most = 2.0 if scene.moves is not None and len(scene.moves) > STRONG else 4.8
    wide = (1.2 + most * scene.strength[which] ** 0.9) * scale
    wide = np.where(manner[which] == WEAK, np.minimum(wide, 1.0) * 0.9, wide)
    return np.maximum(np.rint(wide / _WIDTH_STEP), 2) * _WIDTH_STEP


def colors(theme: Theme) -> tuple[QColor, ...]:
    """Opaque colours of the manners."""
    return (
        mix(theme.mark, theme.canvas, 0.68),
        mix(theme.mark, theme.canvas, 0.6),
        mix(theme.mark, theme.canvas, 0.35),
        QColor(theme.mark),
        QColor(theme.accent),
    )


def paint_arrows(
    painter: QPainter, scene: Scene, view: Viewport, look: ArrowLook, theme: Theme, *, fine: bool
) -> None:
    """Paint the shown arrows, quiet ones first, thin ones before thick ones."""
    which = np.flatnonzero(look.shown)
    if len(which) == 0:
        return
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, fine)
    arrows = screen_curves(scene, view, which)
    if look.flow:
        arrows = geometry.turned(arrows)
    wide = widths(scene, view, which, look.manner)
    manner, dashed = look.manner[which], look.dashed[which]
    scale = min(max(scene.radius * view.zoom / 30, 0.5), 1.2)
    long, half = (5.0 + 1.9 * wide) * scale, (2.3 + 0.95 * wide) * scale
    lines = geometry.shortened(arrows, long * 0.8)
    triangles = geometry.heads(arrows, long, half)
    lowering = scene.lowering[which]
    group = ((manner * 1000 + np.rint(wide / _WIDTH_STEP).astype(np.intp)) * 2 + dashed) * 2 + lowering
    inks = colors(theme)
    for key in sorted(set(group.tolist())):  # np.unique would load numpy.ma before the first frame
        members = np.flatnonzero(group == key)
        ink, width, dash = inks[key // 4000], key % 4000 // 4 * _WIDTH_STEP, bool(key // 2 % 2)
        pen = QPen(ink, width if fine else max(width, 1.01), Qt.PenStyle.SolidLine, Qt.PenCapStyle.FlatCap)
        painter.setPen(pen)
        draw_lines(painter, _strokes(lines.some(members), dash, width, fine))
        _paint_heads(painter, triangles[members], ink, QColor(theme.canvas) if key % 2 else ink, fine)


def draw_lines(painter: QPainter, rows: Floats) -> None:
    """Draw rows (x1, y1, x2, y2) straight from the array: making a list of QLineF would cost more than painting."""
    if len(rows):
        buffer = np.ascontiguousarray(rows, dtype=np.float64)
        painter.drawLines(Shiboken.wrapInstance(buffer.ctypes.data, QLineF), len(buffer))


def _strokes(lines: Curves, dashed: bool, width: float, fine: bool) -> Floats:
    length = lines.lengths()
    if dashed:
        pieces = np.maximum(2, np.rint(length / (7.0 + width))).astype(np.intp)
        return geometry.strokes(lines, pieces, inked=0.55)[0]
    chord = np.hypot(*(lines.tip - lines.start).T)
    straight = length <= chord * 1.0005 + 0.05
    curved = np.clip(np.rint(length / (14.0 if fine else 40.0)), 4, 24).astype(np.intp)
    rows, _ = geometry.strokes(lines, np.where(straight, 1, curved))
    return _overlapping(rows) if fine else rows


def _overlapping(rows: Floats) -> Floats:
    """Lines a little longer at both ends, so that antialiasing leaves no seams between those that follow."""
    along = rows[:, 2:] - rows[:, :2]
    along = along * (_OVERLAP / np.maximum(np.hypot(along[:, 0], along[:, 1]), 1e-9))[:, None]
    return np.concatenate([rows[:, :2] - along, rows[:, 2:] + along], axis=1)


def _paint_heads(painter: QPainter, triangles: Floats, ink: QColor, filling: QColor, fine: bool) -> None:
    if not fine:
        left = np.concatenate([triangles[:, 0], triangles[:, 1]], axis=1)
        right = np.concatenate([triangles[:, 0], triangles[:, 2]], axis=1)
        draw_lines(painter, np.concatenate([left, right]))
        return
    painter.setPen(Qt.PenStyle.NoPen if filling is ink else QPen(ink, OPEN_LINE))
    painter.setBrush(filling)
    for tip, left, right in triangles.tolist():
        painter.drawPolygon(QPolygonF([QPointF(*tip), QPointF(*left), QPointF(*right)]))


class GroundLayer:
    """The last painted ground, and the viewport it was painted for."""

    def __init__(self) -> None:
        self.pixmap: QPixmap | None = None
        self.view = Viewport()
        self.fine = False

    def paint(
        self, width: int, height: int, ratio: float, view: Viewport, theme: Theme, fine: bool,
        content: Callable[[QPainter], None],
    ) -> None:  # fmt: skip
        """Paint it anew: the paper, then `content`."""
        size = (max(1, round(width * ratio)), max(1, round(height * ratio)))
        if self.pixmap is None or (self.pixmap.width(), self.pixmap.height()) != size:
            self.pixmap = QPixmap(*size)
        self.pixmap.setDevicePixelRatio(ratio)
        self.pixmap.fill(QColor(theme.canvas))
        with QPainter(self.pixmap) as painter:
            content(painter)
        self.view, self.fine = view, fine

    def blit(self, painter: QPainter, view: Viewport, theme: Theme, width: int, height: int) -> None:
        """Put it on the widget; where the view has moved on since, moved and scaled accordingly."""
        if self.pixmap is None:
            return
        if view == self.view:
            painter.drawPixmap(0, 0, self.pixmap)
            return
        painter.fillRect(0, 0, width, height, QColor(theme.canvas))
        scale = view.zoom / self.view.zoom
        left, top = view.x - self.view.x * scale, view.y - self.view.y * scale
        if scale == 1.0:
            painter.drawPixmap(QPointF(left, top), self.pixmap)
            return
        painter.setRenderHint(QPainter.RenderHint.SmoothPixmapTransform, False)
        painter.drawPixmap(QRectF(left, top, width * scale, height * scale), self.pixmap, QRectF(self.pixmap.rect()))
