"""For tests of the window: whatever a test opens or starts is closed and stopped when it ends."""

from __future__ import annotations

import gc
import threading
import time
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import QCoreApplication, QEvent, QObject, QSettings, QThread, QThreadPool, QTimer
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot
from shiboken6 import isValid

from deliberate.scenario.values import Scenario
from deliberate.window.app import first_meeting
from deliberate.window.held_file import Locks
from deliberate.window.main_window import MainWindow
from deliberate.window.recent import RecentFiles
from deliberate.window.session import Session
from deliberate.window.theme import Look

# A worker that was told to stop may need a moment; one that was not is still there after it.
GRACE_SECONDS = 5.0


@pytest.fixture(scope="session", autouse=True)
def _only_new_objects(qapp: QApplication) -> None:
    """Keep what the imports made out of the collector's lists, so that looking through them stays quick."""
    gc.collect()
    gc.freeze()


@pytest.fixture(autouse=True)
def nothing_left_over(_only_new_objects: None) -> Iterator[None]:
    """Fail a test that leaves windows, running timers or running threads behind."""
    before = _open_and_running()
    yield
    _let_go(lambda: not _without(before, _running_threads()))
    left = _without(before, _open_and_running())
    assert not left, f"left over after the test: {left}"


def _let_go(done: Callable[[], bool]) -> None:
    """Deliver pending events and deletions until `done`, then once more, and drop cycles of Python objects."""
    deadline = time.monotonic() + GRACE_SECONDS
    while True:
        QApplication.processEvents()
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
        if done() or time.monotonic() > deadline:
            break
        time.sleep(0.005)
    gc.collect()
    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)


def _open_and_running() -> list[object]:
    timers = [timer for timer in _living(QTimer) if timer.isActive()]
    return [*QApplication.topLevelWidgets(), *timers, *_running_threads()]


def _running_threads() -> list[object]:
    threads = [thread for thread in _living(QThread) if thread.isRunning() and thread is not QThread.currentThread()]
    pool = QThreadPool.globalInstance()
    return [*threading.enumerate(), *threads, *([pool] if pool.activeThreadCount() else [])]


def _living(kind: type[QObject]) -> list[QObject]:
    """All objects of a kind that Python knows and Qt has not deleted."""
    return [thing for thing in gc.get_objects() if isinstance(thing, kind) and isValid(thing)]


def _without(before: list[object], now: list[object]) -> list[object]:
    return [thing for thing in now if not any(thing is other for other in before)]


@pytest.fixture
def look(tmp_path: Path, qapp: QApplication) -> Look:
    """The light appearance, with settings of its own."""
    kept = Look(QSettings(str(tmp_path / "settings.ini"), QSettings.Format.IniFormat))
    kept.choose("light")
    return kept


@pytest.fixture
def open_session(qtbot: QtBot) -> Iterator[Callable[..., Session]]:
    """Opens sessions, rehearsed unless told otherwise, and closes them at the end."""
    opened: list[Session] = []

    def open_one(scenario: Scenario, *, rehearsed: bool = True) -> Session:
        session = Session(scenario)
        opened.append(session)
        if rehearsed:
            session.rehearse()
            qtbot.waitUntil(lambda: session.rehearsal is not None, timeout=20_000)
            qtbot.waitUntil(session.engine.idle, timeout=20_000)
        return session

    yield open_one
    for session in opened:
        session.close()


@pytest.fixture
def open_file(qtbot: QtBot, look: Look, tmp_path: Path) -> Iterator[Callable[..., MainWindow]]:
    """Opens files in windows of their own that share settings and private folder, as the program does."""
    opened: list[MainWindow] = []

    def open_one(path: Path | None = None) -> MainWindow:
        settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
        private = tmp_path / "private"
        beginning = first_meeting(None if path is None else str(path), RecentFiles(settings), Locks(private / "open"))
        assert beginning is not None
        held = beginning.held
        window = MainWindow(Session(beginning.scenario, held and held.path), look, settings, private)
        window.files.begin(held)
        opened.append(window)
        window.show()
        window.activateWindow()
        qtbot.waitUntil(lambda: window.chart.chart is not None, timeout=20_000)
        qtbot.waitUntil(window.session.engine.idle, timeout=20_000)
        return window

    yield open_one
    for window in opened:
        _close(window)


@pytest.fixture
def open_meeting(qtbot: QtBot, look: Look, tmp_path: Path) -> Iterator[Callable[[Scenario], MainWindow]]:
    """Opens meetings without a file in windows of 1280 x 800, rehearsed."""
    opened: list[MainWindow] = []

    def open_one(scenario: Scenario) -> MainWindow:
        settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
        window = MainWindow(Session(scenario), look, settings, tmp_path / "private")
        opened.append(window)
        window.resize(1280, 800)
        window.show()
        window.activateWindow()
        qtbot.waitUntil(lambda: window.chart.chart is not None, timeout=20_000)
        qtbot.waitUntil(window.session.engine.idle, timeout=20_000)
        return window

    yield open_one
    for window in opened:
        _close(window)


def _close(window: MainWindow) -> None:
    window.session.open(window.session.scenario, None)  # nothing to ask about when it closes
    window.close()
    window.deleteLater()
