"""How the width of the window is shared."""

from __future__ import annotations

from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from deliberate.window.columns import Columns


def open_columns(qtbot: QtBot, width: int) -> Columns:
    columns = Columns(None, QWidget(), QWidget(), QWidget())
    qtbot.addWidget(columns)
    columns.resize(width, 500)
    columns.show()
    qtbot.waitExposed(columns)
    return columns


def test_the_picture_keeps_most_of_a_narrow_window(qtbot: QtBot) -> None:
    columns = open_columns(qtbot, 1024)
    left, middle, right = columns.sizes()
    assert 236 <= left < 250
    assert 296 <= right < 310
    assert middle > 460


def test_a_wide_window_gives_the_rest_to_the_picture(qtbot: QtBot) -> None:
    columns = open_columns(qtbot, 1024)
    columns.resize(1920, 500)
    left, middle, right = columns.sizes()
    assert (left, right) == (290, 370)
    assert middle == 1920 - left - right - 2


def test_widths_chosen_by_hand_stay_and_are_remembered(qtbot: QtBot) -> None:
    columns = open_columns(qtbot, 1280)
    assert columns.kept() is None
    handle = columns.handle(1)
    middle = handle.rect().center()
    QTest.mousePress(handle, Qt.MouseButton.LeftButton, pos=middle)
    QTest.mouseMove(handle, middle + QPoint(60, 0))
    QTest.mouseRelease(handle, Qt.MouseButton.LeftButton, pos=middle + QPoint(60, 0))
    chosen = columns.sizes()[0]
    assert chosen > 330
    columns.resize(1400, 500)
    assert columns.sizes()[0] == chosen
    other = open_columns(qtbot, 1280)
    other.keep(columns.kept())
    other.resize(1400, 500)
    assert other.sizes()[0] == chosen
