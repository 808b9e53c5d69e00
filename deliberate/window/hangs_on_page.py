"""What the result hangs on: how far each guess moves it, and which ones are worth asking about again."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from PySide6.QtCore import QTimer
from PySide6.QtGui import QHideEvent, QShowEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from deliberate.window.cards import Cards, Told
from deliberate.window.errand import Errand, Progress, Stopped
from deliberate.window.session import Light, Session
from deliberate.window.text import WrappingButton, plain_label
from deliberate.window.theme import Look

if TYPE_CHECKING:
    from deliberate.rehearsal.leverage import Leverage

CALM_MS = 200
MOST = 20  # levers told
LEVERS = "How far each guess moves the mean of those present, one at a time:"
ASKING_FIRST = "First what is worth asking about again, then how far each guess moves the mean of those present:"


class HangsOnPage(QWidget):
    """Levers by size, and above them the guesses that most of the doubt hangs on. Works while it is on show."""

    def __init__(self, session: Session, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self._session = session
        self._stale = True
        self._leverage: Leverage | None = None
        self._errand = Errand(self)
        self._errand.done.connect(self._take)
        self._errand.failed.connect(self._refuse)
        self._calm = QTimer(self)
        self._calm.setSingleShot(True)
        self._calm.setInterval(CALM_MS)
        self._calm.timeout.connect(self._work)
        self.state = plain_label(self, muted=True)
        self.draw = WrappingButton(look, self)
        self.draw.setText("Draw the guesses to see which are worth asking about again")
        self.draw.clicked.connect(lambda: session.doubting.want(True))
        self.list = Cards(look, self, above=(self.draw, self.state))
        self.list.pointed.connect(session.light)
        column = QVBoxLayout(self)
        column.setContentsMargins(5, 0, 0, 0)
        column.addWidget(self.list)
        session.scenario_changed.connect(self._begin_again)
        session.codes_changed.connect(self._begin_again)
        session.doubting.changed.connect(self._tell)

    def close_down(self) -> None:
        """Stop the worker."""
        self._calm.stop()
        self._errand.close()

    @property
    def working(self) -> bool:
        """Whether levers are being worked out."""
        return self._errand.running or self._calm.isActive()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._stale:
            self._calm.start()

    def hideEvent(self, event: QHideEvent) -> None:
        super().hideEvent(event)
        if self.working:
            self._calm.stop()
            self._errand.stop()
            self._stale = True

    def _begin_again(self) -> None:
        self._errand.stop()
        self._stale, self._leverage = True, None
        self.state.setText("")
        self._tell()
        if self.isVisible():
            self._calm.start()

    def _work(self) -> None:
        session = self._session
        scenario, variant, question = session.scenario, session.variant.name, session.question.id
        self._stale = False
        self.state.setText("Working it out …")

        def work(progress: Progress, stopped: Stopped) -> object:
            return importlib.import_module("deliberate.rehearsal.leverage").leverage(scenario, variant, question)

        self._errand.start(work)

    def _take(self, leverage: Leverage) -> None:
        self._leverage = leverage
        self._tell()

    def _refuse(self, why: str) -> None:
        self.state.setText(f"{why[0].upper()}{why[1:]}.")

    def _tell(self) -> None:
        doubting = self._session.doubting
        self.draw.setVisible(not doubting.wanted)
        told = []
        asking = doubting.doubt is not None and bool(doubting.doubt.hangs_on)
        if self._leverage is not None:
            self.state.setText(ASKING_FIRST if asking else LEVERS)
        if doubting.doubt is not None:
            told = [
                Told(
                    key=f"guess {place}",
                    says=guess.says,
                    why="",
                    lights=Light((guess.person,)),
                    note="Worth asking about again",
                )
                for place, guess in enumerate(doubting.doubt.hangs_on)
            ]
        if self._leverage is not None:
            told += [
                Told(key=lever.says, says=lever.says, why="", lights=Light(lever.people, lever.arrows))
                for lever in self._leverage.levers[:MOST]
            ]
        self.list.tell(told)
