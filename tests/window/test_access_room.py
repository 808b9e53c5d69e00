"""Room: what is cut off, or has none, in small windows, in large type, and with a side put away."""

from __future__ import annotations

from collections.abc import Callable, Iterator

import pytest
from circles import CIRCLES, meeting
from PySide6.QtCore import Qt
from PySide6.QtGui import QFont
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QCheckBox, QComboBox, QPushButton, QTabBar, QToolButton, QWidget
from pytestqt.qtbot import QtBot

from deliberate.scenario.values import Plan, Stage
from deliberate.window.main_window import MainWindow

STAGED = meeting(
    CIRCLES.variants[0].people,
    CIRCLES.variants[0].arrows,
    Plan((Stage("Tables", 3, "tables", tables=(("amina", "davor"), ("bilal", "emeka"))),)),
)
Open = Callable[..., MainWindow]


@pytest.fixture
def font(qapp: QApplication) -> Iterator[QFont]:
    """The font of the whole program, put back at the end."""
    before = QFont(qapp.font())
    yield QFont(before)
    qapp.setFont(before)


def cut_off(window: QWidget) -> list[str]:
    """Controls that are smaller than their words, or that reach out of the window or of what they are in."""
    found = []
    for widget in window.findChildren(QWidget):
        if widget.isVisible() and isinstance(widget, QPushButton | QToolButton | QCheckBox | QComboBox):
            words = widget.currentText() if isinstance(widget, QComboBox) else widget.text()
            lacks_room = widget.width() < widget.fontMetrics().horizontalAdvance(words.replace("&", ""))
            if lacks_room or not _inside(widget, window):
                found.append(f"{type(widget).__name__} {words} {widget.accessibleName()}")
        if widget.isVisible() and isinstance(widget, QTabBar):
            lacks_room = (
                not widget.usesScrollButtons() and widget.tabRect(widget.count() - 1).right() > widget.width()
            )
            if lacks_room or not _inside(widget, window):
                found.append(f"tabs {widget.accessibleName()}")
    return found


def _inside(widget: QWidget, window: QWidget) -> bool:
    """Whether all of it can be seen, or scrolled to."""
    parent, area = widget.parentWidget(), widget.geometry()
    while parent is not None and widget is not window:
        if parent.objectName() == "qt_scrollarea_viewport":
            return area.left() >= 0 and area.right() <= parent.width()
        if not parent.rect().contains(area):
            return False
        area = area.translated(parent.pos())
        parent = None if parent is window else parent.parentWidget()
    return True


@pytest.mark.parametrize("page", range(4))
@pytest.mark.parametrize(
    ("points", "width", "height"), [(9, 1024, 768), (9, 853, 533), (14, 1280, 800), (18, 1920, 1200)]
)
def test_no_control_is_cut_off(
    qtbot: QtBot, open_meeting: Open, qapp: QApplication, font: QFont, points: int, width: int, height: int, page: int
) -> None:
    font.setPointSize(points)
    qapp.setFont(font)
    window = open_meeting(STAGED)
    window.resize(width, height)
    window.session.select(["amina"])
    window.sidebar.tabs.setCurrentIndex(page)
    window.round_bar.ruler.choose(0)
    qtbot.waitUntil(lambda: window.round_bar.strip.isVisible())
    qtbot.wait(50)
    assert (window.width(), window.height()) == (width, height)
    assert window.sidebar.isVisible()
    assert cut_off(window) == []


def test_the_sides_can_be_put_away_and_come_back(qtbot: QtBot, open_meeting: Open) -> None:
    window = open_meeting(STAGED)
    before = window.canvas.width()
    QTest.keyClick(window.canvas, Qt.Key.Key_F3)
    assert window.sidebar.isHidden()
    QTest.keyClick(window.canvas, Qt.Key.Key_F3, Qt.KeyboardModifier.ShiftModifier)
    assert window.right.isHidden()
    qtbot.waitUntil(lambda: window.canvas.width() == window.width())
    QTest.keyClick(window.canvas, Qt.Key.Key_2, Qt.KeyboardModifier.ControlModifier)  # what would help
    assert window.right.isVisible()
    QTest.keyClick(window.canvas, Qt.Key.Key_F3)
    assert window.sidebar.isVisible()
    qtbot.waitUntil(lambda: window.canvas.width() == before)


def test_a_narrow_screen_gets_the_picture_first(qtbot: QtBot, open_meeting: Open) -> None:
    """1280 x 800 at 200 %: the left bar is a key away."""
    window = open_meeting(STAGED)
    window.across.fit_into(640)
    assert (window.sidebar.isHidden(), window.right.isHidden()) == (True, False)
    window.resize(640, 400)
    qtbot.waitUntil(lambda: window.minimumSizeHint().width() <= 640)
    window.across.fit_into(400)
    assert window.right.isHidden()


def test_a_screen_with_room_for_all_loses_nothing(open_meeting: Open) -> None:
    window = open_meeting(STAGED)
    window.across.fit_into(1024)
    assert not window.sidebar.isHidden()
    assert not window.right.isHidden()
