"""The left bar: from one edit to everything in it read again and painted, page by page.

Offscreen raster, 290 x 700. It must leave an edit of the whole window (30 ms at 40 people, 100 ms at 150) most of its
time: 5 ms at 40 people and 15 ms at 150.
"""

from __future__ import annotations

from collections.abc import Callable

import pytest
from bench_window import SIZES, crowd
from PySide6.QtCore import QSettings
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from deliberate.scenario import edits
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.styles import style_sheet
from deliberate.window.theme import Look

BOUNDS = {40: 0.005, 150: 0.015}
PAGES = ("people", "question", "ballot", "meeting")


@pytest.fixture
def open_sidebar(qtbot: QtBot, tmp_path) -> Callable[..., tuple[Sidebar, Session]]:
    opened: list[Sidebar] = []

    def open_one(people: int, arrows: int, page: int) -> tuple[Sidebar, Session]:
        look = Look(QSettings(str(tmp_path / "sidebar.ini"), QSettings.Format.IniFormat))
        session = Session(crowd(people, arrows))
        session.engine.ask = lambda _ask: None  # the edit itself and its rehearsal are measured elsewhere
        sidebar = Sidebar(session, look)
        sidebar.setStyleSheet(style_sheet(look.theme))
        qtbot.addWidget(sidebar)
        opened.append(sidebar)
        sidebar.resize(290, 700)
        sidebar.show()
        for place in (0, 1, 2, 3, page):  # every page has been looked at
            sidebar.tabs.setCurrentIndex(place)
            QApplication.processEvents()
        session.select(people=["p3"])
        QApplication.processEvents()
        return sidebar, session

    return open_one


@pytest.mark.parametrize("page", range(4), ids=PAGES)
@pytest.mark.parametrize(("people", "arrows"), SIZES)
def test_one_edit(benchmark, open_sidebar, people: int, arrows: int, page: int) -> None:
    _sidebar, session = open_sidebar(people, arrows, page)
    values = iter(range(10_000))

    def edited() -> tuple[tuple[object], dict[str, object]]:
        belief = float(next(values) % 100)
        scenario = edits.set_belief(session.scenario, "p3", "q", belief, variant="v")
        return (scenario,), {}

    def show(scenario: object) -> None:
        session.edit("Start", lambda _: scenario)
        QApplication.processEvents()

    benchmark.pedantic(show, setup=edited, rounds=60, warmup_rounds=5)
    if people in BOUNDS:
        assert benchmark.stats.stats.median < BOUNDS[people]


@pytest.mark.parametrize(("people", "arrows"), SIZES)
def test_next_selection(benchmark, open_sidebar, people: int, arrows: int) -> None:
    _sidebar, session = open_sidebar(people, arrows, 0)
    numbers = iter(range(10_000))

    def select() -> None:
        session.select(people=[f"p{next(numbers) % people}"])
        QApplication.processEvents()

    benchmark.pedantic(select, rounds=60, warmup_rounds=5)


@pytest.mark.parametrize(("people", "arrows"), SIZES)
def test_turning_to_a_page(benchmark, open_sidebar, people: int, arrows: int) -> None:
    sidebar, session = open_sidebar(people, arrows, 0)
    numbers = iter(range(10_000))

    def turn() -> None:
        session.scenario_changed.emit()
        sidebar.tabs.setCurrentIndex(next(numbers) % 4)
        QApplication.processEvents()

    benchmark.pedantic(turn, rounds=40, warmup_rounds=4)


@pytest.mark.parametrize(("people", "arrows"), SIZES)
def test_the_round_moves_on(benchmark, open_sidebar, people: int, arrows: int) -> None:
    sidebar, _session = open_sidebar(people, arrows, 0)

    def show() -> None:
        sidebar.people.table._show_round()
        sidebar.people.points.model.refresh_beliefs()
        QApplication.processEvents()

    benchmark.pedantic(show, rounds=60, warmup_rounds=5)
