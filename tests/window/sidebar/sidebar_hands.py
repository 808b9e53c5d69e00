"""Hands that type into the fields of the left bar, for its tests."""

from __future__ import annotations

from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QCheckBox, QComboBox, QWidget

Key, Keys = Qt.Key, Qt.KeyboardModifier


def press(widget: QWidget | None, key: Key, keys: Keys = Keys.NoModifier) -> None:
    """One key, and what Qt does a moment later."""
    QTest.keyClick(widget, key, keys)
    QApplication.processEvents()


def replace_text(field: QWidget, text: str) -> None:
    """Type over all that stands in a field, without ending it."""
    field.setFocus()
    press(field, Key.Key_A, Keys.ControlModifier)
    press(field, Key.Key_Delete)
    QTest.keyClicks(field, text)


def type_over(field: QWidget, text: str) -> None:
    """Type over all that stands in a field, and press Return."""
    replace_text(field, text)
    press(field, Key.Key_Return)


def tick(box: QCheckBox) -> None:
    """Click on a box."""
    QTest.mouseClick(box, Qt.MouseButton.LeftButton, pos=QPoint(8, box.height() // 2))
    QApplication.processEvents()


def click(widget: QWidget) -> None:
    """Click on the middle of a widget."""
    QTest.mouseClick(widget, Qt.MouseButton.LeftButton)
    QApplication.processEvents()


def choose(choice: QComboBox, text: str) -> None:
    """Choose by keyboard: open the list, go to the entry, press Return."""
    choice.setFocus()
    press(choice, Key.Key_Home)
    if choice.currentText() != text:
        for _ in range(choice.count()):
            press(choice, Key.Key_Down)
            if choice.currentText() == text:
                return
        raise AssertionError(f"“{text}” cannot be chosen")
