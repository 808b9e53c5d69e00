"""Questions and messages in a small window of their own. What they say is shown as plain text."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QMessageBox, QWidget


def tell(window: QWidget | None, title: str, what: str) -> None:
    """A message with one button."""
    box = _box(window, QMessageBox.Icon.Warning, title, what)
    box.exec()
    box.deleteLater()


def ask(
    window: QWidget | None, title: str, what: str, choices: Sequence[str], otherwise: str = "Cancel"
) -> str | None:
    """Which of `choices`, the words on the buttons, she takes; None for `otherwise`, Escape and the closed window.

    Return takes the first one.
    """
    box = _box(window, QMessageBox.Icon.Question, title, what)
    buttons = {box.addButton(choice, QMessageBox.ButtonRole.ActionRole): choice for choice in choices}
    leave = box.addButton(otherwise, QMessageBox.ButtonRole.RejectRole)
    box.setDefaultButton(next(iter(buttons)))
    box.setEscapeButton(leave)
    box.exec()
    taken = buttons.get(box.clickedButton())
    box.deleteLater()
    return taken


def _box(window: QWidget | None, icon: QMessageBox.Icon, title: str, what: str) -> QMessageBox:
    box = QMessageBox(window)
    box.setIcon(icon)
    box.setWindowTitle(title)
    box.setTextFormat(Qt.TextFormat.PlainText)
    box.setText(what)
    return box
