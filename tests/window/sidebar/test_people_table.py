from __future__ import annotations

from collections.abc import Callable

import pytest
from circles import AS_IT_STANDS, CIRCLES, LABEL, meeting, person
from msgspec.structs import replace
from PySide6.QtCore import QItemSelectionModel, QPoint, Qt
from PySide6.QtGui import QContextMenuEvent, QGuiApplication
from PySide6.QtTest import QAbstractItemModelTester
from PySide6.QtWidgets import QAbstractItemView, QApplication, QLineEdit, QMenu, QWidget
from pytestqt.qtbot import QtBot

from deliberate.scenario import edits
from deliberate.scenario.values import FrozenDict, Person, Plan, Scenario, Stage, Variant
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.sidebar.people_columns import Column
from deliberate.window.sidebar.people_table import PeopleTable
from deliberate.window.theme import Look

Open = Callable[..., tuple[Sidebar, Session]]
Key, Keys = Qt.Key, Qt.KeyboardModifier
HOSTILE = (
    "<b>Ngozi</b> <img src='file:///etc/hostname'>",
    "שרה & דוד",
    "\u202eevil\u202c",
    "Li 🐚 Wei",
    "Oluwaseun Adébáyọ̀-Thorvaldsdóttir of the Lower Harbour Ward",
    "=1+1",
)


def crowd(size: int) -> Scenario:
    people = tuple(person(f"Person{n}", float(n % 101), (n * 10.0, 0.0)) for n in range(size))
    return meeting(people, ())


def cell(table: PeopleTable, row: int, column: Column) -> str:
    return str(table.model().index(row, column).data())


def go_to(table: PeopleTable, row: int, column: Column) -> None:
    table.setFocus()
    table.setCurrentIndex(table.model().index(row, column))


def click(qtbot: QtBot, table: PeopleTable, row: int, column: Column, keys: Keys = Keys.NoModifier) -> None:
    middle = table.visualRect(table.model().index(row, column)).center()
    qtbot.mouseClick(table.viewport(), Qt.MouseButton.LeftButton, keys, middle)


def type_into(qtbot: QtBot, table: PeopleTable, text: str, end: Key = Key.Key_Return) -> None:
    """Type over the current cell."""
    qtbot.keyClick(table, Key.Key_F2)
    editor = QApplication.focusWidget()
    assert isinstance(editor, QLineEdit)
    editor.selectAll()
    qtbot.keyClicks(editor, text)
    end_typing(qtbot, editor, end)


def end_typing(qtbot: QtBot, editor: QWidget | None, end: Key = Key.Key_Return) -> None:
    """End typing into a cell; Qt hands the text over a moment later."""
    qtbot.keyClick(editor, end)
    QApplication.processEvents()


def people(session: Session) -> tuple[Person, ...]:
    return session.variant.people


