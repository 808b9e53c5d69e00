"""The first note, and the key that blanks the screen."""

from __future__ import annotations

from collections.abc import Callable, Iterator

import pytest
from circles import CIRCLES
from PySide6.QtCore import QSettings, Qt
from PySide6.QtGui import QColor
from PySide6.QtWidgets import QApplication, QDialog, QPlainTextEdit
from pytestqt.qtbot import QtBot

from deliberate.window import help_texts
from deliberate.window.main_window import MainWindow
from deliberate.window.session import Session
from deliberate.window.theme import Look


@pytest.fixture
def open_window(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session], tmp_path
) -> Iterator[Callable[[], MainWindow]]:
    opened: list[MainWindow] = []

    def open_one() -> MainWindow:
        settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
        window = MainWindow(open_session(CIRCLES), look, settings)
        opened.append(window)
        window.begin_with_care()
        window.resize(1024, 700)
        window.show()
        window.activateWindow()
        qtbot.waitExposed(window)
        qtbot.waitUntil(lambda: window.chart.chart is not None, timeout=20_000)
        return window

    yield open_one
    for window in opened:
        window.session.open(window.session.meeting, None)
        window.close()
        window.deleteLater()
    QApplication.processEvents()


def test_a_first_start_begins_with_the_note_and_later_ones_do_not(qtbot: QtBot, open_window) -> None:
    first = open_window()
    assert first.care_note.isVisible()
    assert first.canvas.hasFocus()  # it is in nobody's way
    for words in ("not a forecast", "protected personal data", "standing orders"):
        assert words in first.care_note.accessibleDescription()
    qtbot.mouseClick(first.care_note.done, Qt.MouseButton.LeftButton)
    assert not first.care_note.isVisible()
    assert not open_window().care_note.isVisible()


def test_the_note_stays_until_it_is_put_away(open_window) -> None:
    open_window()
    assert open_window().care_note.isVisible()


def test_all_of_it_can_be_read_by_keyboard(qtbot: QtBot, open_window) -> None:
    window = open_window()
    window.care_note.more.setFocus()
    qtbot.keyClick(window.care_note.more, Qt.Key.Key_Space)
    dialog = next(one for one in window.findChildren(QDialog) if one.isVisible())
    assert dialog.findChild(QPlainTextEdit).toPlainText() == help_texts.CARE
    dialog.close()


def test_one_key_leaves_nothing_to_read_in_any_window(qtbot: QtBot, open_window) -> None:
    window = open_window()
    help_texts.show_care(window)
    dialog = next(one for one in window.findChildren(QDialog) if one.isVisible())
    title = window.windowTitle()
    window.canvas.setFocus()
    qtbot.keyClick(window.canvas, Qt.Key.Key_F8)
    for one in (window, dialog):
        picture = one.grab().toImage()
        foot = 40
        colours = {
            picture.pixelColor(x, y).name()
            for x in range(0, picture.width(), 7)
            for y in range(0, picture.height() - foot, 7)
        }
        assert colours == {"#000000"}
        assert one.windowTitle() == "Deliberate"
    qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_X)
    assert not window.blank.on
    assert window.windowTitle() == title
    assert QColor(window.grab().toImage().pixelColor(5, 5)) != QColor("#000000")
    dialog.close()


@pytest.mark.parametrize(
    "key", [Qt.Key.Key_F8, Qt.Key.Key_Space, Qt.Key.Key_Escape, Qt.Key.Key_Delete, Qt.Key.Key_Tab, Qt.Key.Key_5]
)
def test_any_key_brings_it_back_and_does_nothing_else(qtbot: QtBot, open_window, key: Qt.Key) -> None:
    window = open_window()
    window.session.select(["amina"])
    window.canvas.setFocus()
    qtbot.keyClick(window.canvas, Qt.Key.Key_F8)
    cover = QApplication.focusWidget()
    assert cover is not window.canvas
    qtbot.keyClick(cover, Qt.Key.Key_Shift)
    assert window.blank.on  # a key on the way to another one
    qtbot.keyClick(cover, key)
    assert not window.blank.on
    assert window.session.meeting is CIRCLES
    assert not window.session.player.playing
    assert window.session.selection.people == {"amina"}
    assert window.canvas.hasFocus()


def test_shortcuts_do_not_act_unseen(qtbot: QtBot, open_window) -> None:
    window = open_window()
    qtbot.keyClick(window.canvas, Qt.Key.Key_F8)
    variants = len(window.session.scenario.variants)
    qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_T, Qt.KeyboardModifier.ControlModifier)
    assert len(window.session.scenario.variants) == variants
    assert not window.blank.on


def test_a_click_brings_it_back_too_and_the_cover_keeps_up_with_the_window(qtbot: QtBot, open_window) -> None:
    window = open_window()
    qtbot.keyClick(window.canvas, Qt.Key.Key_F8)
    window.resize(1200, 800)
    cover = QApplication.focusWidget()
    assert cover.size() == window.size()
    qtbot.mouseClick(cover, Qt.MouseButton.LeftButton)
    assert not window.blank.on
