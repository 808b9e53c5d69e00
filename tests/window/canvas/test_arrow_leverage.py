"""Arrows as thick as what they move: asked for by key, true after edits, and told in words and by shape."""

from __future__ import annotations

import numpy as np
import pytest
from canvas_hands import on_arrow, settle
from circles import CIRCLES, meeting, person
from msgspec.structs import replace
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible, QColor
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from deliberate.rehearsal.leverage import leverage
from deliberate.scenario import edits
from deliberate.scenario.values import Arrow, Plan, Stage
from deliberate.window.arrow_leverage import NO_RATE, WORKING
from deliberate.window.canvas import overlays
from deliberate.window.canvas.scene import moves_words
from deliberate.window.main_window import MainWindow
from deliberate.window.theme import Look

# After one round Amina's belief is 70 of 100 points 90 and 30 of 100 points 20; ten points more make it 7 lower, and
# the mean of the two 3.5.
ONE_ROUND = meeting(
    (person("Amina", 90.0, (-150.0, 0.0), own=70.0), person("Jun", 20.0, (150.0, 0.0), own=100.0)),
    (Arrow("amina", "jun", 30.0),),
    Plan((Stage(rounds=1),)),
)


def ask(qtbot: QtBot, window: MainWindow) -> None:
    window.canvas.setFocus()
    qtbot.waitUntil(window.canvas.hasFocus)
    QTest.keyClick(window.canvas, Qt.Key.Key_L, Qt.KeyboardModifier.ControlModifier)
    wait(qtbot, window)


def wait(qtbot: QtBot, window: MainWindow) -> None:
    qtbot.waitUntil(lambda: not window.arrow_leverage.working, timeout=30_000)
    settle(qtbot, window.canvas)


def strengths(window: MainWindow) -> np.ndarray:
    return window.canvas.picture.scene.strength


def test_a_key_draws_arrows_by_what_they_move_and_another_press_by_shares(qtbot: QtBot, open_meeting) -> None:
    window = open_meeting(CIRCLES)
    action, legend = window.actions_of_window.moves, window.canvas.picture.legend
    shares = strengths(window).copy()
    ask(qtbot, window)
    moves = np.abs(leverage(CIRCLES).arrows_at_end)
    assert action.isChecked()
    assert strengths(window) == pytest.approx(moves / moves.max())
    assert legend() == [overlays.LISTENED, overlays.MOVES, overlays.UP_OR_DOWN]
    ask(qtbot, window)
    assert not action.isChecked()
    assert np.array_equal(strengths(window), shares)
    assert legend() == [overlays.LISTENED]


def test_an_edit_brings_shares_back_until_the_new_figures_are_there(qtbot: QtBot, open_meeting) -> None:
    window = open_meeting(CIRCLES)
    ask(qtbot, window)
    before = strengths(window).copy()
    window.session.edit("Less firm", lambda scenario: edits.set_firmness(scenario, ["amina"], 0.5, variant=None))
    assert window.canvas.picture.legend()[1] == WORKING
    assert np.array_equal(strengths(window), window.canvas.picture.scene.share)
    wait(qtbot, window)
    moves = np.abs(leverage(window.session.scenario).arrows_at_end)
    assert strengths(window) == pytest.approx(moves / moves.max())
    assert not np.allclose(strengths(window), before)


def test_moving_or_renaming_somebody_leaves_the_figures(qtbot: QtBot, open_meeting) -> None:
    window = open_meeting(CIRCLES)
    ask(qtbot, window)
    before = strengths(window).copy()
    window.session.select(["amina"])
    QTest.keyClick(window.canvas, Qt.Key.Key_Right)
    window.session.edit("Rename", lambda scenario: edits.rename_person(scenario, "amina", "Aminata"))
    assert not window.arrow_leverage.working
    assert np.array_equal(strengths(window), before)


