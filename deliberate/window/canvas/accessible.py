"""The canvas for screen readers: people and arrows as children with names, descriptions and places."""

from __future__ import annotations

import weakref
from functools import cache
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QObject, QPoint, QRect
from PySide6.QtGui import QAccessible, QAccessibleEvent, QAccessibleInterface, QColor
from PySide6.QtWidgets import QAccessibleWidget
from shiboken6 import Shiboken

from deliberate.window.canvas.geometry import Curves
from deliberate.window.canvas.picture import Hit

if TYPE_CHECKING:
    from deliberate.window.canvas.canvas import Canvas

MOST_CHILDREN = 20_000
# Qt deletes interfaces when their widget goes. One that Python lets go of earlier would be deleted twice.
_alive: set[QAccessibleInterface] = set()


class Item(QAccessibleInterface):
    """A person or an arrow."""

    def __init__(self, canvas: Canvas, hit: Hit, number: int) -> None:
        super().__init__()
        self._reference, self._hit, self.number = weakref.ref(canvas), hit, number

    @property
    def _canvas(self) -> Canvas:
        canvas = self._reference()
        assert canvas is not None
        return canvas

    def isValid(self) -> bool:
        canvas = self._reference()
        if canvas is None or not Shiboken.isValid(canvas):
            return False
        scene = self._canvas.picture.scene
        return self._hit.index < (len(scene.share) if self._hit.kind == "arrow" else len(scene.ids))

    def object(self) -> QObject | None:
        return None

    def parent(self) -> QAccessibleInterface:
        return QAccessible.queryAccessibleInterface(self._canvas)

    def child(self, index: int) -> QAccessibleInterface | None:
        del index
        return None

    def childCount(self) -> int:
        return 0

    def childAt(self, x: int, y: int) -> QAccessibleInterface | None:
        del x, y
        return None

    def indexOfChild(self, child: QAccessibleInterface) -> int:
        del child
        return -1

    def role(self) -> QAccessible.Role:
        return QAccessible.Role.ListItem

    def state(self) -> QAccessible.State:
        state = QAccessible.State()
        marks = self._canvas.picture.emphasis
        state.focusable = state.selectable = True
        chosen = marks.arrows if self._hit.kind == "arrow" else marks.people
        state.selected = self._hit.index in chosen
        state.focused = marks.focus == self._hit
        return state

    def text(self, kind: QAccessible.Text) -> str:
        if not self.isValid():
            return ""
        scene = self._canvas.picture.scene
        if kind == QAccessible.Text.Name:
            return scene.sentence(self._hit.index) if self._hit.kind == "arrow" else scene.told_apart[self._hit.index]
        if kind == QAccessible.Text.Description:
            return self._canvas.sentence(self._hit)
        return ""

    def setText(self, kind: QAccessible.Text, text: str) -> None:
        del kind, text

    def rect(self) -> QRect:
        if not self.isValid():
            return QRect()
        picture = self._canvas.picture
        if self._hit.kind == "arrow":
            curve = picture.curves(np.array([self._hit.index]))
            area = _bounds(curve)
        else:
            x, y = picture.points[self._hit.index]
            reach = round(picture.radius)
            area = QRect(round(x) - reach, round(y) - reach, 2 * reach, 2 * reach)
        return QRect(self._canvas.mapToGlobal(area.topLeft()), area.size())

    def foregroundColor(self) -> QColor:
        return QColor(self._canvas.look.theme.ink)

    def backgroundColor(self) -> QColor:
        return QColor(self._canvas.look.theme.canvas)


class AccessibleCanvas(QAccessibleWidget):
    """The canvas as a list of people and arrows."""

    def __init__(self, canvas: Canvas) -> None:
        super().__init__(canvas, QAccessible.Role.List, "Picture of the committee")
        self._reference = weakref.ref(canvas)
        self._items: dict[int, Item] = {}
        canvas.items = weakref.proxy(self)
        # The slot belongs to no QObject of its own, because it has to outlive the canvas.
        canvas.destroyed.connect(self.forget_all)

    @property
    def _canvas(self) -> Canvas:
        canvas = self._reference()
        assert canvas is not None
        return canvas

    def childCount(self) -> int:
        scene = self._canvas.picture.scene
        return min(len(scene.ids) + len(scene.share), MOST_CHILDREN)

    def child(self, index: int) -> QAccessibleInterface | None:
        if not 0 <= index < self.childCount():
            return None
        if index not in self._items:
            people = len(self._canvas.picture.scene.ids)
            hit = Hit("person", index) if index < people else Hit("arrow", index - people)
            self._items[index] = Item(self._canvas, hit, index)
            QAccessible.registerAccessibleInterface(self._items[index])
        return self._items[index]

    def indexOfChild(self, child: QAccessibleInterface) -> int:
        # A reader may ask this of thousands: no search through all of them.
        return child.number if isinstance(child, Item) and self._items.get(child.number) is child else -1

    def childAt(self, x: int, y: int) -> QAccessibleInterface | None:
        at = self._canvas.mapFromGlobal(QPoint(x, y)).toPointF()
        hit = self._canvas.hit(at)
        if hit.index < 0:
            return None
        people = len(self._canvas.picture.scene.ids)
        return self.child(hit.index + (people if hit.kind == "arrow" else 0))

    def focusChild(self) -> QAccessibleInterface | None:
        focus = self._canvas.picture.emphasis.focus
        if focus is None:
            return None
        people = len(self._canvas.picture.scene.ids)
        return self.child(focus.index + (people if focus.kind == "arrow" else 0))

    def forget(self) -> None:
        """People and arrows are others now: their numbers mean somebody else."""
        for item in self._items.values():
            if Shiboken.isValid(item):
                QAccessible.deleteAccessibleInterface(QAccessible.uniqueId(item))
        self._items.clear()

    def forget_all(self, _canvas: QObject) -> None:
        """The canvas has gone."""
        self.forget()


@cache
def install(canvas_type: type) -> None:
    """Tell Qt, once, how widgets of this type are read."""

    def interface(_key: str, thing: QObject) -> QAccessibleInterface | None:
        if not isinstance(thing, canvas_type):
            return None
        _alive.difference_update({one for one in _alive if not Shiboken.isValid(one)})
        made = AccessibleCanvas(thing)
        _alive.add(made)
        return made

    QAccessible.installFactory(interface)


def tell_focus(canvas: Canvas) -> None:
    """Let a screen reader speak the person or arrow that has the focus."""
    focus = canvas.picture.emphasis.focus
    if focus is None or not QAccessible.isActive():
        return
    event = QAccessibleEvent(canvas, QAccessible.Event.Focus)
    people = len(canvas.picture.scene.ids)
    event.setChild(focus.index + (people if focus.kind == "arrow" else 0))
    QAccessible.updateAccessibility(event)


def _bounds(curve: Curves) -> QRect:
    points = curve.at(np.linspace(0, 1, 9))[0]
    low, high = points.min(axis=0), points.max(axis=0)
    return QRect(round(low[0]) - 2, round(low[1]) - 2, round(high[0] - low[0]) + 4, round(high[1] - low[1]) + 4)
