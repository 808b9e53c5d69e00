"""How sure the rehearsal on screen is: its guesses drawn again and again, off the GUI thread, while wanted."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer, Signal

from deliberate.window.errand import Errand, Progress, Stopped

if TYPE_CHECKING:
    from deliberate.rehearsal.doubt_results import Doubt, FindingOdds
    from deliberate.window.session import Session

CALM_MS = 250  # an edit is often followed by another


class Doubting(QObject):
    """Keeps `doubt` true to what the session shows while it is `wanted`; None while it is being drawn."""

    changed = Signal()  # wanted or not, drawn or not
    progressed = Signal(float)  # the part that is drawn, 0 to 1

    def __init__(self, session: Session) -> None:
        super().__init__(session)
        self._session = session
        self.wanted = False
        self.doubt: Doubt | None = None
        self.refusal = ""  # why it cannot be drawn
        self._errand = Errand(self)
        self._errand.progressed.connect(self.progressed)
        self._errand.done.connect(self._take)
        self._errand.failed.connect(self._refuse)
        self._calm = QTimer(self)
        self._calm.setSingleShot(True)
        self._calm.setInterval(CALM_MS)
        self._calm.timeout.connect(self._draw)
        session.scenario_changed.connect(self._begin_again)

    @property
    def drawing(self) -> bool:
        """Whether draws are under way, or about to be."""
        return self._errand.running or self._calm.isActive()

    def want(self, wanted: bool) -> None:
        """Begin to keep the doubt, or stop and forget it."""
        if wanted != self.wanted:
            self.wanted = wanted
            self._begin_again()

    def outcome_in_words(self, round_: int, passes: bool) -> str:
        """In how many draws the vote after a round passes, or does not; empty where that is not known."""
        if self.doubt is None or self.doubt.vote is None or round_ >= len(self.doubt.vote.passes):
            return ""
        odds = self.doubt.vote.passes[round_]
        words = importlib.import_module("deliberate.rehearsal.doubt_words")
        said: str = words.in_draws(odds if passes else odds.against, self.doubt.draws)
        return said

    def in_words(self, odds: FindingOdds) -> str:
        """In how many draws a finding holds; only while there is a `doubt`."""
        assert self.doubt is not None
        said: str = importlib.import_module("deliberate.rehearsal.doubt_words").holds(odds, self.doubt.draws)
        return said

    def close(self) -> None:
        """Stop the worker."""
        self._calm.stop()
        self._errand.close()

    def _begin_again(self) -> None:
        self._errand.stop()
        had = self.doubt is not None or self.refusal
        self.doubt, self.refusal = None, ""
        if self.wanted:
            self._calm.start()
        else:
            self._calm.stop()
        if had or self.wanted or not self._calm.isActive():
            self.changed.emit()

    def _draw(self) -> None:
        session = self._session
        scenario, variant, question = session.scenario, session.variant.name, session.question.id

        def work(progress: Progress, stopped: Stopped) -> object:
            doubt = importlib.import_module("deliberate.rehearsal.doubt").doubt
            return doubt(scenario, variant, question, progress=progress, stopped=stopped)

        self._errand.start(work)

    def _take(self, doubt: Doubt | None) -> None:
        self.doubt = doubt
        self.changed.emit()

    def _refuse(self, why: str) -> None:
        self.refusal = why
        self.changed.emit()
