"""Somebody who edits, plays, undoes and saves without a pause, until the program is killed.

Run as ``python restless.py FILE JOURNAL SEED``; with an odd seed it never saves. It works the real window on the
screen that DISPLAY names. The journal gets a line for whatever happened, with the time: ``shows N`` after each change
of what is on screen, ``saving N`` before and ``saved N`` after each save. N is the number in the meeting's title.
"""

from __future__ import annotations

import os
import random
import sys
import time

from PySide6.QtCore import QObject, QTimer
from PySide6.QtWidgets import QApplication

from deliberate.scenario import edits
from deliberate.window import app
from deliberate.window.main_window import MainWindow

EVERY_MS = 15


class Restless(QObject):
    """Does the next thing every few milliseconds."""

    def __init__(self, window: MainWindow, journal: str, seed: int) -> None:
        super().__init__(window)
        self._window, self._session = window, window.session
        self._journal = os.open(journal, os.O_WRONLY | os.O_CREAT | os.O_APPEND)
        self._random = random.Random(seed)
        self._edits = 0
        self._ways = {self._edit: 60, self._move: 15, self._undo: 8, self._play: 12, self._save: 0 if seed % 2 else 5}
        self._timer = QTimer(self)
        self._timer.timeout.connect(self._go_on)
        self._timer.start(EVERY_MS)

    def _go_on(self) -> None:
        (way,) = self._random.choices(list(self._ways), weights=list(self._ways.values()))
        way()

    def _edit(self) -> None:
        self._edits += 1
        number = self._edits
        self._session.edit("Title", lambda s: edits.set_title(s, f"Meeting {number}"))
        self._note("shows")

    def _move(self) -> None:
        variant = self._session.variant
        person = self._random.choice(variant.people).id
        x, y = (self._random.uniform(-300, 300) for _ in range(2))
        self._session.edit("Move", lambda s: edits.move_people(s, {person: (x, y)}, variant=variant.name))

    def _undo(self) -> None:
        self._session.undo()
        self._note("shows")

    def _play(self) -> None:
        player = self._session.player
        player.seek(0)
        player.play()

    def _save(self) -> None:
        self._note("saving")
        self._window.files.save()
        self._note("saved")

    def _note(self, what: str) -> None:
        number = self._session.scenario.title.removeprefix("Meeting ")
        os.write(self._journal, f"{time.time()} {what} {number}\n".encode())


def main() -> int:
    """Open the file as the command line does, and begin once the window is there."""
    path, journal, seed = sys.argv[1:]

    def begin() -> None:
        windows = [one for one in QApplication.topLevelWidgets() if isinstance(one, MainWindow)]
        if not windows or windows[0].chart.chart is None:
            QTimer.singleShot(20, begin)
        else:
            Restless(windows[0], journal, int(seed))

    application = QApplication(sys.argv[:1])
    QTimer.singleShot(0, begin)
    assert application is not None
    return app.run(path)


if __name__ == "__main__":
    sys.exit(main())
