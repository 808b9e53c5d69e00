"""Drawing and editing with the mouse."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from canvas_hands import LEFT, NO_KEYS, at, click, drag, drag_on, on_arrow, ring, settle
from circles import AS_IT_STANDS, CIRCLES, meeting
from msgspec.structs import replace
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QMenu
from pytestqt.qtbot import QtBot

from deliberate.scenario.access import arrow_between, person_with_id
from deliberate.scenario.edits.points import points_of
from deliberate.window.canvas import Canvas

Open = Callable[..., Canvas]
FREE = QPoint(450, 600)


def turn_wheel(canvas: Canvas, point: QPoint, notches: int, keys: Qt.KeyboardModifier = NO_KEYS) -> None:
    event = QWheelEvent(
        QPointF(point), QPointF(canvas.mapToGlobal(point)), QPoint(), QPoint(0, 120 * notches),
        Qt.MouseButton.NoButton, keys, Qt.ScrollPhase.NoScrollPhase, False,
    )  # fmt: skip
    QApplication.sendEvent(canvas, event)


def test_a_click_selects_and_ctrl_adds(open_canvas: Open) -> None:
    canvas = open_canvas()
    click(canvas, at(canvas, "amina"))
    assert canvas.session.selection.people == {"amina"}
    click(canvas, at(canvas, "bilal"), Qt.KeyboardModifier.ControlModifier)
    assert canvas.session.selection.people == {"amina", "bilal"}
    click(canvas, at(canvas, "amina"), Qt.KeyboardModifier.ShiftModifier)
    assert canvas.session.selection.people == {"bilal"}
    click(canvas, FREE)
    assert not canvas.session.selection


def test_a_click_on_an_arrow_selects_it_and_says_its_points(open_canvas: Open) -> None:
    canvas = open_canvas()
    click(canvas, on_arrow(canvas, "amina", "bilal"))
    assert canvas.session.selection.arrows == {("amina", "bilal")}
    assert canvas._hint == "Amina listens to Bilal: 30 of 100 points"


def test_the_pointer_says_what_it_is_on(open_canvas: Open, qtbot: QtBot) -> None:
    canvas = open_canvas()
    with qtbot.waitSignal(canvas.hint_changed) as said:
        QTest.mouseMove(canvas, on_arrow(canvas, "amina", "chiara"))
    assert said.args == ["Amina listens to Chiara: 30 of 100 points"]
    with qtbot.waitSignal(canvas.hint_changed) as said:
        QTest.mouseMove(canvas, at(canvas, "emeka"))
    assert said.args == ["Emeka: 20"]


def test_dragging_a_disc_is_one_step_at_release(open_canvas: Open) -> None:
    canvas = open_canvas()
    before = person_with_id(canvas.session.variant, "amina")
    start = at(canvas, "amina")
    QTest.mousePress(canvas, LEFT, NO_KEYS, start)
    drag_on(canvas, start, start + QPoint(60, 40), LEFT)
    canvas.repaint()
    assert canvas.session.undo_step is None
    shown = canvas.picture.points[0]
    assert shown == pytest.approx([start.x() + 60, start.y() + 40], abs=1)
    QTest.mouseRelease(canvas, LEFT, NO_KEYS, start + QPoint(60, 40))
    assert canvas.session.undo_step == "Move Amina"
    after = person_with_id(canvas.session.variant, "amina")
    zoom = canvas.view().zoom
    assert (after.x - before.x, after.y - before.y) == pytest.approx((60 / zoom, 40 / zoom), abs=0.02)
    canvas.session.undo()
    assert canvas.session.variant == CIRCLES.variants[0]


def test_several_are_dragged_together(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.session.select(["amina", "bilal"])
    drag(canvas, at(canvas, "bilal"), at(canvas, "bilal") + QPoint(0, 50))
    moved = {
        person.id
        for person, before in zip(canvas.session.variant.people, CIRCLES.variants[0].people, strict=True)
        if person != before
    }
    assert moved == {"amina", "bilal"}
    assert canvas.session.undo_step == "Move Amina and Bilal"


def test_a_rubber_band_selects_those_inside(open_canvas: Open) -> None:
    canvas = open_canvas()
    left = min(at(canvas, one).x() for one in ("amina", "bilal")) - 40
    top, bottom = at(canvas, "amina").y() - 60, at(canvas, "bilal").y() + 60
    drag(canvas, QPoint(left, top), QPoint(at(canvas, "chiara").x() + 45, bottom))
    assert canvas.session.selection.people == {"amina", "bilal", "chiara"}
    assert canvas.session.undo_step is None


def test_dragging_from_a_ring_draws_an_arrow(open_canvas: Open) -> None:
    canvas = open_canvas()
    start, stop = ring(canvas, "chiara"), at(canvas, "davor", 0.3, 0.3)
    QTest.mousePress(canvas, LEFT, NO_KEYS, start)
    drag_on(canvas, start, stop, LEFT)
    canvas.repaint()
    assert canvas._hint == "Chiara listens to Davor"
    QTest.mouseRelease(canvas, LEFT, NO_KEYS, stop)
    assert arrow_between(canvas.session.variant, "chiara", "davor") is not None
    assert canvas.session.undo_step == "Chiara listens to Davor"
    assert canvas.session.selection.arrows == {("chiara", "davor")}


def test_an_arrow_snaps_to_somebody_near(open_canvas: Open) -> None:
    canvas = open_canvas()
    drag(canvas, ring(canvas, "chiara"), at(canvas, "davor", 0, -1) - QPoint(0, 10))
    assert arrow_between(canvas.session.variant, "chiara", "davor") is not None


def test_an_arrow_onto_free_ground_brings_somebody_new(open_canvas: Open) -> None:
    canvas = open_canvas()
    drag(canvas, ring(canvas, "amina"), FREE)
    assert canvas.editors.line.isVisible()
    QTest.keyClicks(canvas.editors.line, "Ngaire")
    QTest.keyClick(canvas.editors.line, Qt.Key.Key_Return)
    variant = canvas.session.variant
    assert variant.people[-1].name == "Ngaire"
    assert arrow_between(variant, "amina", "ngaire") is not None
    assert at(canvas, "ngaire") == FREE
    canvas.session.undo()
    assert canvas.session.variant == CIRCLES.variants[0]


def test_an_arrow_let_go_over_its_own_person_is_none(open_canvas: Open) -> None:
    canvas = open_canvas()
    drag(canvas, ring(canvas, "amina"), at(canvas, "amina", -0.5, 0.5))
    assert canvas.session.undo_step is None
    assert not canvas.editors.open


def test_a_double_click_on_free_ground_adds_a_person(open_canvas: Open) -> None:
    canvas = open_canvas(meeting((), ()))
    canvas.grab()  # with the invitation on it
    QTest.mouseDClick(canvas, LEFT, NO_KEYS, QPoint(300, 200))
    canvas.editors.line.insert("Zoë & <b>Ann</b>")
    canvas.grab()
    QTest.keyClick(canvas.editors.line, Qt.Key.Key_Return)
    only = canvas.session.variant.people[0]
    assert only.name == "Zoë & <b>Ann</b>"
    assert at(canvas, only.id) == QPoint(300, 200)
    assert canvas.session.selection.people == {only.id}
    assert canvas.hasFocus()


def test_escape_adds_nobody(open_canvas: Open) -> None:
    canvas = open_canvas()
    QTest.mouseDClick(canvas, LEFT, NO_KEYS, FREE)
    QTest.keyClicks(canvas.editors.line, "Nobody")
    QTest.keyClick(canvas.editors.line, Qt.Key.Key_Escape)
    assert canvas.session.scenario is CIRCLES
    assert not canvas.editors.line.isVisible()
    assert canvas.hasFocus()


def test_a_double_click_on_a_disc_renames(open_canvas: Open) -> None:
    canvas = open_canvas()
    QTest.mouseDClick(canvas, LEFT, NO_KEYS, at(canvas, "emeka"))
    assert canvas.editors.line.text() == "Emeka"
    assert canvas.editors.line.selectedText() == "Emeka"
    QTest.keyClicks(canvas.editors.line, "Efua")
    QTest.keyClick(canvas.editors.line, Qt.Key.Key_Return)
    assert person_with_id(canvas.session.variant, "emeka").name == "Efua"
    assert canvas.session.undo_step == "Rename Emeka"


def test_clicking_elsewhere_accepts_what_was_typed(open_canvas: Open) -> None:
    canvas = open_canvas()
    QTest.mouseDClick(canvas, LEFT, NO_KEYS, at(canvas, "emeka"))
    QTest.keyClicks(canvas.editors.line, "Efua")
    click(canvas, FREE)
    assert person_with_id(canvas.session.variant, "emeka").name == "Efua"
    assert not canvas.editors.open


def test_the_wheel_zooms_around_the_pointer(open_canvas: Open) -> None:
    canvas = open_canvas()
    point = at(canvas, "farah")
    before = canvas.view().zoom
    turn_wheel(canvas, point, 2)
    assert canvas.view().zoom > 1.2 * before
    assert (at(canvas, "farah") - point).manhattanLength() <= 2


def test_the_wheel_on_a_selected_arrow_changes_its_points_in_one_step(open_canvas: Open) -> None:
    canvas = open_canvas()
    point = on_arrow(canvas, "amina", "bilal")
    click(canvas, point)
    before = canvas.view()
    for _ in range(4):
        turn_wheel(canvas, point, 1)
    assert canvas.view() == before
    assert points_of(canvas.session.variant, "amina")["bilal"] == pytest.approx(34)
    canvas.session.undo()
    assert canvas.session.scenario is CIRCLES
    turn_wheel(canvas, point, -90)
    assert points_of(canvas.session.variant, "amina")["bilal"] == pytest.approx(1)


def test_the_middle_and_the_right_button_pan(open_canvas: Open) -> None:
    canvas = open_canvas()
    for button in (Qt.MouseButton.MiddleButton, Qt.MouseButton.RightButton):
        before = at(canvas, "amina")
        drag(canvas, FREE, FREE + QPoint(70, -30), button)
        assert at(canvas, "amina") - before == QPoint(70, -30)
    assert canvas.session.scenario is CIRCLES
    assert not canvas.findChildren(QMenu)


@pytest.mark.qt_log_ignore("This plugin does not support")
def test_the_right_button_opens_a_menu_for_what_it_is_on(open_canvas: Open, qtbot: QtBot) -> None:
    canvas = open_canvas()
    QTest.mouseClick(canvas, Qt.MouseButton.RightButton, NO_KEYS, at(canvas, "davor"))
    menu = canvas.findChildren(QMenu)[0]
    texts = [action.text().split("\t")[0] for action in menu.actions()]
    assert canvas.session.selection.people == {"davor"}
    assert texts[:2] == ["Rename", "Draw an arrow from here"]
    next(action for action in menu.actions() if action.text().startswith("Remove")).trigger()
    menu.close()
    assert "davor" not in [person.id for person in canvas.session.variant.people]


def test_a_new_picture_ends_a_drag(open_canvas: Open) -> None:
    canvas = open_canvas()
    start = at(canvas, "amina")
    QTest.mousePress(canvas, LEFT, NO_KEYS, start)
    drag_on(canvas, start, start + QPoint(60, 40), LEFT)
    canvas.session.open(meeting((), ()), None)
    canvas.grab()
    QTest.mouseRelease(canvas, LEFT, NO_KEYS, start + QPoint(60, 40))
    assert canvas.session.undo_step is None


def test_playing_paints_people_in_the_colours_of_the_round(open_canvas: Open, qtbot: QtBot) -> None:
    canvas = open_canvas(rehearsed=True)
    settle(qtbot, canvas)
    before = canvas.grab().toImage().pixelColor(at(canvas, "amina", 0.5, 0.0))
    canvas.session.player.seek(0.5)
    between = canvas.grab().toImage().pixelColor(at(canvas, "amina", 0.5, 0.0))
    canvas.session.player.seek(6)
    settle(qtbot, canvas)
    after = canvas.grab().toImage().pixelColor(at(canvas, "amina", 0.5, 0.0))
    assert len({before.name(), between.name(), after.name()}) == 3


def test_a_place_that_the_program_gave_stays_when_others_move(open_canvas: Open) -> None:
    people = tuple(replace(person, x=None, y=None) for person in CIRCLES.variants[0].people)
    canvas = open_canvas(meeting(people, CIRCLES.variants[0].arrows))
    before = canvas.picture.scene.places.copy()
    drag(canvas, at(canvas, "amina"), at(canvas, "amina") + QPoint(30, 25))
    after = canvas.picture.scene.places
    assert (after[1:] == before[1:]).all()
    assert not (after[0] == before[0]).all()
    assert person_with_id(canvas.session.variant, "bilal").x is None
    assert canvas.session.variant.name == AS_IT_STANDS
    assert np.isfinite(after).all()
