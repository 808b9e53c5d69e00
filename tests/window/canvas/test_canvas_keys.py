"""Everything on the canvas by keyboard, the clipboard, and what a screen reader reads."""

from __future__ import annotations

from collections.abc import Callable

import msgspec
import pytest
from canvas_hands import at, click, on_arrow
from circles import CIRCLES, LABEL, meeting, person
from hypothesis import given
from hypothesis import strategies as st
from msgspec.structs import replace
from PySide6.QtCore import QByteArray, QMimeData, QPoint, Qt
from PySide6.QtGui import QAccessible, QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from deliberate.errors import DeliberateError
from deliberate.scenario.access import arrow_between, person_with_id
from deliberate.scenario.edits.clips import Clip
from deliberate.scenario.edits.points import points_of
from deliberate.scenario.values import Arrow, Person, Scenario
from deliberate.window.canvas import Canvas, clipboard
from deliberate.window.canvas.editors import parse_number
from deliberate.window.canvas.picture import Hit
from deliberate.window.session import Session
from deliberate.window.theme import Look

Open = Callable[..., Canvas]
Key, Modifier = Qt.Key, Qt.KeyboardModifier


def press(canvas: Canvas, *keys: Qt.Key, modifier: Qt.KeyboardModifier = Modifier.NoModifier) -> None:
    for key in keys:
        QTest.keyClick(canvas, key, modifier)


def type_on(canvas: Canvas, text: str) -> None:
    """The first key goes to the canvas, the rest to the editor that it opens."""
    QTest.keyClicks(canvas, text[0])
    QTest.keyClicks(canvas.editors.line, text[1:])


# Going round


