"""What would help: changes of process for an aim, the most useful for how little they ask first."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from PySide6.QtCore import QTimer, Signal
from PySide6.QtGui import QHideEvent, QShowEvent
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QToolButton, QVBoxLayout, QWidget

from deliberate.window.cards import Cards, Told
from deliberate.window.errand import Errand, Progress, Stopped
from deliberate.window.session import Light, Session
from deliberate.window.text import plain_label
from deliberate.window.theme import Look

if TYPE_CHECKING:
    from deliberate.rehearsal.remedies import Aim, Remedy

CALM_MS = 200
CAUTION = "Every change is shown with the vote whichever way it goes. Amending the proposal is as good a way."


class RemediesPage(QWidget):
    """Looks for remedies while it is on show; `tried` asks for one as a variant."""

    tried = Signal(object)  # Suggestion

    def __init__(self, session: Session, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self._session = session
        self._stale = True
        self._chosen: Aim | None = None  # what she wants; None for the first aim that the figures ask for
        self._errand = Errand(self)
        self._errand.progressed.connect(lambda part: self.state.setText(f"Looking for changes … {part:.0%}"))
        self._errand.done.connect(self._take)
        self._errand.failed.connect(self._refuse)
        self._calm = QTimer(self)
        self._calm.setSingleShot(True)
        self._calm.setInterval(CALM_MS)
        self._calm.timeout.connect(self._look)
        self.aim = QComboBox(self)
        self.aim.setAccessibleName("What a change should do")
        self.aim.setPlaceholderText("Choose an aim")
        self.aim.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.aim.activated.connect(self._choose)
        self.stop = QToolButton(self)
        self.stop.setText("Stop")
        self.stop.setProperty("quiet", True)
        self.stop.setToolTip("Stop looking")
        self.stop.clicked.connect(self._stop)
        self.stop.hide()
        self.state = plain_label(self, muted=True)
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
        session.scenario_changed.connect(self._begin_again)
        session.codes_changed.connect(self._begin_again)

    @property
    def looking(self) -> bool:
        """Whether changes are being looked for."""
        return self._errand.running or self._calm.isActive()

    def close_down(self) -> None:
        """Stop the worker."""
        self._calm.stop()
        self._errand.close()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._stale:
            self._calm.start()

    def hideEvent(self, event: QHideEvent) -> None:
        super().hideEvent(event)
        if self.looking:
            self._stop()
            self._stale = True

    def _begin_again(self) -> None:
        self._errand.stop()
        self._stale = True
        self.list.tell(())
        self.state.setText("")
        if self.isVisible():
            self._calm.start()

    def _choose(self, place: int) -> None:
        self._chosen = self.aim.itemData(place)
        self._begin_again()

    def _stop(self) -> None:
        self._calm.stop()
        self._errand.stop()
        self.stop.hide()
        self.state.setText("Stopped. Choose an aim to look again.")

    def _look(self) -> None:
        session = self._session
        scenario, variant, question, chosen = (
            session.scenario,
            session.variant.name,
            session.question.id,
            self._chosen,
        )
        self._stale = False
        self.stop.show()
        self.state.setText("Looking for changes …")

        def work(progress: Progress, stopped: Stopped) -> object:
            search = importlib.import_module("deliberate.rehearsal.remedies")
            asked = search.aims_here(scenario, variant, question)
            aim = chosen or (asked[0] if asked else None)
            found = ()
            if aim is not None:
                found = search.remedies(scenario, variant, question, aim, progress=progress, stopped=stopped)
            return search.AIMS, search.IN_WORDS, asked, aim, found

        self._errand.start(work)

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
        self.state.setText(f"{why[0].upper()}{why[1:]}.")


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
