from __future__ import annotations

from collections.abc import Callable
from itertools import combinations

import pytest
from circles import CIRCLES, meeting
from PySide6.QtCore import QEvent, Qt
from PySide6.QtWidgets import QApplication, QComboBox, QPushButton
from pytestqt.qtbot import QtBot

from deliberate.scenario.values import Plan, Stage
from deliberate.window.roundbar import RoundBar
from deliberate.window.session import Session
from deliberate.window.theme import Look

LEFT = Qt.MouseButton.LeftButton


@pytest.fixture
def bar(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> RoundBar:
    plan = Plan((Stage("Go-round", 2), Stage("Plenary", 6)))
    session = open_session(meeting(CIRCLES.variants[0].people, CIRCLES.variants[0].arrows, plan), rehearsed=False)
    one = RoundBar(session, look)
    qtbot.addWidget(one)
    one.resize(1250, 130)
    one.show()
    qtbot.waitExposed(one)
    one.ruler.choose(0)
    return one


def stages(bar: RoundBar) -> tuple[Stage, ...]:
    return bar._session.variant.plan.stages


def names(bar: RoundBar) -> list[str]:
    return [stage.name for stage in stages(bar)]


def choose(qtbot: QtBot, combo: object, key: str) -> None:
    """Choose an entry the way the keyboard does."""
    combo.setFocus()
    wanted = combo.findData(key)
    step = Qt.Key.Key_Down if wanted > combo.currentIndex() else Qt.Key.Key_Up
    while combo.currentIndex() != wanted:
        qtbot.keyClick(combo, step)


def test_a_stage_is_renamed_by_typing(qtbot: QtBot, bar: RoundBar) -> None:
    bar.strip.name.selectAll()
    qtbot.keyClicks(bar.strip.name, "Warm-up")
    assert names(bar)[0] == "Go-round", "nothing happens while typing"
    qtbot.keyClick(bar.strip.name, Qt.Key.Key_Return)
    assert names(bar) == ["Warm-up", "Plenary"]
    assert bar._session.undo_step == "Rename stage “Go-round”"


def test_an_empty_name_changes_nothing(qtbot: QtBot, bar: RoundBar) -> None:
    bar.strip.name.selectAll()
    qtbot.keyClick(bar.strip.name, Qt.Key.Key_Delete)
    qtbot.keyClick(bar.strip.name, Qt.Key.Key_Return)
    assert names(bar)[0] == "Go-round"
    assert bar.strip.name.text() == "Go-round"


def test_rounds_are_typed(qtbot: QtBot, bar: RoundBar) -> None:
    bar.strip.rounds.selectAll()
    qtbot.keyClicks(bar.strip.rounds, "9")
    qtbot.keyClick(bar.strip.rounds, Qt.Key.Key_Return)
    assert stages(bar)[0].rounds == 9
    assert bar._session.player.last == 15


def test_the_arrow_keys_change_rounds_in_one_step(qtbot: QtBot, bar: RoundBar) -> None:
    for _ in range(3):
        qtbot.keyClick(bar.strip.rounds, Qt.Key.Key_Up)
    assert stages(bar)[0].rounds == 5
    bar._session.undo()
    assert stages(bar)[0].rounds == 2
    assert bar.strip.rounds.value() == 2


@pytest.mark.parametrize(
    ("setting", "button"),
    [("tables", "Seat people …"), ("panel", "Choose speakers …"), ("pairs", "Choose pairs …"), ("silence", "")],
)
def test_the_setting_is_chosen_and_its_people_can_be(qtbot: QtBot, bar: RoundBar, setting: str, button: str) -> None:
    choose(qtbot, bar.strip.setting, setting)
    assert stages(bar)[0].setting == setting
    assert bar.strip.choose.isVisible() == bool(button)
    if button:
        assert bar.strip.choose.text() == button
        with qtbot.waitSignal(bar.choose_on_canvas) as asked:
            qtbot.mouseClick(bar.strip.choose, LEFT)
        assert asked.args == [0]
    assert bar.strip.unheard.isVisible()


def test_what_is_unheard_and_what_follows_are_chosen(qtbot: QtBot, bar: RoundBar) -> None:
    choose(qtbot, bar.strip.setting, "silence")
    choose(qtbot, bar.strip.unheard, "rescale")
    assert stages(bar)[0].unheard == "rescale"
    choose(qtbot, bar.strip.after, "repeat")
    assert bar._session.variant.plan.afterwards == "repeat"


def test_stages_are_added_moved_and_removed(qtbot: QtBot, bar: RoundBar) -> None:
    qtbot.mouseClick(bar.strip.add, LEFT)
    assert names(bar) == ["Go-round", "Stage 3", "Plenary"]
    assert bar.ruler.chosen == 1
    assert bar.strip.name.text() == "Stage 3"
    qtbot.mouseClick(bar.strip.later, LEFT)
    assert names(bar) == ["Go-round", "Plenary", "Stage 3"]
    assert bar.ruler.chosen == 2
    qtbot.mouseClick(bar.strip.earlier, LEFT)
    qtbot.mouseClick(bar.strip.earlier, LEFT)
    assert names(bar) == ["Stage 3", "Go-round", "Plenary"]
    assert not bar.strip.earlier.isEnabled()
    qtbot.mouseClick(bar.strip.remove, LEFT)
    assert names(bar) == ["Go-round", "Plenary"]
    qtbot.mouseClick(bar.strip.remove, LEFT)
    assert names(bar) == ["Plenary"]
    assert not bar.strip.remove.isEnabled()
    for _ in range(6):
        bar._session.undo()
    assert names(bar) == ["Go-round", "Plenary"]


def test_escape_and_done_close_the_row(qtbot: QtBot, bar: RoundBar) -> None:
    qtbot.keyClick(bar.strip.name, Qt.Key.Key_Escape)
    assert not bar.strip.isVisible()
    qtbot.mouseClick(bar.plan, LEFT)
    assert bar.strip.isVisible()
    qtbot.mouseClick(bar.strip.done, LEFT)
    assert not bar.strip.isVisible()
    assert not bar.plan.isChecked()


def test_the_row_fits_a_small_projector(bar: RoundBar) -> None:
    bar.ruler.choose(1)
    bar._session.edit("x", lambda s: s)
    assert bar.minimumSizeHint().width() <= 1024


def test_undoing_a_stage_that_is_being_edited_closes_the_row(qtbot: QtBot, bar: RoundBar) -> None:
    qtbot.mouseClick(bar.strip.add, LEFT)
    qtbot.mouseClick(bar.strip.later, LEFT)
    bar._session.undo()
    bar._session.undo()
    assert names(bar) == ["Go-round", "Plenary"]
    assert bar.ruler.chosen < 2


@pytest.mark.parametrize("width", [1250, 1024, 820])
@pytest.mark.parametrize("setting", ["plenary", "tables", "panel", "pairs", "silence"])
def test_no_word_is_cut_however_narrow_the_window(qtbot: QtBot, bar: RoundBar, width: int, setting: str) -> None:
    """In two rows where one has no room."""
    choose(qtbot, bar.strip.setting, setting)
    bar.resize(width, 160)
    qtbot.waitUntil(lambda: bar.strip.width() == width)
    QApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest)  # one row has become two
    parts = [part for part in bar.strip.children() if isinstance(part, QComboBox | QPushButton) and part.isVisible()]
    assert bar.strip.done in parts
    assert [part.accessibleName() for part in parts if part.width() < part.sizeHint().width()] == []
    assert all(bar.strip.rect().contains(part.geometry()) for part in parts)
    overlaps = [(a, b) for a, b in combinations(parts, 2) if a.geometry().intersects(b.geometry())]
    assert overlaps == []
