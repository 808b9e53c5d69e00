"""How long one frame of the canvas takes, at 1400 x 900 offscreen: playing, dragging, panning, zooming, opening."""

from __future__ import annotations

import random
from collections.abc import Iterator
from pathlib import Path
from types import SimpleNamespace

import numpy as np
import pytest
from PySide6.QtCore import QPointF, QSettings, Qt
from PySide6.QtGui import QAccessible, QPixmap
from PySide6.QtTest import QTest

from deliberate.scenario.values import Arrow, FrozenDict, Person, Question, Scenario, Variant
from deliberate.window.canvas import Canvas
from deliberate.window.session import Session
from deliberate.window.theme import Look

SIZES = {"40 people": (40, 300), "150 people": (150, 1500), "500 people": (500, 5000)}
PLAY_MS = {40: 5, 150: 10, 500: 12}
MOVING_MS, FIRST_DRAG_MS, OPEN_MS = 16, 33, 1000
KEY_MS, READ_ALL_MS = 33, 1000


def crowd(people: int, arrows: int) -> Scenario:
    """People in loose rows who mostly hear their neighbours."""
    chance = random.Random(1)
    columns = int(np.ceil(np.sqrt(people * 1.5)))
    everybody = tuple(
        Person(
            id=f"p{number}",
            name=f"Person {number}",
            x=number % columns * 150.0 + chance.uniform(-30, 30),
            y=number // columns * 150.0 + chance.uniform(-30, 30),
            own_weight=2.0,
            firmness=0.2 if number % 7 == 0 else 0.0,
            beliefs=FrozenDict(q=chance.uniform(0, 100)),
        )
        for number in range(people)
    )
    pairs: set[tuple[int, int]] = set()
    while len(pairs) < arrows:
        listener = chance.randrange(people)
        near = chance.random() < 0.7
        source = (listener + chance.randrange(1, 12)) % people if near else chance.randrange(people)
        if listener != source:
            pairs.add((listener, source))
    drawn = tuple(Arrow(f"p{one}", f"p{other}", chance.uniform(0.2, 3)) for one, other in sorted(pairs))
    question = Question(id="q", text="Q?", low=0.0, high=100.0, pass_mark=50.0)
    return Scenario("Crowd", (question,), (Variant(name="v", people=everybody, arrows=drawn),))


@pytest.fixture(params=SIZES.values(), ids=SIZES.keys())
def shown(request: pytest.FixtureRequest, qtbot, tmp_path: Path) -> Iterator[SimpleNamespace]:
    people, arrows = request.param
    session = Session(crowd(people, arrows))
    canvas = Canvas(session, Look(QSettings(str(tmp_path / "s.ini"), QSettings.Format.IniFormat)))
    qtbot.addWidget(canvas)
    canvas.resize(1400, 900)
    canvas.show()
    page = QPixmap(1400, 900)
    # Two made-up rounds, so that every frame shows other beliefs and no rehearsal has to run.
    rounds = np.random.default_rng(1).uniform(0, 100, (2, people))
    session.beliefs_at = lambda position: rounds[0] + (rounds[1] - rounds[0]) * position
    QTest.qWait(300)
    canvas.render(page)
    yield SimpleNamespace(canvas=canvas, session=session, page=page, people=people)
    session.close()


def within(benchmark, limit_ms: float) -> None:
    assert benchmark.stats.stats.median * 1000 < limit_ms


def test_a_frame_of_playback(benchmark, shown) -> None:
    frames = iter(np.tile(np.linspace(0.01, 0.99, 50), 100))

    def frame() -> None:
        shown.session.player.position = float(next(frames))
        shown.canvas.render(shown.page)

    benchmark.pedantic(frame, rounds=60, warmup_rounds=3)
    within(benchmark, PLAY_MS[shown.people])


def test_dragging_one_person(benchmark, shown) -> None:
    canvas, picture = shown.canvas, shown.canvas.picture
    moving = np.zeros(shown.people, dtype=bool)
    moving[shown.people // 2] = True
    places = picture.scene.places.copy()

    def frame() -> None:
        places[moving] += 2.0
        picture.move(moving, places)
        canvas.stir()
        canvas.render(shown.page)

    benchmark.pedantic(frame, rounds=40, warmup_rounds=2)
    within(benchmark, MOVING_MS)


def test_the_first_frame_of_a_drag(benchmark, shown) -> None:
    canvas, picture = shown.canvas, shown.canvas.picture
    moving = np.zeros(shown.people, dtype=bool)
    moving[shown.people // 2] = True

    def at_rest() -> None:
        picture.move(None)
        canvas._rest.stop()
        canvas.render(shown.page)

    def frame() -> None:
        picture.move(moving, picture.scene.places + 3.0)
        canvas.stir()
        canvas.render(shown.page)

    benchmark.pedantic(frame, setup=at_rest, rounds=15)
    within(benchmark, FIRST_DRAG_MS)


@pytest.mark.parametrize("by", ["pan", "zoom"])
def test_panning_and_zooming(benchmark, shown, by: str) -> None:
    canvas = shown.canvas
    middle = QPointF(700, 450)
    steps = iter([1.02, 1 / 1.02] * 500)

    def frame() -> None:
        if by == "pan":
            canvas.pan(3, 2)
        else:
            canvas.zoom_around(next(steps), middle)
        canvas.render(shown.page)

    benchmark.pedantic(frame, rounds=40, warmup_rounds=2)
    within(benchmark, MOVING_MS)


@pytest.mark.parametrize("key", [Qt.Key.Key_Tab, Qt.Key.Key_W], ids=["next person", "next arrow"])
def test_one_step_by_key(benchmark, shown, key: Qt.Key) -> None:
    canvas = shown.canvas
    canvas.setFocus()
    QTest.keyClick(canvas, Qt.Key.Key_Tab)

    def step() -> None:
        QTest.keyClick(canvas, key)
        canvas.render(shown.page)

    benchmark.pedantic(step, rounds=20, warmup_rounds=2)
    within(benchmark, KEY_MS)


def test_a_screen_reader_walks_all(benchmark, shown) -> None:
    """Name, description, place and number of everybody and every arrow."""
    read = QAccessible.queryAccessibleInterface(shown.canvas)

    def walk() -> None:
        for number in range(read.childCount()):
            item = read.child(number)
            assert item.text(QAccessible.Text.Name)
            assert item.text(QAccessible.Text.Description)
            assert read.indexOfChild(item) == number
            item.rect()

    benchmark.pedantic(walk, rounds=3)
    within(benchmark, READ_ALL_MS)


def test_opening(benchmark, qtbot, tmp_path: Path) -> None:
    look = Look(QSettings(str(tmp_path / "s.ini"), QSettings.Format.IniFormat))
    session = Session(crowd(500, 5000))
    page = QPixmap(1400, 900)

    def open_it() -> None:
        canvas = Canvas(session, look)
        qtbot.addWidget(canvas)
        canvas.resize(1400, 900)
        canvas.render(page)

    benchmark.pedantic(open_it, rounds=5)
    within(benchmark, OPEN_MS)
    session.close()
