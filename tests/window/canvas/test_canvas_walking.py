"""Tab over the people of the picture, and W over the arrows of the one in focus."""

from __future__ import annotations

from collections.abc import Callable

from canvas_hands import click, on_arrow
from circles import meeting, person
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from deliberate.scenario.values import Arrow
from deliberate.window.canvas import Canvas

Open = Callable[..., Canvas]
Key, Modifier = Qt.Key, Qt.KeyboardModifier


def press(canvas: Canvas, *keys: Qt.Key, modifier: Qt.KeyboardModifier = Modifier.NoModifier) -> None:
    for key in keys:
        QTest.keyClick(canvas, key, modifier)


def test_tab_goes_over_people_and_out(open_canvas: Open) -> None:
    canvas = open_canvas()
    press(canvas, Key.Key_Tab)
    assert canvas.session.selection.people == {"amina"}
    assert canvas._hint == "Amina: 90"
    press(canvas, *[Key.Key_Tab] * 5)
    assert canvas.session.selection.people == {"farah"}
    assert not canvas.keys.tab(True)
    press(canvas, Key.Key_Backtab)
    assert canvas.session.selection.people == {"farah"}


def test_w_goes_through_the_arrows_of_the_focused_person(open_canvas: Open) -> None:
    """Those she gives most points first, then those who listen to her, then she herself again."""
    people = tuple(person(name, 50.0, (200.0 * place, 0.0)) for place, name in enumerate(("Ana", "Bo", "Cy")))
    arrows = (Arrow("ana", "bo", 10.0), Arrow("cy", "ana", 5.0), Arrow("ana", "cy", 30.0), Arrow("bo", "cy", 9.0))
    canvas = open_canvas(meeting(people, arrows))
    press(canvas, Key.Key_W)  # nobody has the focus yet
    assert not canvas.session.selection
    press(canvas, Key.Key_Tab)
    seen = []
    for _ in range(4):
        press(canvas, Key.Key_W)
        seen.append((set(canvas.session.selection.people), set(canvas.session.selection.arrows)))
    hers = [("ana", "cy"), ("ana", "bo"), ("cy", "ana")]
    assert seen == [*[(set(), {arrow}) for arrow in hers], ({"ana"}, set())]
    press(canvas, Key.Key_W, modifier=Modifier.ShiftModifier)
    assert canvas.session.selection.arrows == {("cy", "ana")}
    assert canvas._hint.startswith("Cy listens to Ana: ")


def test_tab_on_an_arrow_goes_on_from_its_person(open_canvas: Open) -> None:
    canvas = open_canvas()
    press(canvas, Key.Key_Tab, Key.Key_Tab, Key.Key_W, Key.Key_Backtab)
    assert canvas.session.selection.people == {"bilal"}
    press(canvas, Key.Key_W, Key.Key_Tab)
    assert canvas.session.selection.people == {"chiara"}


def test_after_a_click_on_an_arrow_w_goes_on_with_its_listeners(open_canvas: Open) -> None:
    canvas = open_canvas()
    click(canvas, on_arrow(canvas, "bilal", "amina"))
    press(canvas, Key.Key_W)
    assert canvas.session.selection.arrows == {("bilal", "chiara")}
