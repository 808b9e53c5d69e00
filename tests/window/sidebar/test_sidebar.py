from __future__ import annotations

from collections.abc import Callable

import pytest
from circles import AS_IT_STANDS, CIRCLES, LABEL
from msgspec.structs import replace
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtTest import QTest
from PySide6.QtWidgets import (
    QAbstractButton,
    QAbstractItemView,
    QApplication,
    QComboBox,
    QLineEdit,
    QMenu,
    QPlainTextEdit,
    QSlider,
    QWidget,
)
from pytestqt.qtbot import QtBot
from sidebar_hands import Key, Keys, press, replace_text, tick, type_over

from deliberate.scenario import edits
from deliberate.scenario.rules import READY_RULES
from deliberate.scenario.values import AgreementTest
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.sidebar.people_columns import Column

Open = Callable[..., tuple[Sidebar, Session]]
CONTROLS = (QAbstractButton, QComboBox, QLineEdit, QPlainTextEdit, QAbstractItemView, QSlider)


def test_four_pages_one_at_a_time(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, _ = open_sidebar(width=232)
    pages = (sidebar.people, sidebar.question, sidebar.ballot, sidebar.meeting)
    assert sidebar.tabs.count() == 4
    assert sidebar.tabs.sizeHint().width() <= 232
    sidebar.tabs.setFocus()
    for place, page in enumerate(pages):
        assert [one.isVisible() for one in pages] == [one is page for one in pages]
        assert sidebar.tabs.currentIndex() == place
        press(sidebar.tabs, Key.Key_Right)


def test_alt_and_a_letter_turn_to_a_page(open_sidebar: Open) -> None:
    sidebar, _ = open_sidebar()
    for key, place in ((Key.Key_B, 2), (Key.Key_M, 3), (Key.Key_L, 0), (Key.Key_U, 1)):
        press(sidebar, key, Keys.AltModifier)
        assert sidebar.tabs.currentIndex() == place
        assert sidebar.tabs.hasFocus()  # and Tab leads into the page
    press(sidebar.tabs, Key.Key_Tab)
    assert sidebar.question.isAncestorOf(QApplication.focusWidget())


def test_the_focus_of_a_page_that_hides_stays_in_the_bar(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, _ = open_sidebar()
    sidebar.people.table.setFocus()
    qtbot.mouseClick(sidebar.tabs, Qt.MouseButton.LeftButton, pos=sidebar.tabs.tabRect(2).center())
    assert sidebar.ballot.isVisible()
    assert sidebar.tabs.hasFocus()


@pytest.mark.parametrize("page", range(4))
def test_no_two_controls_of_a_page_share_a_letter(open_sidebar: Open, page: int) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina"])
    sidebar.tabs.setCurrentIndex(page)
    texts = [sidebar.tabs.tabText(place) for place in range(4)]
    for widget in sidebar.findChildren(QWidget):
        text = getattr(widget, "text", None)
        if callable(text) and widget.isVisible() and not isinstance(widget, QLineEdit | QPlainTextEdit):
            texts.append(str(text()))
    letters = [text[text.index("&") + 1].casefold() for text in texts if "&" in text.replace("&&", "")]
    menus = ["f", "e", "p", "t", "a", "v", "h", "q"]  # of the menu bar and the bar at the top
    assert len(set(letters + menus)) == len(letters + menus)


@pytest.mark.parametrize("page", range(4))
def test_every_control_is_named_and_within_reach_of_tab(open_sidebar: Open, page: int) -> None:
    sidebar, session = open_sidebar(width=420)
    session.select(people=["amina"])
    sidebar.tabs.setCurrentIndex(page)
    QApplication.processEvents()
    shown = [
        widget
        for widget in sidebar.findChildren(QWidget)
        if isinstance(widget, CONTROLS) and widget.isVisible() and widget.isEnabled() and _of_page(widget)
    ]
    assert shown
    for widget in shown:
        named = widget.accessibleName() or (widget.text() if isinstance(widget, QAbstractButton) else "")
        assert named, widget
    reached = set()
    sidebar.tabs.setFocus()
    for _ in range(80):
        press(QApplication.focusWidget(), Key.Key_Tab)
        reached.add(QApplication.focusWidget())
    assert [widget for widget in shown if widget not in reached] == []


def _of_page(widget: QWidget) -> bool:
    """Not a part that Qt makes inside another control."""
    parent = widget.parent()
    while parent is not None and not isinstance(parent, Sidebar):
        if isinstance(parent, QComboBox | QAbstractItemView) or "TabBar" in type(parent).__name__:
            return False
        parent = parent.parent()
    return "ScrollBar" not in type(widget).__name__


def test_hidden_pages_wait_until_they_are_shown(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    sidebar.tabs.setCurrentIndex(3)
    session.edit("x", lambda s: edits.rename_person(s, "amina", "Ama"))
    session.edit("x", lambda s: edits.change_question(s, "label", text="Otherwise?"))
    assert sidebar.question.text.toPlainText() != "Otherwise?"
    assert sidebar.people.table.model().index(0, Column.NAME).data() == "Amina"
    sidebar.tabs.setCurrentIndex(1)
    assert sidebar.question.text.toPlainText() == "Otherwise?"
    sidebar.tabs.setCurrentIndex(0)
    assert sidebar.people.table.model().index(0, Column.NAME).data() == "Ama"


def test_a_selection_made_meanwhile_is_shown(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    sidebar.tabs.setCurrentIndex(2)
    session.select(people=["davor"])
    sidebar.tabs.setCurrentIndex(0)
    assert sidebar.people.points.heading.text() == "Whose view counts for Davor"
    assert [index.row() for index in sidebar.people.table.selectionModel().selectedRows()] == [3]


def test_opening_another_meeting_shows_it_on_every_page(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    other = edits.set_title(edits.remove_people(CIRCLES, ["amina"], variant=AS_IT_STANDS), "Other")
    for page in range(4):
        sidebar.tabs.setCurrentIndex(page)
    session.open(other, None)
    assert sidebar.meeting.title.toPlainText() == "Other"
    sidebar.tabs.setCurrentIndex(0)
    assert sidebar.people.table.model().rowCount() == 5


def test_opening_a_meeting_of_the_same_people_selects_nobody(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina"])
    session.open(edits.set_title(CIRCLES, "Other"), None)
    assert sidebar.people.table.selectionModel().selectedRows() == []
    assert not sidebar.people.start.isVisible()


# What belongs to the selected people


def test_the_start_is_set_by_slider_and_number(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina", "bilal"])
    start = sidebar.people.start
    assert start.heading.text() == "Starting belief of 2 people"
    assert start.field.placeholderText() == "differ"
    type_over(start.field, "55")
    assert [person.beliefs["label"] for person in session.variant.people[:3]] == [55.0, 55.0, 70.0]
    start.slider.setFocus()
    press(start.slider, Key.Key_Right)
    press(start.slider, Key.Key_Right)
    assert session.variant.people[0].beliefs["label"] == 57.0
    session.undo()  # the slider's steps are one
    assert session.variant.people[0].beliefs["label"] == 55.0


def test_a_start_can_be_unknown(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina"])
    start = sidebar.people.start
    tick(start.known)
    assert "label" not in session.variant.people[0].beliefs
    assert (start.field.text(), start.field.placeholderText()) == ("", "?")
    tick(start.known)
    assert session.variant.people[0].beliefs["label"] == 50.0


def test_details_go_to_all_selected(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina", "bilal"])
    fields = sidebar.people.start.details
    type_over(fields[Column.FIRMNESS], "25")
    type_over(fields[Column.MARGIN], "5")
    type_over(fields[Column.BALLOTS], "2,5")
    for person in session.variant.people[:2]:
        assert (person.firmness, dict(person.margins), person.ballots) == (0.25, {"label": 5.0}, 2.5)
    assert session.variant.people[2] is CIRCLES.variants[0].people[2]


@pytest.mark.parametrize(
    ("column", "text", "what"),
    [
        (Column.FIRMNESS, "101", "firmness"),
        (Column.MARGIN, "-1", "margin"),
        (Column.BALLOTS, "x", "votes"),
    ],
)
def test_details_that_do_not_fit_are_refused(
    qtbot: QtBot, open_sidebar: Open, column: Column, text: str, what: str
) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina"])
    with qtbot.waitSignal(session.refused, check_params_cb=lambda why: what in why):
        type_over(sidebar.people.start.details[column], text)
    assert session.scenario is CIRCLES


def test_what_is_being_typed_survives_an_edit_elsewhere(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina"])
    field = sidebar.people.start.field
    replace_text(field, "12")
    session.edit("x", lambda s: edits.rename_person(s, "bilal", "Bil"))
    assert field.text() == "12"
    press(field, Key.Key_Return)
    assert session.variant.people[0].beliefs["label"] == 12.0


def test_typing_goes_to_whom_it_was_typed_for(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina"])
    replace_text(sidebar.people.start.field, "12")
    session.select(people=["bilal"])
    sidebar.people.table.setFocus()
    assert session.variant.people[1].beliefs["label"] == 80.0


@pytest.mark.parametrize("width", [232, 236, 290])
def test_nothing_is_cut_off_at_the_right(open_sidebar: Open, width: int) -> None:
    rule = next(rule for rule in READY_RULES if rule.name == "Two-thirds with at most a quarter against")
    tests = (
        AgreementTest(test="share-within", low=0.0, high=5e6, at_least="3/4"),
        AgreementTest(test="spread", at_most=1.0),
    )
    question = replace(LABEL, high=5e6, low_label="nothing " * 20, unit="thousand " * 20, agreement=tests)
    scenario = replace(
        CIRCLES, questions=(question, replace(question, id="other")), ballot=rule.ballot, title="long " * 30
    )
    sidebar, session = open_sidebar(scenario, width=width)
    session.select(people=["amina"])
    for place, page in enumerate((sidebar.people, sidebar.question, sidebar.ballot, sidebar.meeting)):
        sidebar.tabs.setCurrentIndex(place)
        QApplication.processEvents()
        if place:
            assert page.body.width() <= page.viewport().width()
        for widget in page.findChildren(QWidget):
            if isinstance(widget, CONTROLS) and widget.isVisible() and _of_page(widget):
                right = widget.mapTo(sidebar, QPoint(widget.width(), 0)).x()
                assert right <= width, widget
                assert widget.width() >= min(widget.minimumSizeHint().width(), 60), widget


# Keys of the window while a field has the focus


def with_undo(sidebar: Sidebar, session: Session) -> None:
    undo = QAction("Undo", sidebar)
    undo.setShortcut(QKeySequence(QKeySequence.StandardKey.Undo))
    undo.triggered.connect(session.undo)
    sidebar.addAction(undo)


def test_undo_takes_back_typing_first_and_then_the_step(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    with_undo(sidebar, session)
    session.select(people=["amina"])
    field = sidebar.people.start.field
    type_over(field, "12")
    QTest.keyClicks(field, "3")
    assert field.text() == "123"
    press(field, Key.Key_Z, Keys.ControlModifier)
    assert session.variant.people[0].beliefs["label"] == 12.0
    press(field, Key.Key_Escape)
    press(field, Key.Key_Z, Keys.ControlModifier)
    assert session.scenario is CIRCLES
    assert field.text() == "90"


def test_undo_in_notes_is_that_of_the_text(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    with_undo(sidebar, session)
    session.edit("x", lambda s: edits.rename_person(s, "amina", "Ama"))
    sidebar.tabs.setCurrentIndex(3)
    notes = sidebar.meeting.notes
    notes.setFocus()
    QTest.keyClicks(notes, "word")
    press(notes, Key.Key_Z, Keys.ControlModifier)
    assert notes.toPlainText() == ""
    assert session.variant.people[0].name == "Ama"
    sidebar.meeting.title.setFocus()
    press(sidebar.meeting.title, Key.Key_Z, Keys.ControlModifier)
    assert session.scenario is CIRCLES


def test_a_menu_over_a_field_does_not_end_typing(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    session.select(people=["amina"])
    field = sidebar.people.start.field
    replace_text(field, "1")
    menu = QMenu(field)
    menu.addAction("Paste")
    menu.popup(field.mapToGlobal(QPoint(0, 0)))
    QApplication.processEvents()
    menu.close()
    QApplication.processEvents()
    assert session.scenario is CIRCLES
    assert field.text() == "1"
    QTest.keyClicks(field, "2")
    press(field, Key.Key_Return)
    assert session.variant.people[0].beliefs["label"] == 12.0
