from __future__ import annotations

import math
from collections.abc import Callable

import pytest
from circles import AS_IT_STANDS, CIRCLES, meeting, person
from PySide6.QtCore import QPoint, QRect, Qt
from PySide6.QtTest import QAbstractItemModelTester
from PySide6.QtWidgets import QApplication, QMenu, QStyleOptionViewItem
from pytestqt.qtbot import QtBot
from sidebar_hands import Key, click, press, replace_text, tick, type_over

from deliberate.scenario import edits
from deliberate.scenario.edits import points_of
from deliberate.scenario.values import Arrow
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.sidebar.points_delegate import bar_rect
from deliberate.window.sidebar.points_model import BASIS, NAME, POINTS
from deliberate.window.sidebar.points_table import PointsTable

Open = Callable[..., tuple[Sidebar, Session]]


@pytest.fixture
def points(open_sidebar: Open) -> tuple[PointsTable, Session]:
    """The points of Amina: 40 for her own view, 30 each for Bilal and Chiara."""
    sidebar, session = open_sidebar()
    session.select(people=["amina"])
    QApplication.processEvents()
    return sidebar.people.points, session


def amina(session: Session) -> dict[str, float]:
    return points_of(session.variant, "amina")


def rows(table: PointsTable) -> list[tuple[str, str]]:
    model = table.model
    return [(model.index(row, NAME).data(), model.index(row, POINTS).data()) for row in range(model.rowCount())]


def type_points(table: PointsTable, row: int, text: str) -> None:
    table.table.setFocus()
    table.table.setCurrentIndex(table.model.index(row, POINTS))
    press(table.table, Key.Key_F2)
    type_over(QApplication.focusWidget(), text)


