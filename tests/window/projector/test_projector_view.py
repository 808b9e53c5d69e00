"""The projector view: legible from the back of the room, stepped by a presenter, and gone without a trace."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from circles import CIRCLES, SWAP
from harbour import HARBOUR
from msgspec.structs import replace
from PySide6.QtCore import QSettings, Qt
from PySide6.QtGui import QColor, QFontMetricsF
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from deliberate import files
from deliberate.files.resources import demo_scenarios
from deliberate.rehearsal.findings import findings
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import Finding
from deliberate.scenario.values import Scenario
from deliberate.window.main_window import MainWindow
from deliberate.window.projector import ProjectorChoice, ProjectorView
from deliberate.window.projector.view import NOTHING, for_the_room
from deliberate.window.projector.wall import LEGIBLE
from deliberate.window.session import Session
from deliberate.window.theme import Look
from deliberate.window.vote import CAUTION

SIZES = [(1920, 1080), (1280, 800), (1024, 768)]


@pytest.fixture
def open_window(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session], tmp_path
) -> Iterator[Callable[..., MainWindow]]:
    opened: list[MainWindow] = []

    def open_one(scenario: Scenario = CIRCLES) -> MainWindow:
        settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
        window = MainWindow(open_session(scenario), look, settings)
        opened.append(window)
        window.resize(1100, 760)
        window.show()
        qtbot.waitExposed(window)
        qtbot.waitUntil(lambda: window.chart.chart is not None, timeout=20_000)
        qtbot.waitUntil(window.session.engine.idle, timeout=20_000)
        return window

    yield open_one
    for window in opened:
        window.session.open(window.session.meeting, None)
        window.close()
        window.deleteLater()
    QApplication.processEvents()


def shown(window: MainWindow) -> ProjectorView | None:
    return next((view for view in window.findChildren(ProjectorView) if view.isVisible()), None)


def projected(qtbot: QtBot, window: MainWindow, key: Qt.Key = Qt.Key.Key_C) -> ProjectorView:
    """Open the view as a person does: F5, then the key of codes or names."""
    qtbot.keyClick(window.canvas, Qt.Key.Key_F5)
    choice = window.findChild(ProjectorChoice)
    button = choice.codes if key == Qt.Key.Key_C else choice.names
    qtbot.mouseClick(button, Qt.MouseButton.LeftButton)
    qtbot.waitUntil(lambda: shown(window) is not None)
    view = shown(window)
    qtbot.waitExposed(view)
    qtbot.waitUntil(lambda: window.session.engine.idle() and window.session.rehearsal is not None)
    return view


def test_codes_or_names_are_chosen_before_anything_is_seen(qtbot: QtBot, open_window) -> None:
    window = open_window()
    view = projected(qtbot, window, Qt.Key.Key_N)
    assert view.canvas.picture.scene.names[0] == "Amina"
    assert not window.session.codes_shown
    qtbot.keyClick(view, Qt.Key.Key_Escape)
    qtbot.waitUntil(lambda: shown(window) is None)
    view = projected(qtbot, window)
    assert view.canvas.picture.scene.names[:2] == ("P1", "P2")
    assert "Amina" not in view.sentence.text()
    view.close()


def test_return_takes_codes(qtbot: QtBot, open_window) -> None:
    window = open_window()
    qtbot.keyClick(window.canvas, Qt.Key.Key_F5)
    choice = window.findChild(ProjectorChoice)
    qtbot.waitUntil(lambda: choice.codes.isDefault())
    qtbot.keyClick(choice, Qt.Key.Key_Return)
    assert window.session.codes_shown
    qtbot.waitUntil(lambda: shown(window) is not None)
    qtbot.keyClick(window.canvas, Qt.Key.Key_F5)  # it is open already
    assert window.findChild(ProjectorChoice) is None or not window.findChild(ProjectorChoice).isVisible()
    shown(window).close()


def test_nothing_opens_when_she_thinks_better_of_it(qtbot: QtBot, open_window) -> None:
    window = open_window()
    qtbot.keyClick(window.canvas, Qt.Key.Key_F5)
    qtbot.keyClick(window.findChild(ProjectorChoice), Qt.Key.Key_Escape)
    assert shown(window) is None
    assert not window.session.codes_shown


def test_it_fills_the_screen_with_picture_round_bar_and_one_sentence(qtbot: QtBot, open_window) -> None:
    window = open_window()
    view = projected(qtbot, window)
    assert view.isFullScreen()
    assert view.sentence.text() == "Two groups hear only themselves and end 60 apart."
    assert view.vote.text() == "Round 0, by the sketch: 3 for, 3 against: does not pass"
    assert view.caution.text() == CAUTION
    view.close()


@pytest.mark.parametrize("size", SIZES, ids=str)
def test_numbers_that_do_not_fit_lose_digits_before_they_are_left_out(
    qtbot: QtBot, look: Look, open_window, size: tuple[int, int]
) -> None:
    """On a scale from 0 to 24 views have two decimals; from afar 12.68 reads 13."""
    (ferry,) = (path for path in demo_scenarios() if path.name.startswith("ferry"))
    window = open_window(files.read(ferry))
    window.session.show_variant(window.session.scenario.variants[1].name)
    qtbot.waitUntil(window.session.engine.idle)
    window.session.player.seek(2)
    view = ProjectorView(window.session, look, window)
    view.resize(*size)
    view.show()
    qtbot.waitExposed(view)
    qtbot.waitUntil(lambda: view.canvas.picture.settled)
    people = view.canvas.picture.people
    assert people._text_font.pixelSize() >= people.smallest_text
    assert people._texts
    assert {text for _, text in people._texts} <= {"9", "9.1", "9.2", "9.3", "12.7", "12.8", "12.9", "13"}
    view.close()


@pytest.mark.parametrize("size", SIZES, ids=str)
@pytest.mark.parametrize("scenario", [CIRCLES, SWAP, HARBOUR], ids=["circles", "swap", "harbour"])
def test_all_text_is_legible_from_eight_picture_heights(
    qtbot: QtBot, open_session, look: Look, open_window, size: tuple[int, int], scenario: Scenario
) -> None:
    window = open_window(scenario)
    view = ProjectorView(window.session, look, window)
    view.resize(*size)
    view.show()
    qtbot.waitExposed(view)
    qtbot.waitUntil(lambda: view.canvas.picture.settled)
    least = size[1] * LEGIBLE
    assert least >= size[1] / 50
    for label in view.texts():
        assert label.font().pixelSize() >= least - 1e-9
        assert label.rect().width() >= QFontMetricsF(label.font()).boundingRect(label.text()[:12]).width()
        assert label.heightForWidth(label.width()) <= label.height() or not label.wordWrap()
    canvas = view.canvas
    fonts = [canvas.font(), canvas.picture.names._font]
    if canvas.picture.people._text_font.pixelSize() >= canvas.picture.people.smallest_text:
        fonts.append(canvas.picture.people._text_font)
    for font in fonts:
        assert font.pixelSize() * canvas.scale >= least - 1e-6
    assert view.ruler.font().pixelSize() * view.ruler.scale >= least - 1e-6
    assert view.ruler.geometry().bottom() < size[1]
    assert canvas.height() > 150
    view.close()


def test_a_presenter_steps_on_and_back(qtbot: QtBot, open_window) -> None:
    window = open_window()
    player = window.session.player
    player.still = True
    view = projected(qtbot, window)
    middle = view.rect().center()
    for key in (Qt.Key.Key_PageDown, Qt.Key.Key_Right):
        qtbot.keyClick(view, key)
    qtbot.mouseClick(view, Qt.MouseButton.LeftButton, pos=middle)
    assert player.position == 3
    assert view.vote.text().startswith("Round 3,")
    qtbot.keyClick(view, Qt.Key.Key_PageUp)
    qtbot.mouseClick(view, Qt.MouseButton.RightButton, pos=middle)
    assert player.position == 1
    qtbot.keyClick(view, Qt.Key.Key_End)
    assert player.position == player.last
    qtbot.keyClick(view, Qt.Key.Key_Home)
    assert player.position == 0
    qtbot.keyClick(view, Qt.Key.Key_Space)
    assert player.playing
    qtbot.keyClick(view, Qt.Key.Key_Space)
    assert not player.playing
    player.seek(0)
    view.close()


def test_clicks_and_keys_change_nothing_of_the_meeting(qtbot: QtBot, open_window) -> None:
    window = open_window()
    before = window.session.meeting
    view = projected(qtbot, window)
    for part in (view.canvas, view.ruler):
        at = part.geometry().center()
        QTest.mouseDClick(view, Qt.MouseButton.LeftButton, pos=at)
        QTest.mousePress(view, Qt.MouseButton.LeftButton, pos=at)
        QTest.mouseMove(view, at * 0.8)
        QTest.mouseRelease(view, Qt.MouseButton.LeftButton, pos=at * 0.8)
    for key in (Qt.Key.Key_Delete, Qt.Key.Key_5, Qt.Key.Key_A, Qt.Key.Key_Tab):
        qtbot.keyClick(view, key)
    assert window.session.meeting is before
    view.close()


def test_leaving_gives_the_window_back_as_it_was(qtbot: QtBot, open_window) -> None:
    window = open_window()
    window.session.select(["amina"])
    window.session.show_codes(True)
    window.canvas.zoom_in()
    qtbot.wait(150)
    before = (
        window.geometry(),
        window.across.sizes(),
        window.right.sizes(),
        window.canvas.view(),
        window.session.selection,
        window.session.lit,
        window.windowState(),
    )
    view = projected(qtbot, window)
    qtbot.keyClick(view, Qt.Key.Key_Escape)
    qtbot.waitUntil(lambda: shown(window) is None)
    assert before == (
        window.geometry(),
        window.across.sizes(),
        window.right.sizes(),
        window.canvas.view(),
        window.session.selection,
        window.session.lit,
        window.windowState(),
    )
    qtbot.waitUntil(lambda: window.isActiveWindow())


def test_codes_stay_when_the_room_still_sees_the_screen(qtbot: QtBot, open_window) -> None:
    window = open_window()
    view = projected(qtbot, window)
    qtbot.keyClick(view, Qt.Key.Key_Escape)
    assert window.session.codes_shown
    assert window.statusBar().currentMessage() == "Codes are still shown: F7 shows names"


@pytest.mark.parametrize("key", [Qt.Key.Key_F8, Qt.Key.Key_B, Qt.Key.Key_Period])
def test_it_is_blanked_by_a_key_and_comes_back_by_any(qtbot: QtBot, open_window, key: Qt.Key) -> None:
    window = open_window()
    view = projected(qtbot, window)
    qtbot.keyClick(view, key)
    assert window.blank.on
    picture = view.grab().toImage()
    assert picture.pixelColor(picture.rect().center()) == QColor("#000000")
    qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_PageDown)
    assert not window.blank.on
    assert window.session.player.position == 0
    view.close()


def test_nobody_is_ranked_on_the_wall() -> None:
    def finding(kind) -> Finding:
        return Finding(kind=kind, says=f"{kind}.", why="Why.", people=(), groups=(), arrows=(), figures={})

    kinds = ("carries", "fixed-view", "knife-edge", "outside", "vote")
    assert for_the_room([finding(kind) for kind in kinds]).kind == "vote"
    assert for_the_room([finding("carries")]) is None


@pytest.mark.parametrize("path", demo_scenarios(), ids=lambda path: path.name.split(".")[0])
def test_the_sentence_for_the_room_names_nobody(path: Path) -> None:
    scenario = files.read(path)
    for variant in scenario.variants:
        finding = for_the_room(findings(scenario, rehearse(scenario, variant.name)))
        assert finding is not None
        for one in variant.people:
            assert not re.search(rf"\b{re.escape(one.shown_name)}\b", finding.says)


def test_a_meeting_without_people_says_so(qtbot: QtBot, open_window, look: Look) -> None:
    empty = replace(CIRCLES, variants=(replace(CIRCLES.variants[0], people=(), arrows=()),))
    window = open_window(empty)
    view = projected(qtbot, window)
    assert view.sentence.text() in (NOTHING, *(finding.says for finding in window.session.findings))
    view.close()


def test_it_is_spoken(qtbot: QtBot, open_window) -> None:
    window = open_window()
    view = projected(qtbot, window)
    assert view.accessibleName() == "Projector view"
    assert view.accessibleDescription() == view.sentence.text()
    view.close()
