from __future__ import annotations

from collections.abc import Callable

from circles import CIRCLES
from msgspec.structs import replace
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot
from sidebar_hands import Key, Keys, press, type_over

from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.sidebar.meeting_page import MeetingPage

Open = Callable[..., tuple[Sidebar, Session]]
TWO = replace(CIRCLES, variants=(CIRCLES.variants[0], replace(CIRCLES.variants[0], name="<i>Other</i>", notes="n")))


def open_page(open_sidebar: Open, scenario=TWO) -> tuple[MeetingPage, Session]:
    sidebar, session = open_sidebar(scenario)
    sidebar.tabs.setCurrentIndex(3)
    QApplication.processEvents()
    return sidebar.meeting, session


def test_the_title_is_one_line(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    type_over(page.title, "Harbour & <b>levy</b>")
    assert session.scenario.title == "Harbour & <b>levy</b>"
    assert page.title.toPlainText() == "Harbour & <b>levy</b>"


def test_an_empty_title_is_refused(qtbot: QtBot, open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    with qtbot.waitSignal(session.refused, check_params_cb=lambda why: "title" in why):
        type_over(page.title, "  ")
    assert page.title.toPlainText() == "Label"


def test_notes_are_kept_after_a_pause_and_are_one_step(qtbot: QtBot, open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    page.notes.setFocus()
    QTest.keyClicks(page.notes, "Two circles")
    qtbot.waitUntil(lambda: session.scenario.notes == "Two circles")
    QTest.keyClicks(page.notes, " of three")
    press(page.notes, Key.Key_Return)
    QTest.keyClicks(page.notes, "And more.")
    qtbot.waitUntil(lambda: session.scenario.notes == "Two circles of three\nAnd more.")
    assert page.notes.hasFocus()
    session.undo()
    assert session.scenario is TWO


def test_notes_are_kept_at_once_when_left(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    page.notes.setFocus()
    QTest.keyClicks(page.notes, "Once")
    press(page.notes, Key.Key_Tab)
    assert session.scenario.notes == "Once"
    assert page.variant_notes.hasFocus()
    page.notes.setFocus()
    QTest.keyClicks(page.notes, "Twice ")
    page.title.setFocus()
    session.undo()
    assert session.scenario.notes == "Once"  # left in between, so two steps


def test_notes_are_kept_before_a_command_such_as_saving(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    page.notes.setFocus()
    QTest.keyClicks(page.notes, "Saved too")
    press(page.notes, Key.Key_S, Keys.ControlModifier)
    assert session.scenario.notes == "Saved too"


def test_notes_of_the_variant_go_to_the_one_shown(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    session.show_variant("<i>Other</i>")
    assert page.variant_heading.text() == "Notes on “<i>Other</i>”"
    assert page.variant_notes.toPlainText() == "n"
    page.variant_notes.setFocus()
    QTest.keyClicks(page.variant_notes, "More ")
    page.title.setFocus()
    session.show_variant("As it stands")
    assert page.variant_notes.toPlainText() == ""
    assert [variant.notes for variant in session.scenario.variants] == ["", "More n"]


def test_notes_typed_for_one_variant_never_go_to_another(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    page.variant_notes.setFocus()
    QTest.keyClicks(page.variant_notes, "Mine")
    session.show_variant("<i>Other</i>")
    page.title.setFocus()
    assert session.scenario.variants[1].notes == "n"


def test_control_characters_that_come_with_pasting_are_refused(qtbot: QtBot, open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    page.notes.setFocus()
    page.notes.insertPlainText("a\x07b")
    with qtbot.waitSignal(session.refused, check_params_cb=lambda why: "notes" in why):
        page.title.setFocus()
    assert page.notes.toPlainText() == ""


def test_spaces_that_do_not_break_survive_typing(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar, replace(TWO, notes="10\u00a0000 oui\u202f!\nFin"))
    page.notes.setFocus()
    QTest.keyClicks(page.notes, "Oh ")
    page.title.setFocus()
    assert session.scenario.notes == "Oh 10\u00a0000 oui\u202f!\nFin"