def test_the_focus_leaves_at_the_ends(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> None:
    home = QWidget()
    qtbot.addWidget(home)
    before, canvas = QWidget(home), Canvas(open_session(meeting((), ()), rehearsed=False), look, home)
    before.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    home.show()
    canvas.setFocus()
    qtbot.waitUntil(canvas.hasFocus)
    press(canvas, Key.Key_Tab)
    assert before.hasFocus()
    assert not canvas.keys.shows_focus


def test_select_all_and_nobody(open_canvas: Open) -> None:
    canvas = open_canvas()
    press(canvas, Key.Key_A, modifier=Modifier.ControlModifier)
    assert len(canvas.session.selection.people) == 6
    press(canvas, Key.Key_Escape)
    assert not canvas.session.selection


# Typing


def test_typing_sets_the_starting_belief(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.session.select(["emeka"])
    type_on(canvas, "62.5")
    assert canvas.editors.line.text() == "62.5"
    assert canvas._hint.startswith("Starting belief of Emeka, 0 to 100")
    QTest.keyClick(canvas.editors.line, Key.Key_Return)
    assert person_with_id(canvas.session.variant, "emeka").beliefs["label"] == 62.5
    assert canvas.session.undo_step == "Starting belief of Emeka"
    assert canvas.hasFocus()


def test_typing_zero_is_a_belief_when_somebody_is_selected(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.session.select(["emeka", "amina"])
    type_on(canvas, "0")
    QTest.keyClick(canvas.editors.line, Key.Key_Return)
    assert [p.beliefs["label"] for p in canvas.session.variant.people] == [0, 80, 70, 30, 0, 10]


def test_a_belief_off_the_scale_is_refused_and_can_be_mended(open_canvas: Open, qtbot: QtBot) -> None:
    canvas = open_canvas()
    canvas.session.select(["emeka"])
    type_on(canvas, "620")
    with qtbot.waitSignal(canvas.session.refused):
        QTest.keyClick(canvas.editors.line, Key.Key_Return)
    assert canvas.editors.line.isVisible()
    assert canvas.session.scenario is CIRCLES
    QTest.keyClicks(canvas.editors.line, "62")
    QTest.keyClick(canvas.editors.line, Key.Key_Return)
    assert person_with_id(canvas.session.variant, "emeka").beliefs["label"] == 62


def test_typing_sets_the_points_of_an_arrow(open_canvas: Open) -> None:
    canvas = open_canvas()
    click(canvas, on_arrow(canvas, "amina", "bilal"))
    type_on(canvas, "50")
    QTest.keyClick(canvas.editors.line, Key.Key_Return)
    points = points_of(canvas.session.variant, "amina")
    assert points["bilal"] == pytest.approx(50)
    assert sum(points.values()) == pytest.approx(100)
    assert canvas._hint == "Amina listens to Bilal: 50 of 100 points"


def test_renaming_by_key(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.session.select(["davor"])
    press(canvas, Key.Key_F2)
    QTest.keyClicks(canvas.editors.line, "Dragana")
    QTest.keyClick(canvas.editors.line, Key.Key_Return)
    assert person_with_id(canvas.session.variant, "davor").name == "Dragana"


@pytest.mark.parametrize(
    ("typed", "value"),
    [("62", 62.0), ("62,5", 62.5), (" 62.5 % ", 62.5), ("1,250.5", 1250.5), ("\u22123", -3.0), (".5", 0.5)],
)
def test_numbers_as_people_type_them(typed: str, value: float) -> None:
    assert parse_number(typed) == value


@given(st.text(max_size=12))
def test_what_is_no_number_is_none(text: str) -> None:
    value = parse_number(text)
    assert value is None or abs(value) < float("inf")


@pytest.mark.parametrize("typed", ["", "nan", "inf", "1e999", "twelve", "1_0", "--1"])
def test_no_numbers(typed: str) -> None:
    assert parse_number(typed) is None


# Moving, arrows


def test_arrow_keys_move_the_selected_in_one_step(open_canvas: Open) -> None:
    canvas = open_canvas()
    before = canvas.picture.scene.places[0].copy()
    canvas.session.select(["amina"])
    press(canvas, Key.Key_Right, Key.Key_Right, Key.Key_Down)
    press(canvas, Key.Key_Down, modifier=Modifier.ShiftModifier)
    dx, dy = canvas.picture.scene.places[0] - before
    assert dx > 0
    assert dy > 3 * dx
    canvas.session.undo()
    assert canvas.session.scenario is CIRCLES


def test_arrow_keys_pan_when_nobody_is_selected(open_canvas: Open) -> None:
    canvas = open_canvas()
    before = at(canvas, "amina")
    press(canvas, Key.Key_Left)
    assert at(canvas, "amina") - before == QPoint(40, 0)
    assert canvas.session.scenario is CIRCLES


def test_an_arrow_by_keyboard(open_canvas: Open) -> None:
    canvas = open_canvas()
    press(canvas, *[Key.Key_Tab] * 3, Key.Key_A)  # from Chiara
    assert canvas._hint.startswith("Chiara listens to …")
    press(canvas, Key.Key_Tab)
    assert canvas._hint.startswith("Chiara listens to Davor: Return")
    canvas.grab()
    press(canvas, Key.Key_Return)
    assert arrow_between(canvas.session.variant, "chiara", "davor") is not None
    assert canvas.session.selection.arrows == {("chiara", "davor")}
    press(canvas, Key.Key_3, Key.Key_0, Key.Key_Return)  # the new arrow has the focus
    assert canvas.keys.focused() == Hit("arrow", canvas.picture.scene.arrow_index["chiara", "davor"])


def test_an_arrow_by_keyboard_can_be_left(open_canvas: Open) -> None:
    canvas = open_canvas()
    press(canvas, Key.Key_Tab, Key.Key_A, Key.Key_Tab, Key.Key_Escape)
    assert canvas.session.scenario is CIRCLES
    assert canvas.keys.listener is None


def test_two_selected_people_are_joined_at_once(open_canvas: Open) -> None:
    canvas = open_canvas()
    click(canvas, at(canvas, "davor"))
    click(canvas, at(canvas, "chiara"), Modifier.ControlModifier)
    press(canvas, Key.Key_L)
    assert arrow_between(canvas.session.variant, "chiara", "davor") is not None


def test_r_turns_an_arrow_round(open_canvas: Open) -> None:
    canvas = open_canvas(meeting(CIRCLES.variants[0].people, (Arrow("amina", "davor", 5.0),)))
    canvas.session.select(arrows=[("amina", "davor")])
    press(canvas, Key.Key_R)
    assert arrow_between(canvas.session.variant, "davor", "amina") == Arrow("davor", "amina", 5.0)
    assert canvas.session.selection.arrows == {("davor", "amina")}


def test_delete_removes_people_and_arrows_in_one_step(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.session.select(["amina"], [("davor", "emeka"), ("amina", "bilal")])
    press(canvas, Key.Key_Delete)
    variant = canvas.session.variant
    assert "amina" not in [one.id for one in variant.people]
    assert arrow_between(variant, "davor", "emeka") is None
    assert len(variant.arrows) == 12 - 4 - 1
    canvas.session.undo()
    assert canvas.session.scenario is CIRCLES


def test_zoom_and_fit_by_key(open_canvas: Open) -> None:
    canvas = open_canvas()
    first = canvas.view()
    press(canvas, Key.Key_Plus)
    assert canvas.view().zoom == pytest.approx(first.zoom * 1.25)
    press(canvas, Key.Key_Minus, Key.Key_Minus)
    assert canvas.view().zoom == pytest.approx(first.zoom / 1.25)
    press(canvas, Key.Key_0)
    assert canvas.view() == first


@pytest.mark.parametrize("kind", ["circle", "groups", "hearing", "grid"])
def test_arranging_is_one_step_and_glides(open_canvas: Open, qtbot: QtBot, kind: str) -> None:
    canvas = open_canvas()
    canvas.arrange(kind)
    assert canvas.picture.moving is not None
    canvas.grab()
    qtbot.waitUntil(lambda: canvas.picture.moving is None)
    assert all(one.x is not None for one in canvas.session.variant.people)
    canvas.session.undo()
    assert canvas.session.scenario is CIRCLES


def test_arranging_jumps_where_motion_is_reduced(open_canvas: Open, look: Look) -> None:
    canvas = open_canvas()
    look.set_still(True)
    canvas.arrange("circle")
    assert canvas.picture.moving is None


# Clipboard


def test_copy_and_paste_between_windows(open_canvas: Open) -> None:
    one, other = open_canvas(), open_canvas(meeting((person("Amina", 5.0, (0.0, 0.0)),), ()))
    one.session.select(["amina", "bilal"])
    press(one, Key.Key_C, modifier=Modifier.ControlModifier)
    assert QGuiApplication.clipboard().text() == "Amina\nBilal"
    press(other, Key.Key_V, modifier=Modifier.ControlModifier)
    variant = other.session.variant
    assert [p.id for p in variant.people] == ["amina", "amina-2", "bilal"]
    assert variant.people[1].beliefs == {"label": 90}
    assert {(a.listener, a.source) for a in variant.arrows} == {("amina-2", "bilal"), ("bilal", "amina-2")}
    assert other.session.selection.people == {"amina-2", "bilal"}
    assert other.session.undo_step == "Paste 2 people"


def test_cut_and_duplicate(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.session.select(["farah"])
    press(canvas, Key.Key_X, modifier=Modifier.ControlModifier)
    assert len(canvas.session.variant.people) == 5
    press(canvas, Key.Key_V, modifier=Modifier.ControlModifier)
    canvas.session.select(["amina"])
    press(canvas, Key.Key_D, modifier=Modifier.ControlModifier)
    people = canvas.session.variant.people
    assert [one.name for one in people[-2:]] == ["Farah", "Amina"]
    assert (people[-1].x, people[-1].y) != (people[0].x, people[0].y)


def test_names_from_another_program_become_people(open_canvas: Open) -> None:
    canvas = open_canvas(meeting((), ()))
    QGuiApplication.clipboard().setText("Ana Lu\n\n  Bo\tEk \r\n")
    canvas.paste()
    assert [one.name for one in canvas.session.variant.people] == ["Ana Lu", "Bo Ek"]
    assert canvas.picture.scene.places.shape == (2, 2)


@pytest.mark.parametrize(
    "raw",
    [
        b"",
        b"[]",
        b'{"people": [{"id": "a", "own_weight": -1}]}',
        b'{"people": [{"id": "a"}, {"id": "a"}]}',
        b'{"people": [], "more": 1}',
        b"[" * 100_000,
        b'{"people": [{"id": "a", "x": NaN}]}',
    ],
)
def test_a_strange_clipboard_is_refused(raw: bytes) -> None:
    data = QMimeData()
    data.setData(clipboard.FORMAT, QByteArray(raw))
    with pytest.raises(DeliberateError):
        clipboard.from_mime(data)


def test_an_empty_clipboard_says_so(open_canvas: Open, qtbot: QtBot) -> None:
    canvas = open_canvas()
    QGuiApplication.clipboard().clear()
    with qtbot.waitSignal(canvas.session.refused):
        canvas.paste()
    assert canvas.session.scenario is CIRCLES


def test_a_clip_comes_back_as_it_went() -> None:
    clip = Clip(CIRCLES.variants[0].people, CIRCLES.variants[0].arrows)
    assert clipboard.from_mime(clipboard.to_mime(clip)) == clip
    assert msgspec.json.decode(clipboard.to_mime(clip).data(clipboard.FORMAT).data(), type=Clip) == clip


# Screen readers


def test_a_screen_reader_finds_people_and_arrows(open_canvas: Open) -> None:
    absent = replace(person("Emeka", None, (100.0, 50.0)), present=False, ballots=0.0, firmness=0.25, role="chair")
    scenario = meeting((person("Amina", 90.0, (0.0, 0.0), own=70.0), absent), (Arrow("amina", "emeka", 30.0),))
    canvas = open_canvas(scenario)
    read = QAccessible.queryAccessibleInterface(canvas)
    names = [read.child(number).text(QAccessible.Text.Name) for number in range(read.childCount())]
    assert names == ["Amina", "Emeka", "Amina listens to Emeka: 30 of 100 points"]
    about = read.child(1).text(QAccessible.Text.Description)
    assert about == "Emeka, chair: 50, start not known, firmness 0.25, absent, no vote"
    assert "does not count in this stage" in read.child(2).text(QAccessible.Text.Description)
    assert read.child(0).rect().center() == canvas.mapToGlobal(at(canvas, "amina")) - QPoint(1, 1)
    spot = canvas.mapToGlobal(at(canvas, "emeka"))
    assert read.childAt(spot.x(), spot.y()).text(QAccessible.Text.Name) == "Emeka"
    press(canvas, Key.Key_Tab)
    assert read.focusChild().text(QAccessible.Text.Name) == "Amina"
    assert read.child(0).state().selected


def test_a_screen_reader_forgets_who_has_gone(open_canvas: Open) -> None:
    canvas = open_canvas()
    read = QAccessible.queryAccessibleInterface(canvas)
    last = read.child(read.childCount() - 1)
    assert last.isValid()
    canvas.session.select(["amina"])
    canvas.delete_selected()
    assert read.childCount() == 5 + 8
    assert read.child(0).text(QAccessible.Text.Name) == "Bilal"


def test_names_of_the_same_kind_are_told_apart(open_canvas: Open) -> None:
    people = (Person(id="a1", name="Ana", x=0.0, y=0.0), Person(id="a2", name="Ana", x=200.0, y=0.0))
    canvas = open_canvas(Scenario("T", (LABEL,), (replace(CIRCLES.variants[0], people=people, arrows=()),)))
    read = QAccessible.queryAccessibleInterface(canvas)
    assert read.child(1).text(QAccessible.Text.Name) == "Ana (a2)"
