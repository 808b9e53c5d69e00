"""A crowd of 500 people and 5,000 arrows by keyboard and through a screen reader (costs: bench_canvas)."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from circles import meeting, person
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible
from PySide6.QtTest import QTest

from deliberate.scenario.values import Arrow, Scenario
from deliberate.window.canvas import Canvas

PEOPLE, SOURCES = 500, 10


@pytest.fixture(scope="module")
def crowd() -> Scenario:
    """Everybody listens to ten others, to each with other points."""
    people = tuple(
        person(f"P{number}", float(number % 101), (150.0 * (number % 25), 150.0 * (number // 25)))
        for number in range(PEOPLE)
    )
    arrows = tuple(
        Arrow(f"p{number}", f"p{(number + 7 * step + 1) % PEOPLE}", 1.0 + step)
        for number in range(PEOPLE)
        for step in range(SOURCES)
    )
    return meeting(people, arrows)


def test_tab_is_out_after_as_many_presses_as_there_are_people(open_canvas: Callable[..., Canvas], crowd) -> None:
    canvas = open_canvas(crowd)
    presses = 0
    while canvas.keys.tab(True):
        presses += 1
    assert presses == PEOPLE


def test_everybodys_arrows_are_a_few_presses_away(open_canvas: Callable[..., Canvas], crowd) -> None:
    """Her ten, the strongest first, and the ten of those who listen to her; then she herself."""
    canvas = open_canvas(crowd)
    QTest.keyClick(canvas, Qt.Key.Key_Tab)
    seen = []
    for _ in range(2 * SOURCES):
        QTest.keyClick(canvas, Qt.Key.Key_W)
        seen += canvas.session.selection.arrows
    assert seen[:SOURCES] == [("p0", f"p{7 * step + 1}") for step in reversed(range(SOURCES))]
    assert {source for _, source in seen[SOURCES:]} == {"p0"}
    QTest.keyClick(canvas, Qt.Key.Key_W)
    assert canvas.session.selection.people == {"p0"}


def test_a_screen_reader_gets_only_what_it_asks_for(open_canvas: Callable[..., Canvas], crowd) -> None:
    canvas = open_canvas(crowd)
    read = QAccessible.queryAccessibleInterface(canvas)
    assert read.childCount() == PEOPLE * (1 + SOURCES)
    last = read.child(read.childCount() - 1)
    assert last.text(QAccessible.Text.Name).startswith("P499 listens to P")
    assert len(canvas.items._items) == 1
    QTest.keyClick(canvas, Qt.Key.Key_Tab)
    assert len(canvas.items._items) <= 2


def test_a_screen_reader_can_place_every_child(open_canvas: Callable[..., Canvas], crowd) -> None:
    canvas = open_canvas(crowd)
    read = QAccessible.queryAccessibleInterface(canvas)
    numbers = range(0, read.childCount(), 97)
    assert [read.indexOfChild(read.child(number)) for number in numbers] == list(numbers)
    other = open_canvas(crowd)
    stranger = QAccessible.queryAccessibleInterface(other).child(3)
    assert read.indexOfChild(stranger) == -1
    assert read.indexOfChild(QAccessible.queryAccessibleInterface(other)) == -1
