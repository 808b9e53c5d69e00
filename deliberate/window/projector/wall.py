"""Picture and ruler as they are, painted larger: everything grows alike, and pixmaps stay sharp."""

from __future__ import annotations

import math

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QFont
from PySide6.QtWidgets import QWidget

from deliberate.window.canvas import Canvas
from deliberate.window.roundbar.ruler import Ruler
from deliberate.window.session import Session
from deliberate.window.theme import Look

LEGIBLE = 28 / 1080  # of the screen's height: to be read from eight picture heights
SMALLEST_PX = 10  # of all texts, in pixels of the picture
NAMES_PX = 13  # of names on discs of middle size; on small ones they come down to the smallest
MARGINS = (24.0, 54.0, 24.0, 38.0)  # room for the legend above and names below


def _font(widget: QWidget, size: int) -> QFont:
    font = QFont(widget.font())
    font.setPixelSize(size)
    return font


class WallCanvas(Canvas):
    """The picture to be looked at: nothing on it can be changed by mouse or key."""

    def __init__(self, session: Session, look: Look, parent: QWidget) -> None:
        super().__init__(session, look, parent)
        self.setFont(_font(self, SMALLEST_PX))
        self.picture.font = _font(self, NAMES_PX)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
        self.picture.margins = MARGINS
        self.picture.people.smallest_text = SMALLEST_PX
        self.picture.people.short = True
        self.picture.names.all_up_to = 0

    def fill(self, height: int) -> None:
        """Be legible on a screen of this many lines."""
        self.scale = height * LEGIBLE / SMALLEST_PX

    # Whatever paints the picture reckons in its own, larger pixels.

    def width(self) -> int:
        return math.ceil(super().width() / self.scale)

    def height(self) -> int:
        return math.ceil(super().height() / self.scale)

    def devicePixelRatioF(self) -> float:
        return super().devicePixelRatioF() * self.scale


class WallRuler(Ruler):
    """The plan to be looked at: stages are not edited here."""

    def __init__(self, session: Session, look: Look, parent: QWidget) -> None:
        super().__init__(session, look, parent)
        self.setFont(_font(self, SMALLEST_PX))
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)

    def fill(self, height: int) -> None:
        """Be legible on a screen of this many lines."""
        self.scale = height * LEGIBLE / SMALLEST_PX
        self.setFixedHeight(self.sizeHint().height())

    def width(self) -> int:
        return math.floor(super().width() / self.scale)

    def sizeHint(self) -> QSize:
        return super().sizeHint() * self.scale

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()
