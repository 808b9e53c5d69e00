"""Arrows of the canvas drawn by what they move: worked out off the GUI thread while that is wanted."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer

from deliberate.window.errand import Errand, Progress, Stopped

if TYPE_CHECKING:
    from deliberate.rehearsal.leverage import Leverage
    from deliberate.window.canvas import Canvas
    from deliberate.window.session import Session

CALM_MS = 200  # an edit is often followed by another
WORKING = "Working out what arrows move …"
NO_RATE = "What arrows move is not known with a hearing range or a repeated plan"


class ArrowLeverage(QObject):
    """Keeps the thickness of a canvas's arrows true to what the session shows, while it is `wanted`."""

    def __init__(self, session: Session, canvas: Canvas, parent: QObject) -> None:
        super().__init__(parent)
        self._session, self._canvas = session, canvas
        self.wanted = False
        self._leverage: Leverage | None = None
        self._grounds: object = None  # what `_leverage` was worked out from
        self._errand = Errand(self)
        self._errand.done.connect(self._take)
        self._errand.failed.connect(self._refuse)
        self._calm = QTimer(self)
        self._calm.setSingleShot(True)
        self._calm.setInterval(CALM_MS)
        self._calm.timeout.connect(self._work)
        session.scenario_changed.connect(self._follow)

    @property
    def working(self) -> bool:
        """Whether it is being worked out, or about to be."""
        return self._errand.running or self._calm.isActive()

    def want(self, wanted: bool) -> None:
        """Draw arrows by what they move from now on, or by their shares again."""
        self.wanted = wanted
        if wanted:
            self._begin_again()
        else:
            self._forget()
            self._canvas.show_leverage(None)

    def close(self) -> None:
        """Stop the worker."""
        self._calm.stop()
        self._errand.close()

    def _follow(self) -> None:
        if not self.wanted:
            return
        if self._leverage is not None and self._grounds == self._present_grounds():
            self._show(self._leverage)  # somebody was moved or renamed
        elif not self.working or self._grounds != self._present_grounds():
            self._begin_again()

    def _begin_again(self) -> None:
        self._forget()
        self._canvas.show_leverage(None, WORKING)
        self._calm.start()

    def _forget(self) -> None:
        self._calm.stop()
        self._errand.stop()
        self._leverage = self._grounds = None

    def _work(self) -> None:
        session = self._session
        scenario, variant, question = session.scenario, session.variant.name, session.question.id
        self._grounds = self._present_grounds()

        def work(progress: Progress, stopped: Stopped) -> object:
            return importlib.import_module("deliberate.rehearsal.leverage").leverage(scenario, variant, question)

        self._errand.start(work)

    def _take(self, leverage: Leverage) -> None:
        self._leverage = leverage
        self._show(leverage)

    def _show(self, leverage: Leverage) -> None:
        moves = leverage.arrows_at_end
        self._canvas.show_leverage(moves, "" if moves is not None else NO_RATE)

    def _refuse(self, why: str) -> None:
        self._canvas.show_leverage(None, f"{why[0].upper()}{why[1:]}")

    def _present_grounds(self) -> object:
        """All that the result depends on: not names, and not where people stand."""
        variant, question = self._session.variant, self._session.question
        people = [
            (one.id, one.own_weight, one.firmness, one.present, one.beliefs.get(question.id))
            for one in variant.people
        ]
        return people, variant.arrows, variant.plan, question
