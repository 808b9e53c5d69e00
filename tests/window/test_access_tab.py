"""Through the whole window by Tab: every control once, as they are laid out, and it can be seen where one is."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from circles import CIRCLES, meeting
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QScrollArea, QWidget
from pytestqt.qtbot import QtBot

from deliberate.scenario.values import Plan, Stage
from deliberate.window.main_window import MainWindow
from deliberate.window.tab_order import in_reading_order

STAGED = meeting(
    CIRCLES.variants[0].people,
    CIRCLES.variants[0].arrows,
    Plan((Stage("Tables", 3, "tables", tables=(("amina", "davor"), ("bilal", "emeka"))),)),
)
FORWARD, BACK = Qt.Key.Key_Tab, Qt.Key.Key_Backtab


@pytest.fixture
def window(qtbot: QtBot, open_meeting: Callable[..., MainWindow]) -> MainWindow:
    shown = open_meeting(STAGED)
    shown.session.select(["amina"])
    shown.round_bar.ruler.choose(0)
    shown.canvas.setFocus()
    qtbot.waitUntil(shown.canvas.hasFocus)
    return shown


def walk(window: MainWindow, key: Qt.Key) -> list[QWidget]:
    """All that gets the focus until the canvas has it again, from the canvas on."""
    stops = [window.canvas]
    for _ in range(300):
        QTest.keyClick(QApplication.focusWidget(), key)
        now = QApplication.focusWidget()
        if now is window.canvas and stops[-1] is not window.canvas:
            return stops
        if now is not stops[-1]:
            stops.append(now)
    raise AssertionError(f"Tab does not come round: {stops[-5:]}")


def takes_keys(window: MainWindow) -> list[QWidget]:
    return [
        one
        for one in window.centralWidget().findChildren(QWidget)
        if one.focusPolicy() & Qt.FocusPolicy.TabFocus
        and one.focusProxy() is None
        and one.isVisible()
        and one.isEnabled()
    ]


@pytest.mark.parametrize("left", range(4))
def test_tab_reaches_every_control_once(window: MainWindow, left: int) -> None:
    window.sidebar.tabs.setCurrentIndex(left)
    stops = walk(window, FORWARD)
    assert len(stops) == len(set(stops))
    assert set(takes_keys(window)) == set(stops)


def test_tab_goes_from_part_to_part(window: MainWindow) -> None:
    """Left bar, picture, chart, what is below it, round bar with the plan first; then from the top again."""
    parts = (window.canvas, window.chart, window.right_pages, window.round_bar.strip, window.round_bar)
    parts += (window.top_bar, window.sidebar)
    seen = []
    for stop in walk(window, FORWARD):
        part = next(part for part in parts if part is stop or part.isAncestorOf(stop))
        if not seen or seen[-1] is not part:
            seen.append(part)
    assert seen == list(parts)


def test_shift_and_tab_goes_the_same_way_back(window: MainWindow) -> None:
    there = walk(window, FORWARD)
    back = walk(window, BACK)
    assert back[1:] == there[:0:-1]


@pytest.mark.parametrize("left", range(4))
def test_it_can_be_seen_what_has_the_focus(window: MainWindow, left: int) -> None:
    """WCAG 2.2, 2.4.7: a control with the focus looks different from the same one without."""
    window.sidebar.tabs.setCurrentIndex(left)
    window.session.player.set_loop(False)
    unseen, seen = [], {}
    stops = walk(window, FORWARD)
    for stop in stops:
        stop.setFocus(Qt.FocusReason.TabFocusReason)
        seen[stop] = stop.grab().toImage()
    window.round_bar.ruler.setFocus(Qt.FocusReason.TabFocusReason)
    for stop in stops:
        if stop is not window.round_bar.ruler and stop.grab().toImage() == seen[stop]:
            unseen.append(f"{type(stop).__name__} {stop.accessibleName()}")
    window.canvas.setFocus()
    assert window.round_bar.ruler.grab().toImage() != seen[window.round_bar.ruler]
    assert unseen == []


def test_what_gets_the_focus_is_scrolled_to(window: MainWindow) -> None:
    window.sidebar.tabs.setCurrentIndex(1)
    window.resize(1024, 620)
    for stop in walk(window, FORWARD):
        stop.setFocus(Qt.FocusReason.TabFocusReason)
    QTest.keyClick(window.canvas, BACK)
    for _ in range(8):
        stop = QApplication.focusWidget()
        area = next((one for one in window.findChildren(QScrollArea) if one.isAncestorOf(stop)), None)
        if area is not None:
            middle = stop.mapTo(area.viewport(), stop.rect().center())
            assert area.viewport().rect().contains(middle)
        QTest.keyClick(stop, BACK)


def test_reading_order_holds_everything_once(window: MainWindow) -> None:
    found = list(in_reading_order(window.centralWidget()))
    assert len(found) == len(set(found))
    assert set(takes_keys(window)) <= set(found)
