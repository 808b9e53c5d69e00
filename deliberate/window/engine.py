"""Rehearsals for the window: at once for a committee, from a worker thread for a crowd.

The engine's libraries take half a second to import, so the first rehearsal always comes from the worker, after the
first frame is up. A result whose scenario has moved on is dropped.
"""

from __future__ import annotations

import importlib
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from PySide6.QtCore import QObject, QThreadPool, Signal

from deliberate.errors import DeliberateError
from deliberate.rehearsal.results import Finding, Rehearsal
from deliberate.scenario.values import Scenario, Variant
from deliberate.window.background import pause_collector, resume_collector

AT_ONCE_PEOPLE = 160  # up to here a rehearsal takes less than an edit may (see the benchmarks)
FINDINGS_AT_ONCE_PEOPLE = 60


@dataclass(frozen=True, eq=False)
class Ask:
    """What is to be rehearsed. Values are compared by identity: an edited scenario is another one."""

    scenario: Scenario
    variant: Variant
    question: str


class Engine(QObject):
    """Answers the latest `Ask` with `rehearsed`, then `found`; `failed` gives the reason when it cannot."""

    rehearsed = Signal(object, object)  # Ask, Rehearsal
    found = Signal(object, object)  # Ask, tuple[Finding, ...]
    failed = Signal(object, str)
    _came = Signal(object, object)
    _broke = Signal(object, object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._pool = QThreadPool(self)
        self._pool.setMaxThreadCount(1)
        self._loaded = False
        self._latest: Ask | None = None
        self._answered: Ask | None = None  # the latest ask whose findings are out, or that failed
        self._came.connect(self._deliver)
        self._broke.connect(self._report)

    @property
    def ready(self) -> bool:
        """Whether the engine's libraries are loaded."""
        return self._loaded

    def ask(self, ask: Ask) -> None:
        """Rehearse `ask`; earlier asks are forgotten."""
        self._latest = ask
        if self._loaded and len(ask.variant.people) <= AT_ONCE_PEOPLE:
            try:
                rehearsal = self._rehearse(ask)
            except DeliberateError as error:
                self._fail(ask, error)
                return
            self.rehearsed.emit(ask, rehearsal)
            if len(ask.variant.people) <= FINDINGS_AT_ONCE_PEOPLE:
                self._finish(ask, self._find(ask, rehearsal))
            else:
                self._start(ask, lambda: self._find(ask, rehearsal))
            return
        self._start(ask, lambda: self._rehearse(ask))

    def idle(self) -> bool:
        """Whether the latest ask is answered in full."""
        return self._answered is self._latest

    def stop(self) -> None:
        """Forget what is asked and wait for the worker."""
        self._latest = None
        self._pool.clear()
        self._pool.waitForDone()

    def _rehearse(self, ask: Ask) -> Rehearsal:
        rehearse = importlib.import_module("deliberate.rehearsal.rehearse").rehearse
        rehearsal: Rehearsal = rehearse(ask.scenario, ask.variant.name, ask.question)
        self._loaded = True
        return rehearsal

    def _find(self, ask: Ask, rehearsal: Rehearsal) -> tuple[Finding, ...]:
        found: tuple[Finding, ...] = importlib.import_module("deliberate.rehearsal.findings").findings(
            ask.scenario, rehearsal
        )
        return found

    def _start(self, ask: Ask, work: Callable[[], Any]) -> None:
        def guarded() -> None:
            pause_collector()
            try:
                if self._latest is not ask:
                    return
                self._came.emit(ask, work())
            except Exception as error:
                # Told to the window on its own thread: a person's error as a message, anything else as a bug.
                self._broke.emit(ask, error)
            finally:
                resume_collector()

        self._pool.start(guarded)

    def _deliver(self, ask: Ask, result: object) -> None:
        if ask is not self._latest:
            return
        if isinstance(result, Rehearsal):
            self.rehearsed.emit(ask, result)
            self._start(ask, lambda: self._find(ask, result))
        else:
            self._finish(ask, result)

    def _report(self, ask: Ask, error: Exception) -> None:
        if not isinstance(error, DeliberateError):
            raise error
        if ask is self._latest:
            self._fail(ask, error)

    def _finish(self, ask: Ask, findings: tuple[Finding, ...]) -> None:
        self._answered = ask
        self.found.emit(ask, findings)

    def _fail(self, ask: Ask, error: DeliberateError) -> None:
        self._answered = ask
        self.failed.emit(ask, str(error))
