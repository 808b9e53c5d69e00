"""What the pages share: they scroll, and read the meeting only while they are on screen."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QFrame, QGridLayout, QLabel, QPushButton, QScrollArea, QVBoxLayout, QWidget

from deliberate.window.session import Session
from deliberate.window.text import explain, plain_label, strong


class Page(QScrollArea):
    """One page of the left bar. `read` fills it from the session; while it is hidden that waits."""

    def __init__(self, session: Session, name: str, parent: QWidget) -> None:
        super().__init__(parent)
        self.session = session
        self._stale = True
        self.setAccessibleName(name)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setWidgetResizable(True)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.body = QWidget(self)
        self.column = QVBoxLayout(self.body)
        self.column.setContentsMargins(12, 10, 12, 12)
        self.column.setSpacing(6)
        self.setWidget(self.body)
        session.scenario_changed.connect(self.refresh)

    def refresh(self) -> None:
        """Read the meeting again, now or when the page is next shown."""
        self._stale = not self.isVisible()
        if not self._stale:
            self.read()

    def read(self) -> None:
        """Fill the page from the session."""

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._stale:
            self._stale = False
            self.read()

    # Parts

    def add_heading(self, text: str) -> QLabel:
        """A heading with some room above it."""
        heading = plain_label(self.body, text=text)
        strong(heading)
        if self.column.count():
            self.column.addSpacing(10)
        self.column.addWidget(heading)
        return heading

    def add_grid(self) -> QGridLayout:
        """Rows of labels and fields, the last column taking what is left."""
        grid = QGridLayout()
        grid.setHorizontalSpacing(8)
        grid.setVerticalSpacing(5)
        self.column.addLayout(grid)
        return grid


def label_for(field: QWidget, text: str, parent: QWidget) -> QLabel:
    """A label whose "&" letter goes to `field`. `text` is the program's own."""
    label = QLabel(text, parent)
    label.setTextFormat(Qt.TextFormat.PlainText)
    label.setBuddy(field)
    return label


def small_button(text: str, meaning: str, parent: QWidget) -> QPushButton:
    """A quiet button of few words that says in full what it does."""
    button = QPushButton(text, parent)
    button.setProperty("quiet", True)
    explain(button, meaning)
    button.setAccessibleName(meaning)
    return button
