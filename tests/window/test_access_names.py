"""What a screen reader is told: every control of the window has a name, and nothing is spoken with markup in it."""

from __future__ import annotations

import re
from collections.abc import Callable

import pytest
from circles import CIRCLES, meeting, person
from msgspec.structs import replace
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible
from PySide6.QtWidgets import QTabBar, QWidget
from pytestqt.qtbot import QtBot

from deliberate.scenario.values import AgreementTest, Arrow, Plan, Stage
from deliberate.window.main_window import MainWindow

# Names that look like markup stay as they are; only the window's own tags must not be heard.
TAG = re.compile(r"</?(b|i|p|br|span|html|body|div|qt|a)\b[^>]*>|&(amp|lt|gt|quot|nbsp|#\d+);", re.IGNORECASE)
TABLES = Stage("Tables", 3, "tables", tables=(("amina", "bilal"), ("davor", "emeka")))
RICH = replace(
    meeting(CIRCLES.variants[0].people, (*CIRCLES.variants[0].arrows, Arrow("amina", "davor", 5.0)), Plan((TABLES,))),
    questions=(
        replace(CIRCLES.questions[0], agreement=(AgreementTest("spread", at_most=10.0),)),
        replace(CIRCLES.questions[0], id="other", text="Another?", pass_mark=None),
    ),
)


def spoken(widget: QWidget) -> tuple[str, str]:
    read = QAccessible.queryAccessibleInterface(widget)
    return read.text(QAccessible.Text.Name), read.text(QAccessible.Text.Description)


def focusable(window: QWidget) -> list[QWidget]:
    """What can be seen and takes the keys, by Tab or by click; parts of a control that it speaks for are left out."""
    found = []
    for widget in window.findChildren(QWidget):
        takes_keys = widget.focusPolicy() & Qt.FocusPolicy.TabFocus and widget.focusProxy() is None
        if takes_keys and widget.isVisible() and widget.isEnabled():
            found.append(widget)
    return found


def in_words(widget: QWidget) -> str:
    """Where a widget is, for the message of a test."""
    line = []
    while widget is not None and not isinstance(widget, MainWindow):
        line.append(type(widget).__name__ + (f" {widget.objectName()}" if widget.objectName() else ""))
        widget = widget.parentWidget()
    return " in ".join(line)


def judge(window: QWidget) -> tuple[list[str], list[str]]:
    """Controls without a name, and what is spoken with markup."""
    controls = focusable(window)
    assert controls
    nameless = [in_words(one) for one in controls if not spoken(one)[0].strip()]
    words = [text for one in window.findChildren(QWidget) if one.isVisible() for text in spoken(one)]
    for tabs in map(QAccessible.queryAccessibleInterface, window.findChildren(QTabBar)):
        parts = [tabs.child(place) for place in range(tabs.childCount())]
        words += [part.text(kind) for part in parts for kind in (QAccessible.Text.Name, QAccessible.Text.Description)]
    tagged = [text for text in words if TAG.search(text)]
    return nameless, tagged


@pytest.fixture
def window(open_meeting: Callable[..., MainWindow]) -> MainWindow:
    shown = open_meeting(RICH)
    shown.session.select(["amina"])
    return shown


@pytest.mark.parametrize("page", range(4))
def test_controls_of_the_left_bar_have_names(window: MainWindow, page: int) -> None:
    window.sidebar.tabs.setCurrentIndex(page)
    assert judge(window) == ([], [])


@pytest.mark.parametrize("page", range(3))
def test_controls_of_the_right_side_have_names(qtbot: QtBot, window: MainWindow, page: int) -> None:
    window.right_pages.turn_to(page)
    qtbot.waitUntil(
        lambda: not (window.right_pages.remedies.working or window.right_pages.hangs_on.working), timeout=60_000
    )
    assert judge(window) == ([], [])


def test_controls_of_the_plan_have_names(window: MainWindow) -> None:
    window.round_bar.ruler.choose(0)
    assert judge(window) == ([], [])
    window.canvas.begin_choosing(0)
    assert judge(window) == ([], [])


def test_controls_have_names_where_nobody_is_there_yet(open_meeting: Callable[..., MainWindow]) -> None:
    assert judge(open_meeting(meeting((), ()))) == ([], [])


def test_markup_in_a_name_is_spoken_as_it_is(open_meeting: Callable[..., MainWindow]) -> None:
    people = (replace(person("Bo", 60.0, (0.0, 0.0)), name="<u>Bo</u> & Co"), person("Cy", 20.0, (200.0, 0.0)))
    window = open_meeting(meeting(people, (Arrow("bo", "cy", 10.0),)))
    window.session.select(["bo"])
    read = QAccessible.queryAccessibleInterface(window.canvas)
    assert read.child(0).text(QAccessible.Text.Name) == "<u>Bo</u> & Co"
    assert judge(window) == ([], [])
