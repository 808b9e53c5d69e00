"""Cards: short sentences, one below the other, that light up whom they are about.

A pointer or the keyboard focus on a card lights up its people and arrows; a click or Return opens the reason and,
where there is one, a change to try as a variant.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from PySide6.QtCore import QEvent, QRectF, Qt, Signal
from PySide6.QtGui import QColor, QEnterEvent, QFocusEvent, QKeyEvent, QMouseEvent, QPainter, QPaintEvent
from PySide6.QtWidgets import QFrame, QScrollArea, QVBoxLayout, QWidget

from deliberate.rehearsal.results import Finding, Suggestion
from deliberate.window.session import Light
from deliberate.window.text import WrappingButton, plain_label, strong
from deliberate.window.theme import Look

MARK_WIDTH = 4


@dataclass(frozen=True, eq=False)
class Told:
    """What a card shows: one sentence, more on demand, and a change to try where there is one.

    `lights` has the people, groups and arrows to light up; `key` knows the card again when it is told anew; `note`
    stands below the sentence whether the card is open or not.
    """

    key: str
    says: str
    why: str
    lights: Finding | Light | None = None
    change: str = ""
    suggestion: Suggestion | None = None
    note: str = ""


class Card(QWidget):
    """One thing told. `pointed` says that pointer or focus came or went, `tried` asks for the change."""

    pointed = Signal(object)  # what lights up, or None
    tried = Signal(object)  # Suggestion
    opened = Signal(object)  # this card

    def __init__(self, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self._look = look
        self.told: Told | None = None
        self.open = False
        self._hot = False
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.says = plain_label(self)
        strong(self.says)
        self.note = plain_label(self, muted=True)
        self.why = plain_label(self, muted=True)
        self.button = WrappingButton(look, self)
        self.button.clicked.connect(self._try)
        column = QVBoxLayout(self)
        column.setContentsMargins(16, 7, 10, 7)
        column.setSpacing(4)
        for part in (self.says, self.note, self.why, self.button):
            column.addWidget(part)

    def tell(self, told: Told, is_open: bool) -> None:
        """Show `told`; where the pointer or the focus is here already, it is pointed at now."""
        before, self.told = self.told, told
        self.says.setText(told.says)
        self.note.setText(told.note)
        self.note.setVisible(bool(told.note))
        self.why.setText(told.why)
        self.button.setText(f"Try: {told.change}" if told.change else "")
        self.button.setAccessibleName(f"Try as a variant: {told.change}" if told.change else "")
        self.setAccessibleName(told.says)
        self.setAccessibleDescription(f"{told.note} {told.why}".strip())
        self.set_open(is_open)
        if self._hot and (before is None or before.lights is not told.lights):
            self.pointed.emit(told.lights)

    def forget(self) -> None:
        """Show nothing, and keep no words of what was shown."""
        self.told = None
        self.open = False
        self.hide()
        for part in (self.says, self.note, self.why, self.button):
            part.setText("")
            part.setAccessibleName("")
        self.setAccessibleName("")
        self.setAccessibleDescription("")

    def set_open(self, is_open: bool) -> None:
        """Show or hide the reason and the change to try."""
        self.open = is_open
        self.why.setVisible(is_open and bool(self.why.text()))
        self.button.setVisible(is_open and bool(self.button.text()))
        self.updateGeometry()
        self.update()

    def _try(self) -> None:
        if self.told is not None and self.told.suggestion is not None:
            self.tried.emit(self.told.suggestion)

    def _set_hot(self, hot: bool) -> None:
        # Said again also when nothing changes here: another card may have been pointed at meanwhile.
        self._hot = hot
        self.pointed.emit(self.told.lights if hot and self.told is not None else None)
        self.update()

    def enterEvent(self, event: QEnterEvent) -> None:
        self._set_hot(True)
        super().enterEvent(event)

    def leaveEvent(self, event: QEvent) -> None:
        self._set_hot(self.hasFocus())
        super().leaveEvent(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        self._set_hot(True)
        super().focusInEvent(event)

    def focusOutEvent(self, event: QFocusEvent) -> None:
        self._set_hot(self.underMouse())
        super().focusOutEvent(event)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self.opened.emit(self)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space):
            self.opened.emit(self)
        else:
            super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        theme = self._look.theme
        with QPainter(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(Qt.PenStyle.NoPen)
            if self._hot:
                painter.setBrush(QColor(theme.tint))
                painter.drawRoundedRect(QRectF(self.rect()), 6, 6)
            painter.setBrush(QColor(theme.accent if self._hot or self.open else theme.mark))
            height = self.says.height() - 4
            painter.drawRoundedRect(QRectF(5, self.says.y() + 2, MARK_WIDTH, height), 2, 2)
            if self.hasFocus():
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.setPen(QColor(theme.accent))
                painter.drawRoundedRect(QRectF(self.rect()).adjusted(0.5, 0.5, -0.5, -0.5), 6, 6)


class Cards(QScrollArea):
    """Cards one below the other; one of them is open. `above` is room for something on top of them."""

    pointed = Signal(object)
    tried = Signal(object)

    def __init__(self, look: Look, parent: QWidget, above: tuple[QWidget, ...] = ()) -> None:
        super().__init__(parent)
        self._look = look
        self._cards: list[Card] = []
        self._list = QWidget(self)
        self._column = QVBoxLayout(self._list)
        self._column.setContentsMargins(0, 0, 4, 4)
        self._column.setSpacing(2)
        for widget in above:
            self._column.addWidget(widget)
        self._column.addStretch(1)
        self.setWidgetResizable(True)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setWidget(self._list)

    @property
    def shown(self) -> list[Card]:
        """The cards on show, the most important first."""
        return [card for card in self._cards if card.told is not None]

    def tell(self, everything: Sequence[Told]) -> None:
        """Show these, with the one open that was open before, or the first."""
        keys = [told.key for told in everything]
        opened = next((card.told.key for card in self.shown if card.open), None)
        if opened not in keys:
            opened = keys[0] if keys else None
        while len(self._cards) < len(everything):
            self._add()
        for card, told in zip(self._cards, everything, strict=False):
            card.tell(told, told.key == opened)
            card.show()
        for card in self._cards[len(everything) :]:
            card.forget()

    def _add(self) -> None:
        card = Card(self._look, self._list)
        card.pointed.connect(self.pointed)
        card.tried.connect(self.tried)
        card.opened.connect(self._open)
        self._column.insertWidget(self._column.count() - 1, card)
        self._cards.append(card)

    def _open(self, opened: Card) -> None:
        is_open = opened.open
        for card in self.shown:
            card.set_open(card is opened and not is_open)
