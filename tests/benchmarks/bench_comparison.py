"""Variants compared: from the wish to the painted picture. Bound: four variants of 150 people under 300 ms.

Offscreen raster; every round compares variants that nobody has worked out before.
"""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest
from bench_window import crowd
from msgspec.structs import replace
from PySide6.QtCore import QEventLoop, QSettings
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from deliberate.scenario.values import Scenario
from deliberate.window.comparison import ComparisonDialog
from deliberate.window.main_window import MainWindow
from deliberate.window.session import Session
from deliberate.window.theme import Look

BOUND_SECONDS = 0.3
VARIANTS = 4


def meeting(people: int, arrows: int) -> Scenario:
    """Variants that differ in the weight of own views."""
    scenario = crowd(people, arrows)
    first = scenario.variants[0]
    others = tuple(
        replace(first, name=f"v{own}", people=tuple(replace(one, own_weight=float(own)) for one in first.people))
        for own in (20, 60, 80)
    )
    return replace(scenario, variants=(first, *others))


@pytest.fixture
def window(qtbot: QtBot, tmp_path: Path) -> Iterator[MainWindow]:
    settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
    opened = MainWindow(Session(meeting(150, 1_500)), Look(settings), settings)
    opened.show()
    qtbot.waitUntil(lambda: opened.chart.chart is not None, timeout=60_000)
    qtbot.waitUntil(opened.session.engine.idle, timeout=60_000)
    qtbot.wait(400)
    yield opened
    opened.session.open(opened.session.meeting, None)
    opened.close()
    opened.deleteLater()
    QApplication.processEvents()


def test_comparing_four_variants_of_150_people(benchmark, window: MainWindow) -> None:
    dialogs: list[ComparisonDialog] = []

    def compare() -> None:
        dialog = ComparisonDialog(window.session, window.look, window)
        dialog.show()
        while len(dialog.plot.lines) < VARIANTS:  # asleep between events, as the program is
            loop = QEventLoop()
            dialog.comparison.changed.connect(loop.quit)
            loop.exec()
        dialog.plot.grab()
        dialogs.append(dialog)

    def put_away() -> None:
        while dialogs:
            dialogs.pop().close()
        QApplication.processEvents()

    benchmark.pedantic(compare, setup=put_away, rounds=15, warmup_rounds=2)
    put_away()
    assert benchmark.stats.stats.median < BOUND_SECONDS
