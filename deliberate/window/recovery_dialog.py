"""Offers what a crash left: bring it back, discard it, or decide later."""

from __future__ import annotations

from datetime import datetime

from PySide6.QtCore import QLocale, Qt, Signal
from PySide6.QtGui import QKeySequence, QShortcut
from PySide6.QtWidgets import QDialog, QHBoxLayout, QListWidget, QListWidgetItem, QPushButton, QVBoxLayout, QWidget

from deliberate.files.recovery import Head
from deliberate.window.recovery import Leftover
from deliberate.window.text import plain_label

INTRODUCTION = (
    "Deliberate ended before this work was saved. Bring a copy back to go on with it; the meeting's file stays as it "
    "is until you save."
)
MOST_ROWS_SHOWN = 5


class RecoveryDialog(QDialog):
    """A list of leftover copies. What she leaves for later is let go when the dialog closes."""

    chosen = Signal(object)  # the Leftover to bring back

    def __init__(self, leftovers: tuple[Leftover, ...], parent: QWidget) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle("Unsaved work was found")
        self.setMinimumWidth(520)
        self.list = QListWidget(self)
        self.list.setAccessibleName("Copies of unsaved work")
        self.list.setWordWrap(True)
        self.list.setSpacing(2)
        self._left = list(leftovers)
        for leftover in leftovers:
            self.list.addItem(QListWidgetItem(describe(leftover.head)))
        self.list.setCurrentRow(0)
        self.list.itemActivated.connect(self._bring_back)
        self.bring_back = QPushButton("&Bring back", self)
        self.bring_back.setDefault(True)
        self.discard = QPushButton("&Discard", self)
        self.later = QPushButton("&Later", self)
        self.bring_back.clicked.connect(self._bring_back)
        self.discard.clicked.connect(self._discard)
        self.later.clicked.connect(self.reject)
        for button in (self.discard, self.later):
            button.setAutoDefault(False)
        QShortcut(QKeySequence(QKeySequence.StandardKey.Delete), self.list, self._discard)
        self._lay_out()
        self.finished.connect(self._let_go)

    def _lay_out(self) -> None:
        buttons = QHBoxLayout()
        buttons.setSpacing(8)
        buttons.addWidget(self.discard)
        buttons.addStretch(1)
        buttons.addWidget(self.later)
        buttons.addWidget(self.bring_back)
        column = QVBoxLayout(self)
        column.setContentsMargins(18, 16, 18, 16)
        column.setSpacing(12)
        column.addWidget(plain_label(self, text=INTRODUCTION))
        column.addWidget(self.list)
        column.addLayout(buttons)
        shown = min(self.list.count(), MOST_ROWS_SHOWN)
        self.list.setFixedHeight(shown * (self.list.sizeHintForRow(0) + 2 * self.list.spacing()) + 4)

    def _bring_back(self) -> None:
        leftover = self._left.pop(self.list.currentRow())
        self.accept()
        self.chosen.emit(leftover)

    def _discard(self) -> None:
        row = self.list.currentRow()
        if row < 0:
            return
        self._left.pop(row).discard()
        self.list.takeItem(row)
        if not self._left:
            self.reject()

    def _let_go(self) -> None:
        for leftover in self._left:
            leftover.let_go()
        self._left.clear()


def describe(head: Head | None) -> str:
    """Which meeting a copy holds, where it belongs and when it was kept, on two lines."""
    if head is None:
        return "A copy that cannot be read any more"
    where = f"Belongs to {head.path}" if head.path else "Never saved to a file"
    return f"{head.title}\n{where}; kept {moment(head.kept)}"


def moment(when: datetime) -> str:
    """A date and time of day as her system writes them."""
    local = when.astimezone()
    locale = QLocale()
    short = QLocale.FormatType.ShortFormat
    return f"{locale.toString(local.date(), short)}, {locale.toString(local.time(), short)}"
