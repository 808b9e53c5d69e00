"""What the result hangs on: how far each guess moves it, and which ones are worth asking about again."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QVBoxLayout, QWidget

from deliberate.window.answer_page import AnswerPage
from deliberate.window.cards import Cards, Told
from deliberate.window.errand import Progress, Stopped, Work
from deliberate.window.session import Light, Session
from deliberate.window.text import WrappingButton
from deliberate.window.theme import Look

if TYPE_CHECKING:
    from deliberate.rehearsal.leverage import Leverage

MOST = 20  # levers told
LEVERS = "How far each guess moves the mean of those present, one at a time:"
ASKING_FIRST = "First what is worth asking about again, then how far each guess moves the mean of those present:"


class HangsOnPage(AnswerPage):
    """Levers by size, and above them the guesses that most of the doubt hangs on."""

    def __init__(self, session: Session, look: Look, parent: QWidget) -> None:
        super().__init__(session, parent)
        self._leverage: Leverage | None = None
        self.draw = WrappingButton(look, self)
        self.draw.setText("Draw the guesses to see which are worth asking about again")
        self.draw.clicked.connect(lambda: session.doubting.want(True))
        self.list = Cards(look, self, above=(self.draw, self.state))
        self.list.pointed.connect(session.light)
        column = QVBoxLayout(self)
        column.setContentsMargins(5, 0, 0, 0)
        column.addWidget(self.list)
        session.doubting.changed.connect(self._tell)

    def _clear(self) -> None:
        self._leverage = None
        self._tell()

    def _ask(self) -> Work:
        session = self._session
        scenario, variant, question = session.scenario, session.variant.name, session.question.id

        def work(progress: Progress, stopped: Stopped) -> object:
            return importlib.import_module("deliberate.rehearsal.leverage").leverage(scenario, variant, question)

        return work

    def _take(self, leverage: Leverage) -> None:
        self._leverage = leverage
        self._tell()

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
