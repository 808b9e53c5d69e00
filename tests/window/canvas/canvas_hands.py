"""Where things are on a canvas, and hands that work on it, for its tests."""

from __future__ import annotations

import numpy as np
from PySide6.QtCore import QEvent, QPoint, QPointF, Qt
from PySide6.QtGui import QMouseEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from deliberate.window.canvas import Canvas

LEFT, NO_KEYS = Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier


def settle(qtbot: QtBot, canvas: Canvas) -> None:
    """Wait until the picture is at rest."""
    qtbot.waitUntil(lambda: not canvas._rest.isActive())
    canvas.repaint()


def at(canvas: Canvas, person: str, dx: float = 0.0, dy: float = 0.0) -> QPoint:
    """The pixel in the middle of a person, moved by radii."""
    picture = canvas.picture
    x, y = picture.points[picture.scene.index[person]]
    return QPoint(round(x + dx * picture.radius), round(y + dy * picture.radius))


def ring(canvas: Canvas, person: str) -> QPoint:
    """A pixel on the upper right of somebody's ring."""
    return at(canvas, person, 0.64, -0.64)


def on_arrow(canvas: Canvas, listener: str, source: str) -> QPoint:
    """A pixel on an arrow, off its middle where others may cross."""
    arrow = canvas.picture.scene.arrow_index[listener, source]
    x, y = canvas.picture.curves(np.array([arrow])).at(np.array([0.4]))[0, 0]
    return QPoint(round(x), round(y))


def click(canvas: Canvas, point: QPoint, keys: Qt.KeyboardModifier = NO_KEYS) -> None:
    """One click of the left button."""
    QTest.mouseClick(canvas, LEFT, keys, point)


def drag(canvas: Canvas, start: QPoint, stop: QPoint, button: Qt.MouseButton = LEFT) -> None:
    """Press, move and let go."""
    QTest.mousePress(canvas, button, NO_KEYS, start)
    drag_on(canvas, start, stop, button)
    QTest.mouseRelease(canvas, button, NO_KEYS, stop)


def drag_on(canvas: Canvas, start: QPoint, stop: QPoint, button: Qt.MouseButton = LEFT) -> None:
    """Moves of the mouse with a button held, which QTest.mouseMove cannot say."""
    for part in (0.2, 0.6, 1.0):
        point = QPointF(start) + QPointF(stop - start) * part
        where = QPointF(canvas.mapToGlobal(point))
        event = QMouseEvent(QEvent.Type.MouseMove, point, where, Qt.MouseButton.NoButton, button, NO_KEYS)
        QApplication.sendEvent(canvas, event)
