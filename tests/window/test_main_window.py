from __future__ import annotations

import gc
from collections.abc import Callable, Iterator

import pytest
from circles import AS_IT_STANDS, CIRCLES
from msgspec.structs import replace
from PySide6.QtCore import QPoint, QSettings, Qt, QTimer
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel, QMenu, QMenuBar
from pytestqt.qtbot import QtBot
from shiboken6 import isValid

from deliberate.scenario import edits
from deliberate.window.main_window import CAUTION, MainWindow
from deliberate.window.seating import SeatingDialog
from deliberate.window.session import Session
from deliberate.window.theme import DARK, Look

TWO = replace(CIRCLES, variants=(CIRCLES.variants[0], replace(CIRCLES.variants[0], name="Other")))


@pytest.fixture
def open_window(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session], tmp_path
) -> Iterator[Callable[..., MainWindow]]:
    opened: list[MainWindow] = []

    def open_one(scenario=TWO) -> MainWindow:
        settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
        window = MainWindow(open_session(scenario), look, settings)
        opened.append(window)
        window.resize(1280, 800)
        window.show()
        qtbot.waitExposed(window)
        qtbot.waitUntil(lambda: window.chart.chart is not None, timeout=20_000)
        qtbot.waitUntil(window.session.engine.idle, timeout=20_000)
        return window

    yield open_one
    for window in opened:
        window.session.open(window.session.scenario, None)  # nothing to ask about when it closes
        window.close()
        window.deleteLater()
    QApplication.processEvents()


def actions(menu: QMenu | QMenuBar) -> Iterator[tuple[str, object]]:
    for action in menu.actions():
        if action.menu() is not None:
            yield from actions(action.menu())
        elif action.text():
            yield action.text().replace("&", ""), action


def action(window: MainWindow, text: str) -> object:
    return next(one for name, one in actions(window.menuBar()) if name.startswith(text))