def test_the_figures_follow_codes_and_variants(qtbot: QtBot, open_meeting) -> None:
    firm = replace(CIRCLES.variants[0], name="Firm", people=tuple(
        replace(one, firmness=0.1 * number) for number, one in enumerate(CIRCLES.variants[0].people)
    ))  # fmt: skip
    window = open_meeting(replace(CIRCLES, variants=(*CIRCLES.variants, firm)))
    ask(qtbot, window)
    window.session.show_codes(True)
    wait(qtbot, window)
    assert window.canvas.picture.legend()[1] == overlays.MOVES
    window.session.show_variant("Firm")
    wait(qtbot, window)
    moves = np.abs(leverage(window.session.scenario, "Firm").arrows_at_end)
    assert strengths(window) == pytest.approx(moves / moves.max())


@pytest.mark.parametrize(
    "made",
    [
        lambda: replace(CIRCLES, questions=(replace(CIRCLES.questions[0], hearing_range=30.0),)),
        lambda: meeting(
            CIRCLES.variants[0].people, CIRCLES.variants[0].arrows, Plan((Stage(rounds=2),), afterwards="repeat")
        ),
    ],
    ids=["hearing range", "repeated plan"],
)
def test_where_there_are_no_such_figures_the_legend_says_so(qtbot: QtBot, open_meeting, made) -> None:
    window = open_meeting(made())
    ask(qtbot, window)
    assert window.canvas.picture.legend() == [overlays.LISTENED, NO_RATE]
    assert np.array_equal(strengths(window), window.canvas.picture.scene.share)


def test_a_sentence_says_what_ten_points_more_would_move(qtbot: QtBot, open_meeting) -> None:
    window = open_meeting(ONE_ROUND)
    ask(qtbot, window)
    canvas = window.canvas
    words = (
        "Amina listens to Jun: 30 of 100 points; ten points more would move the mean down by 3.5 at the plan's end"
    )
    with qtbot.waitSignal(canvas.hint_changed) as said:
        QTest.mouseMove(canvas, on_arrow(canvas, "amina", "jun"))
    assert said.args == [words]
    assert QAccessible.queryAccessibleInterface(canvas).child(2).text(QAccessible.Text.Name) == words


def test_an_arrow_that_moves_the_mean_down_has_an_open_head(qtbot: QtBot, open_meeting, look: Look) -> None:
    """Shape tells the direction, not colour: inside the head of the one is paper, of the other ink."""
    up = meeting(
        tuple(replace(one, beliefs={"label": 100.0 - one.beliefs["label"]}) for one in ONE_ROUND.variants[0].people),
        ONE_ROUND.variants[0].arrows,
        ONE_ROUND.variants[0].plan,
    )
    seen = []
    for scenario in (ONE_ROUND, up):
        window = open_meeting(scenario)
        ask(qtbot, window)
        picture = window.canvas.picture
        curve = picture.curves(np.array([0]))
        x, y = curve.at(np.array([1.0]))[0, 0] - [9.0, 0.0]
        seen.append(window.canvas.grab().toImage().pixelColor(round(x), round(y)).name())
    assert seen == [QColor(look.theme.canvas).name(), QColor(look.theme.mark).name()]


@pytest.mark.parametrize(
    ("change", "words"),
    [
        (0.44, "ten points more would move the mean up by 0.4 at the plan's end"),
        (-12.0, "ten points more would move the mean down by 12 at the plan's end"),
        (0.03, "ten points more would move the mean up by under 0.1 at the plan's end"),
        (0.004, "ten points more would leave the mean at the plan's end as it is"),
        (0.0, "ten points more would leave the mean at the plan's end as it is"),
    ],
)
def test_what_ten_points_move_in_words(change: float, words: str) -> None:
    assert moves_words(change, CIRCLES.questions[0]) == words


def test_closing_ends_the_work(qtbot: QtBot, open_meeting) -> None:
    window = open_meeting(CIRCLES)
    window.arrow_leverage.want(True)
    window.close()
    assert not window.arrow_leverage.working
