"""What would help: changes of process for an aim, the most useful for how little they ask first."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QToolButton, QVBoxLayout, QWidget

from deliberate.window.answer_page import AnswerPage
from deliberate.window.cards import Cards, Told
from deliberate.window.errand import Progress, Stopped, Work
from deliberate.window.session import Light, Session
from deliberate.window.theme import Look

if TYPE_CHECKING:
    from deliberate.rehearsal.remedies import Aim, Remedy

CAUTION = "Every change is shown with the vote whichever way it goes. Amending the proposal is as good a way."


class RemediesPage(AnswerPage):
    """Looks for remedies while it is on show; `tried` asks for one as a variant."""

    tried = Signal(object)  # Suggestion

    def __init__(self, session: Session, look: Look, parent: QWidget) -> None:
        super().__init__(session, parent)
        self._chosen: Aim | None = None  # None for the first aim that the figures ask for
        self._errand.progressed.connect(lambda part: self.state.setText(f"Looking for changes … {part:.0%}"))
        self.aim = QComboBox(self)
        self.aim.setAccessibleName("What a change should do")
        self.aim.setPlaceholderText("Choose an aim")
        self.aim.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.aim.activated.connect(self._choose)
        self.stop = QToolButton(self)
        self.stop.setText("Stop")
        self.stop.setProperty("quiet", True)
        self.stop.setToolTip("Stop looking")
        self.stop.clicked.connect(self.give_up)
        self.stop.hide()
        self.list = Cards(look, self, above=(self.state,))
        self.list.pointed.connect(session.light)
        self.list.tried.connect(self.tried)
        row = QHBoxLayout()
        row.addWidget(self.aim, 1)
        row.addWidget(self.stop)
        column = QVBoxLayout(self)
        column.setContentsMargins(5, 0, 0, 0)
        column.addLayout(row)
        column.addWidget(self.list, 1)

    def give_up(self) -> None:
        super().give_up()
        self.stop.hide()
        self.state.setText("Stopped. Choose an aim to look again.")

    def _choose(self, place: int) -> None:
        self._chosen = self.aim.itemData(place)
        self.begin_again()

    def _clear(self) -> None:
        self.list.tell(())

    def _ask(self) -> Work:
        session, chosen = self._session, self._chosen
        scenario, variant, question = session.scenario, session.variant.name, session.question.id
        self.stop.show()

        def work(progress: Progress, stopped: Stopped) -> object:
            search = importlib.import_module("deliberate.rehearsal.remedies")
            asked = search.aims_here(scenario, variant, question)
            aim = chosen or (asked[0] if asked else None)
            found = ()
            if aim is not None:
                found = search.remedies(scenario, variant, question, aim, progress=progress, stopped=stopped)
            return search.AIMS, search.IN_WORDS, asked, aim, found

        return work

    def _take(self, result: tuple[object, ...]) -> None:
        aims, in_words, asked, aim, found = result
        self.stop.hide()
        self.aim.clear()
        for one in sorted(aims, key=lambda one: one not in asked):
            words = in_words[one][0].upper() + in_words[one][1:]
            self.aim.addItem(words if one in asked else f"{words} (not asked for)", one)
        self.aim.setCurrentIndex(self.aim.findData(aim))
        if aim is None:
            self.state.setText("By these figures no aim asks for a change. Choose one to look all the same.")
        elif not found:
            self.state.setText("Nothing that was tried serves this aim.")
        else:
            self.state.setText(CAUTION)
        self.list.tell([_told(remedy) for remedy in found])

    def _refuse(self, why: str) -> None:
        self.stop.hide()
        super()._refuse(why)


def _told(remedy: Remedy) -> Told:
    return Told(
        key=type(remedy.suggestion).__name__,
        says=f"{remedy.says}.",
        why=f"{remedy.outcome} {remedy.asks}",
        lights=Light(remedy.people, remedy.arrows),
        change="this as a variant",
        suggestion=remedy.suggestion,
        note=remedy.does,
    )