def test_it_shows_the_selected_person_only(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    assert table.heading.text() == "Whose view counts for Amina"
    assert rows(table) == [("own view", "40"), ("Bilal", "30"), ("Chiara", "30")]
    assert table.sum.text() == "in all 100"
    session.select(people=["amina", "bilal"])
    assert not table.isVisible()
    session.select(people=["davor"])
    assert table.isVisible()
    assert table.heading.text() == "Whose view counts for Davor"
    session.select()
    assert not table.isVisible()


def test_the_others_make_room(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    type_points(table, 1, "65")
    assert amina(session) == {"amina": 20.0, "bilal": 65.0, "chiara": 15.0}
    assert table.sum.text() == "in all 100"
    assert session.undo_step == "Change the points of Amina"


def test_or_only_the_own_view_does(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    tick(table.make_room)
    assert not table.make_room.isChecked()
    type_points(table, 1, "65")
    assert amina(session) == {"amina": 5.0, "bilal": 65.0, "chiara": 30.0}


def test_more_than_the_own_view_has_is_refused_with_the_most(
    qtbot: QtBot, points: tuple[PointsTable, Session]
) -> None:
    table, session = points
    table.make_room.setChecked(False)
    with qtbot.waitSignal(session.refused) as refused:
        type_points(table, 1, "90")
    assert "no more than 70 points" in refused.args[0]
    assert session.scenario is CIRCLES
    assert rows(table)[1] == ("Bilal", "30")


def test_a_bar_is_dragged_as_one_step(qtbot: QtBot, points: tuple[PointsTable, Session]) -> None:
    table, session = points
    viewport, bar = table.table.viewport(), bar_of(table, 1)
    middle = round(bar.center().y())
    qtbot.mousePress(viewport, Qt.MouseButton.LeftButton, pos=QPoint(round(bar.left() + bar.width() * 0.3), middle))
    for share in (0.4, 0.45, 0.5):
        qtbot.mouseMove(viewport, QPoint(round(bar.left() + bar.width() * share), middle))
    assert session.scenario is CIRCLES  # until it is let go
    qtbot.mouseRelease(viewport, Qt.MouseButton.LeftButton, pos=QPoint(round(bar.left() + bar.width() * 0.5), middle))
    assert abs(amina(session)["bilal"] - 50) <= 2
    session.undo()
    assert session.scenario is CIRCLES


def test_a_drag_let_go_below_the_rows_counts(qtbot: QtBot, points: tuple[PointsTable, Session]) -> None:
    table, session = points
    viewport, bar = table.table.viewport(), bar_of(table, 1)
    start = QPoint(round(bar.left() + bar.width() * 0.3), round(bar.center().y()))
    qtbot.mousePress(viewport, Qt.MouseButton.LeftButton, pos=start)
    qtbot.mouseMove(viewport, QPoint(round(bar.right()), start.y()))
    qtbot.mouseRelease(viewport, Qt.MouseButton.LeftButton, pos=QPoint(start.x(), viewport.height() - 2))
    assert amina(session)["bilal"] > 90


def bar_of(table: PointsTable, row: int) -> QRect:
    option = QStyleOptionViewItem()
    option.rect = table.table.visualRect(table.model.index(row, POINTS))
    option.fontMetrics = table.table.fontMetrics()
    return bar_rect(option).toRect()


def test_somebody_is_added_by_name(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    table.add.setFocus()
    replace_text(table.add, "davor")
    press(table.add, Key.Key_Return)
    assert list(amina(session)) == ["amina", "bilal", "chiara", "davor"]
    assert math.isclose(math.fsum(amina(session).values()), 100.0)
    assert table.add.text() == ""
    assert "Davor" not in table.known.stringList()


def test_part_of_a_name_brings_up_a_list_to_choose_from(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    table.add.setFocus()
    replace_text(table.add, "mek")
    popup = table.completer.popup()
    assert popup.isVisible()
    press(popup, Key.Key_Down)
    press(popup, Key.Key_Return)
    assert "emeka" in amina(session)
    assert table.add.text() == ""
    assert session.undo_step == "Change the points of Amina"
    session.undo()
    assert session.scenario is CIRCLES  # one step, not two


def test_a_click_on_a_listed_name_adds_it(qtbot: QtBot, points: tuple[PointsTable, Session]) -> None:
    table, session = points
    table.add.setFocus()
    replace_text(table.add, "far")
    popup = table.completer.popup()
    qtbot.mouseClick(
        popup.viewport(), Qt.MouseButton.LeftButton, pos=popup.visualRect(popup.model().index(0, 0)).center()
    )
    QApplication.processEvents()
    assert "farah" in amina(session)


@pytest.mark.parametrize(
    ("typed", "what"), [("Zoe", "nobody here"), ("Bilal", "counts already"), ("Amina", "counts already")]
)
def test_who_cannot_be_added_is_said(
    qtbot: QtBot, points: tuple[PointsTable, Session], typed: str, what: str
) -> None:
    table, session = points
    table.add.setFocus()
    replace_text(table.add, typed)
    with qtbot.waitSignal(session.refused) as refused:
        press(table.add, Key.Key_Return)
    assert what in refused.args[0]
    assert session.scenario is CIRCLES


def test_people_of_one_name_are_told_apart(open_sidebar: Open, qtbot: QtBot) -> None:
    several = (person("Ama", 1.0, (0, 0)), person("Ben", 1.0, (0, 0)), person("Cai", 1.0, (0, 0)))
    twice = edits.rename_person(meeting(several, (Arrow("ama", "ben", 10.0),)), "cai", "Ben")
    sidebar, session = open_sidebar(twice)
    session.select(people=["ama"])
    table = sidebar.people.points
    assert [name for name, _ in rows(table)] == ["own view", "Ben (ben)"]
    assert table.known.stringList() == ["Ben (cai)"]
    table.add.setFocus()
    replace_text(table.add, "Ben")
    with qtbot.waitSignal(session.refused) as refused:
        press(table.add, Key.Key_Return)
    assert "more than one" in refused.args[0]


def test_delete_stops_listening(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    table.table.selectRow(1)
    press(table.table, Key.Key_Delete)
    assert list(amina(session)) == ["amina", "chiara"]
    assert table.sum.text() == "in all 100"


def test_the_own_view_cannot_be_removed(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    table.table.selectRow(0)
    press(table.table, Key.Key_Delete)
    assert session.scenario is CIRCLES


def test_several_sources_go_as_one_step(qtbot: QtBot, points: tuple[PointsTable, Session]) -> None:
    table, session = points
    table.table.selectAll()
    press(table.table, Key.Key_Delete)
    assert amina(session) == {"amina": 100.0}
    session.undo()
    assert session.scenario is CIRCLES


def test_the_menu_says_where_a_number_comes_from(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    table._open_menu(table.table.visualRect(table.model.index(1, NAME)).center())
    menu = table.findChild(QMenu)
    basis = next(action.menu() for action in menu.actions() if action.menu())
    assert [action.text() for action in basis.actions() if action.isChecked()] == ["guess"]
    basis.actions()[2].trigger()
    menu.close()
    assert table.model.index(1, BASIS).data() == "observed"
    assert session.variant.arrows[0].basis == "observed"


def test_the_basis_is_chosen_in_its_cell(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar(width=420)
    session.select(people=["amina"])
    table = sidebar.people.points
    QApplication.processEvents()
    assert not table.table.isColumnHidden(BASIS)
    table.table.setFocus()
    table.table.setCurrentIndex(table.model.index(1, BASIS))
    press(table.table, Key.Key_F2)
    editor = QApplication.focusWidget()
    press(editor, Key.Key_Down)
    table.table.setFocus()
    QApplication.processEvents()
    assert session.variant.arrows[0].basis == "stated"


def test_a_narrow_bar_keeps_names_and_bars(open_sidebar: Open) -> None:
    sidebar, session = open_sidebar(width=236)
    session.select(people=["amina"])
    QApplication.processEvents()
    table = sidebar.people.points.table
    assert table.columnWidth(NAME) >= 10 * table.fontMetrics().horizontalAdvance("n")
    assert bar_of(sidebar.people.points, 0).width() >= 40
    on_screen = [column for column in (NAME, POINTS, BASIS) if not table.isColumnHidden(column)]
    assert sum(map(table.columnWidth, on_screen)) <= table.viewport().width()


def test_the_model_is_sound(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    tester = QAbstractItemModelTester(table.model, QAbstractItemModelTester.FailureReportingMode.Fatal)
    session.select(people=["davor"])
    session.edit("a", lambda s: edits.set_points(s, "davor", "amina", 10.0, variant=AS_IT_STANDS))
    session.edit("b", lambda s: edits.remove_people(s, ["amina"], variant=AS_IT_STANDS))
    session.undo()
    session.edit("c", lambda s: edits.remove_people(s, ["davor"], variant=AS_IT_STANDS))
    assert tester.model() is table.model
    assert not table.isVisible()


def test_words_say_who_listens_to_whom(points: tuple[PointsTable, Session]) -> None:
    table, _ = points
    spoken = table.model.index(1, POINTS).data(Qt.ItemDataRole.AccessibleTextRole)
    assert spoken == "Amina listens to Bilal: 30 of 100 points"


def test_points_of_a_crowd_member_are_typed_exactly(open_sidebar: Open) -> None:
    several = tuple(person(f"P{n}", 1.0, (0, 0), own=1.0) for n in range(4))
    thirds = tuple(Arrow("p0", f"p{n}", 1.0) for n in range(1, 3))
    sidebar, session = open_sidebar(meeting(several, thirds))
    session.select(people=["p0"])
    table = sidebar.people.points
    assert rows(table) == [("own view", "33.3"), ("P1", "33.3"), ("P2", "33.3")]
    table.table.setFocus()
    table.table.setCurrentIndex(table.model.index(1, POINTS))
    press(table.table, Key.Key_F2)
    press(QApplication.focusWidget(), Key.Key_Return)
    assert session.undo_step is None  # looking at a rounded number does not change it


def test_clicking_elsewhere_in_the_bar_keeps_what_is_typed(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    table.table.setFocus()
    table.table.setCurrentIndex(table.model.index(2, POINTS))
    press(table.table, Key.Key_F2)
    replace_text(QApplication.focusWidget(), "10")
    click(table.add)
    assert amina(session)["chiara"] == 10.0


def test_return_goes_on_to_the_next_number(points: tuple[PointsTable, Session]) -> None:
    table, session = points
    tick(table.make_room)
    type_points(table, 1, "25")
    assert table.table.currentIndex().row() == 2
    press(table.table, Key.Key_F2)
    replace_text(QApplication.focusWidget(), "15")
    press(QApplication.focusWidget(), Key.Key_Return)
    assert amina(session) == {"amina": 60.0, "bilal": 25.0, "chiara": 15.0}