def test_it_says_what_it_is(open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    assert window.windowTitle().endswith("– Deliberate")
    assert CAUTION in [label.text() for label in window.statusBar().findChildren(QLabel)]
    assert window.vote.text() == "Round 0, by the sketch: 3 for, 3 against: does not pass"
    assert window.top_bar.title.text() == "Label"


def test_the_vote_follows_the_round(open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    window.session.player.seek(4)
    assert window.vote.text().startswith("Round 4, by the sketch: ")


def test_undo_and_redo_name_the_step(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    session = window.session
    session.edit("Rename Amina", lambda s: edits.rename_person(s, "amina", "Amina & Co"))
    assert action(window, "Undo").text() == "Undo: Rename Amina"
    assert window.isWindowModified()
    assert window.top_bar.title.text() == "Label · edited"
    action(window, "Undo").trigger()
    assert session.scenario is TWO
    assert not window.isWindowModified()
    assert action(window, "Redo").text() == "Redo: Rename Amina"
    action(window, "Redo").trigger()
    assert session.variant.people[0].name == "Amina & Co"


def test_space_on_the_picture_plays_and_pauses(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    window.activateWindow()
    window.canvas.setFocus()
    qtbot.keyClick(window.canvas, Qt.Key.Key_Space)
    assert window.session.player.playing
    assert action(window, "Pause")
    qtbot.keyClick(window.canvas, Qt.Key.Key_Space)
    assert not window.session.player.playing


def test_page_keys_step_and_end_goes_to_the_end(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    player = window.session.player
    player.still = True
    window.canvas.setFocus()
    qtbot.keyClick(window.canvas, Qt.Key.Key_PageDown)
    assert player.position == 1.0
    qtbot.keyClick(window.canvas, Qt.Key.Key_End)
    assert player.position == 6.0
    qtbot.keyClick(window.canvas, Qt.Key.Key_PageUp)
    assert player.position == 5.0
    qtbot.keyClick(window.canvas, Qt.Key.Key_Home)
    assert player.position == 0.0


def test_editing_while_it_plays_keeps_the_round(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    player = window.session.player
    player.set_speed(8.0)
    player.play()
    qtbot.waitUntil(lambda: player.position > 1.2)
    before = player.position
    window.session.edit("Start lower", lambda s: edits.set_belief(s, "amina", "label", 10.0, variant=AS_IT_STANDS))
    assert player.playing
    assert before <= player.position < before + 1
    assert window.session.rehearsal.rounds[0][0] == 10.0
    player.pause()
    player.seek(0)


def test_variants_are_switched_added_moved_removed(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    session, strip = window.session, window.variant_strip
    where = strip.tabs.tabRect(1).center()
    qtbot.mouseClick(strip.tabs, Qt.MouseButton.LeftButton, pos=where)
    assert session.variant.name == "Other"
    assert session.undo_step is None, "looking at another variant is not an edit"
    qtbot.mouseClick(strip.plus, Qt.MouseButton.LeftButton)
    assert len(session.scenario.variants) == 3
    assert session.variant is session.scenario.variants[2]
    strip.move(-1)
    assert session.variant is session.scenario.variants[1]
    strip.remove()
    assert [variant.name for variant in session.scenario.variants] == [AS_IT_STANDS, "Other"]
    window.turn_to_variant(1)
    window.turn_to_variant(1)
    assert strip.tabs.count() == 2


def test_a_refused_edit_is_said_and_changes_nothing(open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    done = window.session.edit("x", lambda s: edits.set_belief(s, "amina", "label", 500.0, variant=AS_IT_STANDS))
    assert not done
    assert window.session.scenario is TWO
    assert "100" in window.statusBar().currentMessage()


def test_no_two_actions_share_a_shortcut(open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    shortcuts = [keys.toString() for _, one in actions(window.menuBar()) for keys in one.shortcuts()]
    assert len(shortcuts) == len(set(shortcuts))


def test_help_opens_beside_the_work(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    for text in ("First steps", "Keys", "What the sketch is"):
        action(window, text).trigger()
    dialogs = [widget for widget in QApplication.topLevelWidgets() if widget.isVisible() and widget is not window]
    assert len(dialogs) == 3
    for dialog in dialogs:
        dialog.close()


def test_it_turns_dark_as_a_whole(qtbot: QtBot, open_window: Callable[..., MainWindow], look: Look) -> None:
    window = open_window()
    look.choose("dark")
    qtbot.wait(150)
    picture = window.grab().toImage()
    assert picture.pixelColor(window.canvas.mapTo(window, window.canvas.rect().center())).lightnessF() < 0.3
    assert picture.pixelColor(4, window.height() - 4).name() == DARK.panel


def test_it_fits_a_small_projector(open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    window.resize(1024, 768)
    QApplication.processEvents()
    assert (window.width(), window.height()) == (1024, 768)


def test_resting_it_runs_no_timer(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    open_window()
    qtbot.wait(600)
    running = [one for one in gc.get_objects() if isinstance(one, QTimer) and isValid(one) and one.isActive()]
    assert running == []


def test_where_parts_lie_is_remembered(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    handle = window.across.handle(1)
    grip = handle.rect().center()
    QTest.mousePress(handle, Qt.MouseButton.LeftButton, pos=grip)
    QTest.mouseMove(handle, grip + QPoint(110, 0))
    QTest.mouseRelease(handle, Qt.MouseButton.LeftButton, pos=grip + QPoint(110, 0))
    sizes = window.across.sizes()
    assert sizes[0] > 380
    window.close()
    again = open_window()
    assert again.across.sizes() == pytest.approx(sizes, abs=3)


def test_mixed_tables_open_once_beside_the_work(qtbot: QtBot, open_window: Callable[..., MainWindow]) -> None:
    window = open_window()
    for _ in range(2):
        action(window, "Mixed tables").trigger()
    (dialog,) = window.findChildren(SeatingDialog)
    assert dialog.isVisible()
    assert not dialog.isModal()
    dialog.close()


def test_it_begins_no_larger_than_its_screen(open_file: Callable[..., MainWindow]) -> None:
    window = open_file()
    room, least = window.screen().availableSize(), window.minimumSizeHint()
    assert window.width() <= max(room.width(), least.width())
    assert window.height() <= max(room.height(), least.height())
    assert room.width() < 1280, "else this says nothing"
