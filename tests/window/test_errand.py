"""Long work on another thread: latest wins, progress arrives, stopping is heard, errors are told."""

from __future__ import annotations

import threading
import time
from collections.abc import Iterator

import pytest
from pytestqt.exceptions import capture_exceptions
from pytestqt.qtbot import QtBot

from deliberate.errors import DeliberateError
from deliberate.window.errand import Errand


@pytest.fixture
def errand(qapp: object) -> Iterator[Errand]:
    one = Errand()
    yield one
    one.close()
    one.deleteLater()


def test_the_result_comes_to_the_gui_thread(qtbot: QtBot, errand: Errand) -> None:
    here = []
    errand.done.connect(lambda worker: here.append((worker, threading.get_ident())))
    with qtbot.waitSignals([errand.progressed, errand.done]):
        errand.start(lambda progress, stopped: progress(0.5) or threading.get_ident())
        assert errand.running
    ((worker, told),) = here
    assert told == threading.get_ident() != worker
    assert not errand.running


def test_only_the_latest_work_counts(qtbot: QtBot, errand: Errand) -> None:
    came = []
    errand.done.connect(came.append)
    begun = threading.Event()

    def long(progress, stopped) -> str:
        begun.set()
        while not stopped():
            time.sleep(0.001)
        return "old"

    errand.start(long)
    assert begun.wait(5)
    with qtbot.waitSignal(errand.done):
        errand.start(lambda progress, stopped: "new")
    assert came == ["new"]


def test_stopped_work_gives_nothing(qtbot: QtBot, errand: Errand) -> None:
    came = []
    errand.done.connect(came.append)

    def long(progress, stopped) -> str:
        while not stopped():
            time.sleep(0.001)
        return "too late"

    errand.start(long)
    errand.stop()
    assert not errand.running
    errand.close()
    qtbot.wait(20)
    assert came == []


def test_a_persons_error_is_told(qtbot: QtBot, errand: Errand) -> None:
    def refuse(progress, stopped) -> None:
        raise DeliberateError("too many", "draws")

    with qtbot.waitSignal(errand.failed) as told:
        errand.start(refuse)
    assert told.args == [str(DeliberateError("too many", "draws"))]


def test_a_bug_stays_loud(qtbot: QtBot, errand: Errand) -> None:
    with capture_exceptions() as raised:
        errand.start(lambda progress, stopped: 1 / 0)
        qtbot.waitUntil(lambda: bool(raised))
    assert raised[0][0] is ZeroDivisionError
    assert not errand.running
