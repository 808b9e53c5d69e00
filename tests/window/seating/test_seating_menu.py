from __future__ import annotations

from collections.abc import Callable, Iterator

import pytest
from PySide6.QtCore import QSettings, Qt
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot
from rooms import TWO_HALVES

from deliberate.window.main_window import MainWindow
from deliberate.window.seating import SeatingDialog
from deliberate.window.session import Session
from deliberate.window.theme import Look


@pytest.fixture
def window(qtbot: QtBot, look: Look, open_session: Callable[..., Session], tmp_path) -> Iterator[MainWindow]:
    settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
    shown = MainWindow(open_session(TWO_HALVES), look, settings)
    shown.show()
    qtbot.waitUntil(lambda: shown.chart.chart is not None, timeout=20_000)
    qtbot.waitUntil(shown.session.engine.idle, timeout=20_000)
    yield shown
    shown.session.open(shown.session.scenario, None)  # nothing to ask about when it closes
    shown.close()
    shown.deleteLater()


def test_it_opens_once_beside_the_work_and_its_tables_stand_on_the_picture(qtbot: QtBot, window: MainWindow) -> None:
    window.activateWindow()
    window.canvas.setFocus()
    QTest.keyClick(window.canvas, Qt.Key.Key_M, Qt.KeyboardModifier.ControlModifier)
    (dialog,) = window.findChildren(SeatingDialog)
    assert dialog.isVisible()
    assert not dialog.isModal()
    window.canvas.setFocus()
    QTest.keyClick(window.canvas, Qt.Key.Key_M, Qt.KeyboardModifier.ControlModifier)
    assert window.findChildren(SeatingDialog) == [dialog]
    QTest.mouseClick(dialog.find, Qt.MouseButton.LeftButton)
    qtbot.waitUntil(lambda: dialog.seating is not None, timeout=20_000)
    QTest.mouseClick(dialog.make, Qt.MouseButton.LeftButton)
    assert window.variant_strip.tabs.count() == 2
    window.activateWindow()
    qtbot.waitUntil(window.isActiveWindow)
    window.canvas.setFocus()
    modifiers = Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.AltModifier
    QTest.keyClick(window.canvas, Qt.Key.Key_5, modifiers)
    assert window.session.undo_step == "Arrange by table"
    scene, grounds = window.canvas.picture.scene, window.canvas.picture.grounds
    seated = [tuple(sorted(scene.ids[one] for one in ground.people)) for ground in grounds]
    assert seated == [tuple(sorted(table)) for table in dialog.seating.rotations[0]]
