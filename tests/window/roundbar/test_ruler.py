from __future__ import annotations

from collections.abc import Callable

import pytest
from circles import CIRCLES, meeting
from msgspec.structs import replace
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from deliberate.scenario.values import Plan, Poll, Scenario, Stage
from deliberate.window.roundbar import RoundBar
from deliberate.window.roundbar.ruler import Ruler, spans
from deliberate.window.rounds_ruler import tick_step
from deliberate.window.session import Session
from deliberate.window.theme import Look

LEFT = Qt.MouseButton.LeftButton
PLAN = Plan((Stage("Go-round", 2), Stage("Tables", 4, "tables", tables=(("amina", "davor"),)), Stage("Plenary", 6)))
STAGED = meeting(CIRCLES.variants[0].people, CIRCLES.variants[0].arrows, PLAN)


@pytest.fixture
def bar(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> RoundBar:
    session = open_session(STAGED, rehearsed=False)
    one = RoundBar(session, look)
    qtbot.addWidget(one)
    one.resize(1100, 120)
    one.show()
    qtbot.waitExposed(one)
    return one


def at(ruler: Ruler, position: float, row: str = "stages") -> QPoint:
    """The pixel of a round, on the row of the stages or among the ticks."""
    track = ruler._track()
    y = track.center().y() if row == "stages" else track.bottom() + 6
    return QPointF(ruler._x(position), y).toPoint()


def session_of(bar: RoundBar) -> Session:
    return bar._session


def test_spans_follow_each_other() -> None:
    assert [(span.start, span.end) for span in spans(PLAN)] == [(0, 2), (2, 6), (6, 12)]


def test_ticks_never_touch() -> None:
    for rounds in (1, 7, 12, 40, 365, 10_000, 2_000_000):
        step = tick_step(rounds, 700, 40)
        assert 700 * step / rounds >= 40 or step == 500_000


def test_a_click_among_the_ticks_goes_to_the_nearest_round(bar: RoundBar) -> None:
    QTest.mouseClick(bar.ruler, LEFT, pos=at(bar.ruler, 7.2, "ticks"))
    assert session_of(bar).player.position == 7.0
    assert bar.now.text() == "Round 7 of 12"
    assert bar.stage.text() == "Plenary"
    assert bar.ruler.value() == 7


def test_dragging_scrubs_and_settles_on_a_round(qtbot: QtBot, bar: RoundBar) -> None:
    player, ruler = session_of(bar).player, bar.ruler
    seen: list[float] = []
    player.moved.connect(seen.append)
    qtbot.mousePress(ruler, LEFT, pos=at(ruler, 1, "ticks"))
    for position in (2.5, 4.5, 6.4):
        qtbot.mouseMove(ruler, at(ruler, position, "ticks"))
    qtbot.mouseRelease(ruler, LEFT, pos=at(ruler, 6.4, "ticks"))
    assert any(position != int(position) for position in seen)
    assert player.position == 6.0


def test_a_click_on_a_stage_opens_it_and_another_closes_it(bar: RoundBar) -> None:
    QTest.mouseClick(bar.ruler, LEFT, pos=at(bar.ruler, 3.5))
    assert bar.ruler.chosen == 1
    assert bar.strip.isVisible()
    assert bar.strip.name.text() == "Tables"
    assert bar.strip.choose.text() == "Seat people …"
    QTest.mouseClick(bar.ruler, LEFT, pos=at(bar.ruler, 3.5))
    assert bar.ruler.chosen == -1
    assert not bar.strip.isVisible()


def test_dragging_the_end_of_a_stage_lengthens_it_in_one_step(qtbot: QtBot, bar: RoundBar) -> None:
    session, ruler = session_of(bar), bar.ruler
    ends = at(ruler, 6)
    qtbot.mousePress(ruler, LEFT, pos=ends)
    for position in (7.1, 8.3, 9.0):
        qtbot.mouseMove(ruler, at(ruler, position))
        assert session.variant.plan == PLAN, "nothing changes before the release"
    qtbot.mouseRelease(ruler, LEFT, pos=at(ruler, 9.0))
    assert [stage.rounds for stage in session.variant.plan.stages] == [2, 7, 6]
    assert session.undo_step == "Change the rounds of Tables"
    assert session.player.last == 15
    session.undo()
    assert session.variant.plan == PLAN
    assert session.player.last == 12


def test_the_keyboard_moves_the_round(qtbot: QtBot, bar: RoundBar) -> None:
    player = session_of(bar).player
    bar.ruler.setFocus()
    qtbot.keyClick(bar.ruler, Qt.Key.Key_Right)
    assert player.position == 1.0
    qtbot.keyClick(bar.ruler, Qt.Key.Key_End)
    assert player.position == 12.0
    qtbot.keyClick(bar.ruler, Qt.Key.Key_Left)
    assert player.position == 11.0
    qtbot.keyClick(bar.ruler, Qt.Key.Key_Home)
    assert player.position == 0.0


def test_space_plays_and_return_opens_the_present_stage(qtbot: QtBot, bar: RoundBar) -> None:
    player = session_of(bar).player
    bar.ruler.setFocus()
    qtbot.keyClick(bar.ruler, Qt.Key.Key_Space)
    assert player.playing
    assert bar.play.isChecked()
    qtbot.keyClick(bar.ruler, Qt.Key.Key_Space)
    assert not player.playing
    player.seek(3)
    qtbot.keyClick(bar.ruler, Qt.Key.Key_Return)
    assert bar.ruler.chosen == 1


def test_the_wheel_steps(qtbot: QtBot, bar: RoundBar) -> None:
    player = session_of(bar).player
    session_of(bar).player.still = True
    position = QPointF(at(bar.ruler, 5))
    QTest.wheelEvent(bar.windowHandle(), bar.ruler.mapTo(bar, position), QPoint(0, -120))
    qtbot.waitUntil(lambda: player.position == 1.0)


def test_buttons_play_step_and_go_back(qtbot: QtBot, bar: RoundBar) -> None:
    player = session_of(bar).player
    player.still = True
    qtbot.mouseClick(bar.on, LEFT)
    qtbot.mouseClick(bar.on, LEFT)
    qtbot.mouseClick(bar.back, LEFT)
    assert player.position == 1.0
    qtbot.mouseClick(bar.start, LEFT)
    assert player.position == 0.0
    qtbot.mouseClick(bar.loop, LEFT)
    assert player.loop
    qtbot.mouseClick(bar.play, LEFT)
    assert player.playing
    qtbot.mouseClick(bar.play, LEFT)
    assert not player.playing
    player.seek(0)


def test_speed_is_chosen_in_seconds_a_round(qtbot: QtBot, bar: RoundBar) -> None:
    bar.speed.setFocus()
    qtbot.keyClick(bar.speed, Qt.Key.Key_Down)
    assert session_of(bar).player.speed == 2.0
    assert bar.speed.currentText() == "0.5 s a round"


def test_names_that_look_like_markup_are_shown_as_they_are(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session]
) -> None:
    name = '<img src="x"> & <b>bold</b>'
    staged: Scenario = meeting(CIRCLES.variants[0].people, (), Plan((Stage(name, 3),)))
    bar = RoundBar(open_session(staged, rehearsed=False), look)
    qtbot.addWidget(bar)
    assert bar.stage.textFormat() == Qt.TextFormat.PlainText
    assert "&lt;img" in bar.ruler._hint(0)
    assert "<img" not in bar.ruler._hint(0)


def test_straw_polls_are_marked(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> None:
    polled = replace(STAGED, polls=(Poll("label", 6, {"amina": 50.0}),))
    pictures = []
    for scenario in (STAGED, polled):
        bar = RoundBar(open_session(scenario, rehearsed=False), look)
        qtbot.addWidget(bar)
        bar.resize(1100, 120)
        bar.show()
        pictures.append(bar.grab().toImage())
    assert pictures[0] != pictures[1]
