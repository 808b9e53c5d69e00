from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from circles import CIRCLES, SWAP
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QColor, QGuiApplication, QImage
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from deliberate.scenario import edits
from deliberate.window.chart import ChartPanel
from deliberate.window.session import Session
from deliberate.window.theme import Look

LEFT = Qt.MouseButton.LeftButton


@pytest.fixture
def panel(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> ChartPanel:
    return shown(qtbot, look, open_session(CIRCLES))


def shown(qtbot: QtBot, look: Look, session: Session) -> ChartPanel:
    one = ChartPanel(session, look)
    qtbot.addWidget(one)
    one.resize(420, 420)
    one.load()
    one.refresh()
    one.show()
    qtbot.waitExposed(one)
    qtbot.wait(30)
    return one


def place(panel: ChartPanel, round_: float, belief: float) -> QPoint:
    """The pixel of the chart's viewport at a round and a belief."""
    scene = panel.chart.beliefs.getViewBox().mapViewToScene(QPointF(round_, belief))
    return panel.chart.mapFromScene(scene)


def viewport(panel: ChartPanel) -> QWidget:
    return panel.chart.viewport()


def test_nothing_is_drawn_before_the_library_is_there(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session]
) -> None:
    panel = ChartPanel(open_session(CIRCLES), look)
    qtbot.addWidget(panel)
    assert panel.chart is None
    panel.load()
    chart = panel.chart
    panel.load()
    assert panel.chart is chart


def test_every_curve_starts_where_its_person_does(panel: ChartPanel, look: Look) -> None:
    picture = viewport(panel).grab().toImage()
    ground = QColor(look.theme.panel)
    for belief in (90, 80, 70, 30, 20, 10):
        at = place(panel, 0.0, belief)
        near = {picture.pixelColor(at.x() + dx, at.y() + dy).name() for dx in (-1, 0, 1, 2) for dy in (-1, 0, 1)}
        assert near != {ground.name()}, belief


def test_the_pointer_on_a_curve_is_told_name_round_and_value(qtbot: QtBot, panel: ChartPanel) -> None:
    qtbot.mouseMove(viewport(panel), place(panel, 0, 89.5))
    qtbot.waitUntil(lambda: panel.chart.hinted == "Amina, round 0: 90")
    qtbot.mouseMove(viewport(panel), place(panel, 3, 50))
    qtbot.waitUntil(lambda: panel.chart.hinted == "")


def test_a_click_on_a_curve_selects_its_person(qtbot: QtBot, panel: ChartPanel) -> None:
    session = panel._session
    qtbot.mouseClick(viewport(panel), LEFT, pos=place(panel, 0, 10))
    assert session.selection.people == {"farah"}
    qtbot.mouseClick(viewport(panel), LEFT, Qt.KeyboardModifier.ControlModifier, pos=place(panel, 0, 90))
    assert session.selection.people == {"farah", "amina"}
    qtbot.mouseClick(viewport(panel), LEFT, pos=place(panel, 3, 50))
    assert session.selection.people == {"farah", "amina"}, "a click beside all curves changes nothing"


def test_the_cursor_follows_the_round_and_can_be_dragged(qtbot: QtBot, panel: ChartPanel) -> None:
    player = panel._session.player
    player.seek(2)
    assert all(cursor.value() == 2 for cursor in panel.chart.cursors)
    start, end = place(panel, 2, 50), place(panel, 4.3, 50)
    view = viewport(panel)
    qtbot.mouseMove(view, start)
    qtbot.wait(30)
    qtbot.mousePress(view, LEFT, pos=start)
    for step in range(1, 11):
        qtbot.mouseMove(view, start + (end - start) * step / 10)
        qtbot.wait(20)
    qtbot.mouseRelease(view, LEFT, pos=end)
    qtbot.waitUntil(lambda: player.position == 4.0)


def test_keys_step(qtbot: QtBot, panel: ChartPanel) -> None:
    player = panel._session.player
    player.still = True
    panel.chart.setFocus()
    qtbot.keyClick(panel.chart, Qt.Key.Key_Right)
    qtbot.keyClick(panel.chart, Qt.Key.Key_Right)
    qtbot.keyClick(panel.chart, Qt.Key.Key_Left)
    assert player.position == 1.0


def test_the_wheel_zooms_and_show_all_goes_back(qtbot: QtBot, panel: ChartPanel) -> None:
    box = panel.chart.beliefs.getViewBox()
    whole = box.viewRange()
    assert not panel.whole.isVisible()
    position = QPointF(viewport(panel).mapTo(panel, place(panel, 3, 50)))
    QTest.wheelEvent(panel.windowHandle(), position, QPoint(0, 240))
    qtbot.waitUntil(panel.whole.isVisible)
    assert box.viewRange() != whole
    qtbot.mouseClick(panel.whole, LEFT)
    assert box.viewRange()[0] == pytest.approx(whole[0])
    assert not panel.whole.isVisible()


def test_the_line_below_tells_the_ballot(panel: ChartPanel) -> None:
    assert panel.ballot.text() == "3 for, 3 against: does not pass at any round"
    session = panel._session
    session.edit("No vote", lambda s: edits.change_question(s, "label", pass_mark=None))
    assert not panel.ballot.isVisible()
    assert not panel.chart.ballot.isVisible()
    session.undo()
    assert panel.chart.ballot.isVisible()


def test_a_swing_is_told_to_those_who_cannot_see_it(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session]
) -> None:
    panel = shown(qtbot, look, open_session(SWAP))
    assert "keeps swinging between 20 and 80" in panel.chart.accessibleDescription()


def test_figures_and_picture_go_to_the_clipboard(panel: ChartPanel) -> None:
    panel.copy_figures()
    assert QGuiApplication.clipboard().text().startswith("round\tAmina")
    panel.copy_picture()
    assert not QGuiApplication.clipboard().image().isNull()


def test_figures_and_picture_are_saved(panel: ChartPanel, tmp_path: Path) -> None:
    panel.save_figures(tmp_path / "talk.csv")
    assert (tmp_path / "talk.csv").read_bytes().startswith("\ufeffround,Amina".encode())
    panel.save_picture(tmp_path / "talk.png")
    picture = QImage(str(tmp_path / "talk.png"))
    assert picture.width() == 2 * panel.chart.width()


def test_a_folder_that_is_not_there_is_said(qtbot: QtBot, panel: ChartPanel, tmp_path: Path) -> None:
    for save, name in ((panel.save_figures, "talk.csv"), (panel.save_picture, "talk.png")):
        with qtbot.waitSignal(panel._session.refused) as told:
            save(tmp_path / "nowhere" / name)
        assert name in told.args[0]


def test_the_dark_look_is_worn_at_once(qtbot: QtBot, panel: ChartPanel, look: Look) -> None:
    look.choose("dark")
    qtbot.wait(20)
    corner = viewport(panel).grab().toImage().pixelColor(2, 2)
    assert corner.name() == look.theme.panel


def test_playing_only_moves_the_cursor(panel: ChartPanel) -> None:
    """The curves' pixmap is painted once, however far the cursor goes."""
    kept = panel.chart._curves._kept
    assert kept is not None
    for step in range(10):
        panel._session.player.seek(step / 10)
        viewport(panel).grab()
    assert panel.chart._curves._kept is kept