def test_the_model_is_sound_while_the_meeting_changes(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    testers = [
        QAbstractItemModelTester(model, QAbstractItemModelTester.FailureReportingMode.Fatal)
        for model in (table.people, table.proxy)
    ]
    table.sort_by(Column.START)
    session.edit("a", lambda s: edits.set_belief(s, "amina", "label", 3.0, variant=AS_IT_STANDS))
    session.edit("b", lambda s: edits.remove_people(s, ["emeka"], variant=AS_IT_STANDS))
    session.edit("c", lambda s: edits.add_person(s, "Goran", variant=AS_IT_STANDS))
    session.undo()
    session.player.seek(3)
    session.undo()
    assert table.model().rowCount() == 6
    assert all(isinstance(tester, QAbstractItemModelTester) for tester in testers)


def test_names_have_room_and_numbers_are_whole(qtbot: QtBot, open_sidebar: Open) -> None:
    for width in (236, 290, 420):
        sidebar, _ = open_sidebar(width=width)
        table = sidebar.people.table
        letter = table.fontMetrics().horizontalAdvance("n")
        assert table.columnWidth(Column.NAME) >= 10 * letter
        on_screen = [column for column in Column if not table.isColumnHidden(column)]
        assert {Column.NAME, Column.START, Column.NOW, Column.PRESENT} <= set(on_screen)
        assert sum(map(table.columnWidth, on_screen)) <= table.viewport().width()
        for row in range(6):
            for column in (Column.START, Column.NOW):
                needed = table.fontMetrics().horizontalAdvance(cell(table, row, column))
                assert needed < table.columnWidth(column)


def test_a_wider_bar_shows_more_columns(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, _ = open_sidebar(width=236)
    table = sidebar.people.table
    assert table.isColumnHidden(Column.BALLOTS)
    sidebar.resize(600, 700)
    qtbot.waitUntil(lambda: not table.isColumnHidden(Column.BALLOTS))
    assert not table.isColumnHidden(Column.MARGIN)


def test_a_column_she_chooses_stays_on_screen(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, _ = open_sidebar(width=236)
    table = sidebar.people.table
    menu = table._menu()
    table.columns.add_to(menu)
    votes = next(action for action in menu.actions() if action.text() == "votes")
    votes.trigger()
    assert not table.isColumnHidden(Column.BALLOTS)
    next(action for action in menu.actions() if action.text() == "As many as fit").trigger()
    assert table.isColumnHidden(Column.BALLOTS)
    menu.deleteLater()


def test_typing_over_a_start_sets_it(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    go_to(sidebar.people.table, 1, Column.START)
    type_into(qtbot, sidebar.people.table, "62,5")
    assert people(session)[1].beliefs["label"] == 62.5
    assert session.undo_step == "Set the starting belief of Bilal"


def test_a_digit_starts_typing(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    go_to(table, 0, Column.START)
    qtbot.keyClicks(table, "7")
    editor = QApplication.focusWidget()
    assert isinstance(editor, QLineEdit)
    end_typing(qtbot, editor)
    assert people(session)[0].beliefs["label"] == 7.0


def test_tab_goes_on_to_the_next_cell_while_typing(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    go_to(table, 0, Column.NAME)
    type_into(qtbot, table, "Ama", end=Key.Key_Tab)
    editor = QApplication.focusWidget()
    assert isinstance(editor, QLineEdit)
    assert editor.text() == "90"
    qtbot.keyClicks(editor, "44")
    end_typing(qtbot, editor)
    assert (people(session)[0].name, people(session)[0].beliefs["label"]) == ("Ama", 44.0)


def test_tab_passes_over_what_cannot_be_typed(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar(width=236)  # name, start, now, present
    table = sidebar.people.table
    go_to(table, 0, Column.START)
    type_into(qtbot, table, "44", end=Key.Key_Tab)
    editor = QApplication.focusWidget()
    assert isinstance(editor, QLineEdit)
    assert (table.currentIndex().row(), table.currentIndex().column()) == (1, Column.NAME)
    end_typing(qtbot, editor, Key.Key_Backtab)
    assert (table.currentIndex().row(), table.currentIndex().column()) == (0, Column.START)
    end_typing(qtbot, QApplication.focusWidget())
    go_to(table, 5, Column.START)
    type_into(qtbot, table, "9", end=Key.Key_Tab)  # the last cell
    assert table.state() == QAbstractItemView.State.NoState
    assert [people(session)[row].beliefs["label"] for row in (0, 5)] == [44.0, 9.0]


def test_return_goes_on_to_the_next_person(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    go_to(table, 0, Column.START)
    for start in range(6):
        qtbot.keyClicks(table, "5")
        editor = QApplication.focusWidget()
        qtbot.keyClicks(editor, str(start))
        end_typing(qtbot, editor)
    assert [one.beliefs["label"] for one in people(session)] == [50.0, 51.0, 52.0, 53.0, 54.0, 55.0]
    assert session.selection.people == {"farah"}


def test_tab_leaves_the_table_when_nothing_is_typed(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, _ = open_sidebar()
    table = sidebar.people.table
    go_to(table, 0, Column.NAME)
    qtbot.keyClick(table, Key.Key_Tab)
    assert QApplication.focusWidget() is not table
    assert sidebar.isAncestorOf(QApplication.focusWidget())


def test_escape_leaves_the_cell_as_it_was(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    go_to(sidebar.people.table, 0, Column.NAME)
    type_into(qtbot, sidebar.people.table, "Nobody", end=Key.Key_Escape)
    assert session.scenario is CIRCLES


def test_many_rows_are_edited_at_once(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    click(qtbot, table, 0, Column.START)
    click(qtbot, table, 2, Column.START, Keys.ShiftModifier)
    assert session.selection.people == {"amina", "bilal", "chiara"}
    type_into(qtbot, table, "50")
    assert [one.beliefs["label"] for one in people(session)[:4]] == [50.0, 50.0, 50.0, 30.0]
    assert session.undo_step == "Set the starting belief of 3 people"
    session.undo()
    assert session.scenario is CIRCLES


def test_an_empty_start_is_not_known(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    go_to(table, 0, Column.START)
    qtbot.keyClick(table, Key.Key_F2)
    editor = QApplication.focusWidget()
    qtbot.keyClick(editor, Key.Key_A, Keys.ControlModifier)
    qtbot.keyClick(editor, Key.Key_Delete)
    end_typing(qtbot, editor)
    assert "label" not in people(session)[0].beliefs
    assert cell(table, 0, Column.START) == "?"


@pytest.mark.parametrize("text", ["101", "-1", "x"])
def test_what_does_not_fit_is_refused_and_said(qtbot: QtBot, open_sidebar: Open, text: str) -> None:
    sidebar, session = open_sidebar()
    go_to(sidebar.people.table, 0, Column.START)
    with qtbot.waitSignal(session.refused) as refused:
        type_into(qtbot, sidebar.people.table, text)
    assert "starting belief" in refused.args[0]
    assert session.scenario is CIRCLES


def test_large_figures_are_typed_over_without_their_commas(qtbot: QtBot, open_sidebar: Open) -> None:
    scale = replace(LABEL, high=1e6, pass_mark=5e5)
    one = Person(id="amina", name="Amina", beliefs=FrozenDict(label=12_000.0))
    scenario = replace(meeting((one,), ()), questions=(scale,))
    sidebar, session = open_sidebar(scenario)
    table = sidebar.people.table
    assert cell(table, 0, Column.START) == "12,000"
    go_to(table, 0, Column.START)
    qtbot.keyClick(table, Key.Key_F2)
    editor = QApplication.focusWidget()
    assert editor.text() == "12000"
    qtbot.keyClick(editor, Key.Key_End)
    qtbot.keyClicks(editor, "0")
    end_typing(qtbot, editor)
    assert people(session)[0].beliefs["label"] == 120_000.0
    go_to(table, 0, Column.START)
    type_into(qtbot, table, "15,000")
    assert people(session)[0].beliefs["label"] == 15_000.0


def test_presence_is_a_box_for_mouse_and_space(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    rect = table.visualRect(table.model().index(1, Column.PRESENT))
    qtbot.mouseClick(table.viewport(), Qt.MouseButton.LeftButton, pos=QPoint(rect.left() + 10, rect.center().y()))
    assert not people(session)[1].present
    go_to(table, 1, Column.PRESENT)
    qtbot.keyClick(table, Key.Key_Space)
    assert people(session)[1].present


def test_sorting_goes_up_down_and_back(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    header = table.horizontalHeader()

    def names_after_click() -> list[str]:
        x = header.sectionViewportPosition(Column.START) + 10
        qtbot.mouseClick(header.viewport(), Qt.MouseButton.LeftButton, pos=QPoint(x, 8))
        return [cell(table, row, Column.NAME) for row in range(6)]

    meeting_order = [one.name for one in people(session)]
    assert names_after_click() == meeting_order[::-1]  # 90, 80, 70, 30, 20, 10
    assert names_after_click() == meeting_order
    assert names_after_click() == meeting_order
    assert not header.isSortIndicatorShown()


def test_an_edit_in_a_sorted_table_reaches_the_right_person(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    table.sort_by(Column.START)
    assert cell(table, 0, Column.NAME) == "Farah"
    go_to(table, 0, Column.START)
    type_into(qtbot, table, "99")
    assert people(session)[5].beliefs["label"] == 99.0
    assert cell(table, 0, Column.NAME) == "Farah"  # rows do not run away while she types


def test_selection_goes_both_ways(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    session.select(people=["chiara", "farah"])
    assert [index.row() for index in table.selectionModel().selectedRows()] == [2, 5]
    click(qtbot, table, 3, Column.NAME)
    assert session.selection.people == {"davor"}
    session.edit("x", lambda s: edits.remove_people(s, ["amina"], variant=AS_IT_STANDS))
    assert session.selection.people == {"davor"}
    assert [index.row() for index in table.selectionModel().selectedRows()] == [2]


def test_delete_removes_the_selected(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    click(qtbot, table, 0, Column.NAME)
    qtbot.keyClick(table, Key.Key_Delete)
    assert [one.id for one in people(session)][:2] == ["bilal", "chiara"]
    assert session.undo_step == "Remove Amina"


def test_copy_and_paste_as_sheets_do(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    table.selectRow(0)
    table.selectionModel().select(
        table.model().index(1, 0), QItemSelectionModel.SelectionFlag.Select | QItemSelectionModel.SelectionFlag.Rows
    )
    qtbot.keyClick(table, Key.Key_C, Keys.ControlModifier)
    first, second = QGuiApplication.clipboard().text().splitlines()
    assert first.split("\t")[:2] == ["Amina", "90"]
    assert second.split("\t")[:2] == ["Bilal", "80"]
    go_to(table, 3, Column.NAME)
    qtbot.keyClick(table, Key.Key_V, Keys.ControlModifier)
    assert [(one.name, one.beliefs["label"]) for one in people(session)[3:5]] == [("Amina", 90.0), ("Bilal", 80.0)]
    assert session.undo_step == "Paste 2 rows"


def test_one_pasted_number_goes_to_all_selected(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    click(qtbot, table, 3, Column.START)
    click(qtbot, table, 5, Column.START, Keys.ShiftModifier)
    QGuiApplication.clipboard().setText("5")
    qtbot.keyClick(table, Key.Key_V, Keys.ControlModifier)
    assert [one.beliefs["label"] for one in people(session)[2:]] == [70.0, 5.0, 5.0, 5.0]


def test_names_pasted_into_an_empty_table_are_people(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar(meeting((), ()))
    table = sidebar.people.table
    table.setFocus()
    QGuiApplication.clipboard().setText("Ama\t10\r\nBo\t20\r\nCleo\t\r\n")
    qtbot.keyClick(table, Key.Key_V, Keys.ControlModifier)
    assert [(one.name, one.beliefs.get("label")) for one in people(session)] == [
        ("Ama", 10.0),
        ("Bo", 20.0),
        ("Cleo", None),
    ]


def test_a_paste_that_does_not_fit_changes_nothing(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    go_to(sidebar.people.table, 0, Column.START)
    QGuiApplication.clipboard().setText("10\n1000")
    with qtbot.waitSignal(session.refused):
        qtbot.keyClick(sidebar.people.table, Key.Key_V, Keys.ControlModifier)
    assert session.scenario is CIRCLES


def test_hostile_names_are_plain_text(qtbot: QtBot, open_sidebar: Open) -> None:
    several = tuple(Person(id=f"p{n}", name=name, beliefs=FrozenDict(label=50.0)) for n, name in enumerate(HOSTILE))
    sidebar, session = open_sidebar(meeting(several, ()))
    table = sidebar.people.table
    for row, name in enumerate(HOSTILE):
        index = table.model().index(row, Column.NAME)
        assert index.data() == name
        assert "<b>" not in index.data(Qt.ItemDataRole.ToolTipRole)
        assert "<img" not in index.data(Qt.ItemDataRole.ToolTipRole)
        session.select(people=[f"p{row}"])
        assert name in sidebar.people.start.heading.text()
        assert name in sidebar.people.points.heading.text()
    sidebar.grab()


def test_a_long_name_gets_a_wide_editor(qtbot: QtBot, open_sidebar: Open) -> None:
    long = meeting((Person(id="p", name=HOSTILE[4]),), ())
    sidebar, _ = open_sidebar(long)
    table = sidebar.people.table
    go_to(table, 0, Column.NAME)
    qtbot.keyClick(table, Key.Key_F2)
    editor = QApplication.focusWidget()
    assert isinstance(editor, QLineEdit)
    assert editor.width() > table.columnWidth(Column.NAME)
    assert editor.geometry().right() <= table.viewport().width()
    end_typing(qtbot, editor, Key.Key_Escape)


def test_the_beliefs_of_the_round_follow(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    assert cell(table, 0, Column.NOW) == "90"
    session.rehearse()
    qtbot.waitUntil(lambda: session.rehearsal is not None, timeout=20_000)
    session.player.seek(1)
    qtbot.waitUntil(lambda: cell(table, 0, Column.NOW) == "81")  # 0.4 * 90 + 0.3 * 80 + 0.3 * 70
    qtbot.waitUntil(session.engine.idle, timeout=20_000)


def test_editing_goes_on_while_it_plays(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    session.rehearse()
    qtbot.waitUntil(session.engine.idle, timeout=20_000)
    session.player.set_speed(8.0)
    session.player.play()
    go_to(table, 0, Column.START)
    qtbot.keyClick(table, Key.Key_F2)
    editor = QApplication.focusWidget()
    qtbot.keyClicks(editor, "3")
    before = session.player.position
    qtbot.waitUntil(lambda: session.player.position > before + 1)
    assert QApplication.focusWidget() is editor
    assert editor.text() == "3"
    end_typing(qtbot, editor)
    assert people(session)[0].beliefs["label"] == 3.0
    session.player.pause()
    session.player.seek(0)
    qtbot.waitUntil(lambda: not table._now.isActive())


def test_a_theme_change_repaints(qtbot: QtBot, open_sidebar: Open, look: Look) -> None:
    sidebar, _ = open_sidebar()
    table = sidebar.people.table
    rect = table.visualRect(table.model().index(0, Column.NOW))
    light = table.viewport().grab(rect).toImage()
    look.choose("dark")
    dark = table.viewport().grab(rect).toImage()
    assert light != dark
    look.choose("light")
    assert table.viewport().grab(rect).toImage() == light


def test_hundreds_of_people_and_another_variant(qtbot: QtBot, open_sidebar: Open) -> None:
    many = crowd(500)
    other = Variant(name="Small", people=many.variants[0].people[:3], plan=Plan((Stage(rounds=2),)))
    sidebar, session = open_sidebar(replace(many, variants=(many.variants[0], other)))
    table = sidebar.people.table
    session.select(people=[one.id for one in people(session)])
    assert len(table.selectionModel().selectedRows()) == 500
    session.show_variant("Small")
    assert table.model().rowCount() == 3
    assert len(table.selectionModel().selectedRows()) == 3
    qtbot.waitUntil(session.engine.idle, timeout=20_000)


def test_who_is_not_there_is_muted(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    rect = table.visualRect(table.model().index(1, Column.NAME))
    there = table.viewport().grab(rect).toImage()
    session.edit("x", lambda s: edits.set_presence(s, "bilal", False, variant=AS_IT_STANDS))
    assert table.viewport().grab(rect).toImage() != there
    session.undo()
    assert table.viewport().grab(rect).toImage() == there


def open_menu(table: PeopleTable, reason: QContextMenuEvent.Reason, at: QPoint) -> QMenu:
    event = QContextMenuEvent(reason, at, table.viewport().mapToGlobal(at))
    QApplication.sendEvent(table.viewport(), event)
    QApplication.processEvents()
    menu = QApplication.activePopupWidget()
    assert isinstance(menu, QMenu)
    return menu


def test_the_menu_has_what_the_keys_do(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    click(qtbot, table, 1, Column.START)
    at = table.visualRect(table.model().index(1, Column.START)).center()
    menu = open_menu(table, QContextMenuEvent.Reason.Keyboard, at)
    entries = {action.text(): action for action in menu.actions() if action.text()}
    assert list(entries) == ["Change", "Copy", "Paste", "Select all", "Remove", "Columns"]
    entries["Copy"].trigger()
    assert QGuiApplication.clipboard().text().startswith("Bilal\t80")
    entries["Remove"].trigger()
    assert [one.id for one in people(session)][:2] == ["amina", "chiara"]
    menu.close()


def test_the_menu_of_the_headings_chooses_columns(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, _ = open_sidebar()
    table = sidebar.people.table
    header = table.horizontalHeader()
    at = QPoint(20, 8)
    reason = QContextMenuEvent.Reason.Mouse
    QApplication.sendEvent(header.viewport(), QContextMenuEvent(reason, at, header.mapToGlobal(at)))
    QApplication.processEvents()
    menu = QApplication.activePopupWidget()
    assert isinstance(menu, QMenu)
    role = next(action for action in menu.actions() if action.text() == "role")
    assert not role.isChecked()
    role.trigger()
    menu.close()
    assert not table.isColumnHidden(Column.ROLE)
