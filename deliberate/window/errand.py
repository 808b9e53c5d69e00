"""Long work off the GUI thread: one errand at a time, with how far it is, and a way to stop it."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QObject, QThreadPool, Signal

from deliberate.dynamics.progress import Progress, Stopped
from deliberate.errors import DeliberateError
from deliberate.window.background import pause_collector, resume_collector

Work = Callable[[Progress, Stopped], object]


class Errand(QObject):
    """Runs the latest work it was given; what comes of earlier work is dropped.

    `progressed` gives the part that is done, `done` the result, `failed` why a person's input cannot be worked
    with. Anything else that goes wrong is raised on the GUI thread, as a bug is.
    """

    progressed = Signal(float)
    done = Signal(object)
    failed = Signal(str)
    _reported = Signal(int, float)
    _came = Signal(int, object)
    _broke = Signal(int, object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._pool = QThreadPool(self)
        self._pool.setMaxThreadCount(1)
        self._latest = 0
        self.running = False
        self._reported.connect(self._report)
        self._came.connect(self._deliver)
        self._broke.connect(self._fail)

    def start(self, work: Work) -> None:
        """Begin `work`; what is still under way is told to stop."""
        self._latest += 1
        self.running = True
        mine = self._latest

        def stopped() -> bool:
            return self._latest != mine

        def run() -> None:
            pause_collector()
            try:
                if not stopped():
                    self._came.emit(mine, work(lambda part: self._reported.emit(mine, part), stopped))
            except Exception as error:
                self._broke.emit(mine, error)
            finally:
                resume_collector()

        self._pool.start(run)

    def stop(self) -> None:
        """Give up what is under way; nothing comes of it."""
        self._latest += 1
        self.running = False

    def close(self) -> None:
        """Stop and wait for the worker."""
        self.stop()
        self._pool.clear()
        self._pool.waitForDone()

    def _report(self, number: int, part: float) -> None:
        if number == self._latest:
            self.progressed.emit(part)

    def _deliver(self, number: int, result: object) -> None:
        if number == self._latest:
            self.running = False
            self.done.emit(result)

    def _fail(self, number: int, error: Exception) -> None:
        if number != self._latest:
            return
        self.running = False
        if not isinstance(error, DeliberateError):
            raise error
        self.failed.emit(str(error))
