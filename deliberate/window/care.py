"""The note that a first start begins with: what the sketch is, whose data it holds, who decides."""

from __future__ import annotations

from PySide6.QtCore import QSettings, Signal
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QVBoxLayout, QWidget

from deliberate.window import help_texts
from deliberate.window.text import plain_label, strong

NOTED = "care/noted"  # the setting that remembers that the note was put away
HEADING = "Before you sketch a real meeting"
SHORT = (
    "The picture shows what follows if people mixed each other's views with the points you gave: a sketch to prepare "
    "with, not a forecast of people. Where somebody stands can be protected personal data, codes or no codes: ask "
    "what allows you to hold it, and keep it no longer than needed. A vote shown here decides nothing: your standing "
    "orders and the law of the place do."
)


class CareNote(QWidget):
    """A strip above the picture, in nobody's way, until it is put away; Help shows all of it at any time."""

    put_away = Signal()

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAccessibleName(HEADING)
        self.setAccessibleDescription(SHORT)
        heading = plain_label(self, text=HEADING)
        strong(heading)
        words = plain_label(self, text=SHORT)
        self.more = QPushButton("&Read all of it", self)
        self.more.clicked.connect(self._show_all)
        self.done = QPushButton("Put the &note away", self)
        self.done.setToolTip("It stays under Help")
        self.done.clicked.connect(self.put_away)
        text = QVBoxLayout()
        text.setSpacing(2)
        text.addWidget(heading)
        text.addWidget(words)
        buttons = QVBoxLayout()
        buttons.setSpacing(6)
        buttons.addWidget(self.done)
        buttons.addWidget(self.more)
        buttons.addStretch(1)
        row = QHBoxLayout(self)
        row.setContentsMargins(16, 8, 12, 8)
        row.setSpacing(18)
        row.addLayout(text, 1)
        row.addLayout(buttons)

    def _show_all(self) -> None:
        help_texts.show_care(self)


def is_noted(settings: QSettings) -> bool:
    """Whether the note was put away at an earlier start."""
    return settings.value(NOTED, "false", str) == "true"


def note(settings: QSettings) -> None:
    """Remember that it was put away."""
    settings.setValue(NOTED, "true")
