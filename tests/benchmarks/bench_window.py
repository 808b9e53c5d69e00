"""The whole window: from one edit to everything refreshed, a frame of playback, opening, start-up.

Offscreen raster, 1400 x 900. Bounds of the design: an edit 30 ms at 40 people and 100 ms at 150; a playback frame
8 ms at 40 people and 300 arrows, 16 ms at 150 and 1,500 and at 500 and 5,000; opening 500 people 1.5 s; start to a
painted window twice an empty PySide6 window with numpy.
"""

from __future__ import annotations

import os
import statistics
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path

import numpy as np
import pytest
from PySide6.QtCore import QSettings
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from deliberate.files.resources import demo_scenarios
from deliberate.scenario import edits
from deliberate.scenario.values import Arrow, FrozenDict, Person, Plan, Question, Scenario, Stage, Variant
from deliberate.window.main_window import MainWindow
from deliberate.window.session import Session
from deliberate.window.theme import Look

SIZES = ((40, 300), (150, 1_500), (500, 5_000))


def crowd(people: int, arrows: int) -> Scenario:
    """An invented meeting of any size: everybody hears the next in line and some others."""
    draw = np.random.default_rng(7)
    starts = draw.uniform(0, 100, people).round(1).tolist()
    persons = tuple(
        Person(id=f"p{i}", name=f"Person {i}", own_weight=40.0, beliefs=FrozenDict(q=starts[i]))
        for i in range(people)
    )
    pairs = {(i, (i + 1) % people) for i in range(people)}
    while len(pairs) < arrows:
        listener, source = draw.integers(0, people, 2).tolist()
        if listener != source:
            pairs.add((listener, source))
    drawn = tuple(Arrow(f"p{i}", f"p{j}", 5.0) for i, j in sorted(pairs))
    question = Question(id="q", text="Shall we?", low=0.0, high=100.0, pass_mark=50.0)
    plan = Plan((Stage(rounds=12),))
    return Scenario(title="Crowd", questions=(question,), variants=(Variant("v", persons, "", drawn, plan),))


@pytest.fixture
def open_window(qtbot: QtBot, tmp_path: Path) -> Iterator[Callable[[Scenario], MainWindow]]:
    opened: list[MainWindow] = []

    def open_one(scenario: Scenario) -> MainWindow:
        settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
        window = MainWindow(Session(scenario), Look(settings), settings)
        opened.append(window)
        window.resize(1400, 900)
        window.show()
        qtbot.waitUntil(lambda: window.chart.chart is not None, timeout=60_000)
        qtbot.waitUntil(window.session.engine.idle, timeout=60_000)
        qtbot.wait(400)
        return window

    yield open_one
    for window in opened:
        window.session.open(window.session.scenario, None)
        window.close()
        window.deleteLater()
    QApplication.processEvents()


def paint(window: MainWindow) -> None:
    """Paint whatever asks for it, now."""
    QApplication.sendPostedEvents()
    QApplication.processEvents()


@pytest.mark.parametrize(("people", "arrows"), SIZES[:2])
def test_one_edit(benchmark, open_window, people: int, arrows: int) -> None:
    window = open_window(crowd(people, arrows))
    session = window.session
    values = iter(range(10_000))

    def one_edit() -> None:
        belief = float(next(values) % 100)
        session.edit("Start", lambda s: edits.set_belief(s, "p3", "q", belief, variant="v"))
        paint(window)

    benchmark.pedantic(one_edit, rounds=40, warmup_rounds=3)


@pytest.mark.parametrize(("people", "arrows"), SIZES)
def test_playback_frame(benchmark, open_window, people: int, arrows: int) -> None:
    window = open_window(crowd(people, arrows))
    positions = iter(np.arange(0, 12, 0.004).tolist() * 4)

    def frame() -> None:
        window.session.player.seek(next(positions))
        paint(window)

    benchmark.pedantic(frame, rounds=200, warmup_rounds=10)


def test_opening_500_people(benchmark, open_window) -> None:
    window = open_window(crowd(3, 3))
    scenario = crowd(*SIZES[2])

    def open_it() -> None:
        window.session.open(scenario, None)
        paint(window)

    benchmark.pedantic(open_it, rounds=5)


EMPTY = """
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication, QMainWindow
import numpy, os
class Empty(QMainWindow):
    def paintEvent(self, event):
        super().paintEvent(event)
        os._exit(0)
app = QApplication([])
window = Empty()
window.show()
app.exec()
"""
OURS = """
import os, sys
from deliberate.window.canvas import Canvas
paint = Canvas.paintEvent
def paint_and_leave(self, event):
    paint(self, event)
    os._exit(0)
Canvas.paintEvent = paint_and_leave
from deliberate.window.app import run
run(sys.argv[1])
"""


def test_start(benchmark, tmp_path: Path) -> None:
    environment = {
        **os.environ,
        "QT_QPA_PLATFORM": "offscreen",
        "XDG_CONFIG_HOME": str(tmp_path),
        "HOME": str(tmp_path),
    }
    environment.pop("PYTHONDONTWRITEBYTECODE", None)  # an installed program has its bytecode
    demo = str(demo_scenarios()[0])

    def seconds(code: str) -> float:
        begin = time.perf_counter()
        subprocess.run([sys.executable, "-c", code, demo], env=environment, check=True, capture_output=True)
        return time.perf_counter() - begin

    seconds(OURS)
    empty = statistics.median(seconds(EMPTY) for _ in range(7))
    benchmark.extra_info["empty window with numpy, s"] = round(empty, 3)
    benchmark.pedantic(lambda: seconds(OURS), rounds=7)
    benchmark.extra_info["times an empty window"] = round(benchmark.stats.stats.median / empty, 2)
