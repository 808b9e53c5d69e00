from __future__ import annotations

import pytest
from pytestqt.qtbot import QtBot

from deliberate.window.player import Player


@pytest.fixture
def player(qtbot: QtBot) -> Player:
    one = Player()
    one.set_last(4)
    return one


def test_a_step_glides_to_the_next_whole_round_and_then_rests(qtbot: QtBot, player: Player) -> None:
    seen: list[float] = []
    player.moved.connect(seen.append)
    player.step(1)
    qtbot.waitUntil(lambda: player.position == 1.0)
    assert len(seen) > 3
    assert seen == sorted(seen)
    assert not player._timer.isActive()


def test_steps_in_a_row_add_up(qtbot: QtBot, player: Player) -> None:
    player.step(1)
    player.step(1)
    player.step(1)
    qtbot.waitUntil(lambda: player.position == 3.0)
    player.step(-1)
    qtbot.waitUntil(lambda: player.position == 2.0)


def test_steps_stop_at_both_ends(qtbot: QtBot, player: Player) -> None:
    player.step(-1)
    assert player.position == 0.0
    player.seek(4)
    player.step(1)
    qtbot.wait(30)
    assert player.position == 4.0


def test_a_step_from_between_two_rounds_goes_to_the_nearest_on_that_side(qtbot: QtBot, player: Player) -> None:
    player.seek(2.4)
    player.step(-1)
    qtbot.waitUntil(lambda: player.position == 2.0)
    player.seek(2.4)
    player.step(1)
    qtbot.waitUntil(lambda: player.position == 3.0)


def test_playing_ends_at_the_last_round(qtbot: QtBot, player: Player) -> None:
    player.set_speed(20.0)
    told: list[bool] = []
    player.playing_changed.connect(told.append)
    player.play()
    assert player.playing
    qtbot.waitUntil(lambda: not player.playing)
    assert player.position == 4.0
    assert told == [True, False]
    assert not player._timer.isActive()


def test_playing_at_the_end_begins_again(qtbot: QtBot, player: Player) -> None:
    player.seek(4)
    player.play()
    assert player.position == 0.0
    player.pause()
    player.seek(0)


def test_in_a_loop_it_goes_on_from_the_start(qtbot: QtBot, player: Player) -> None:
    player.set_speed(40.0)
    player.set_loop(True)
    player.play()
    seen: list[float] = []
    player.moved.connect(seen.append)
    qtbot.waitUntil(lambda: seen.count(0.0) >= 2)
    assert player.playing
    player.pause()
    player.seek(0)


def test_pausing_arrives_at_the_round_being_approached(qtbot: QtBot, player: Player) -> None:
    player.set_speed(5.0)
    player.play()
    qtbot.waitUntil(lambda: 0 < player.position < 1)
    player.pause()
    qtbot.waitUntil(lambda: not player._timer.isActive())
    assert player.position == 1.0


def test_when_still_nothing_glides(qtbot: QtBot, player: Player) -> None:
    player.still = True
    seen: list[float] = []
    player.moved.connect(seen.append)
    player.step(1)
    assert seen == [1.0]
    player.set_speed(50.0)
    player.play()
    qtbot.waitUntil(lambda: not player.playing)
    assert all(position == int(position) for position in seen)


def test_a_shorter_plan_keeps_the_round_where_it_exists(player: Player) -> None:
    player.seek(3)
    player.set_last(10)
    assert player.position == 3.0
    player.set_last(2)
    assert player.position == 2.0


def test_a_plan_without_rounds_does_not_play(player: Player) -> None:
    player.set_last(0)
    player.play()
    assert not player.playing
