"""A page whose answer takes a while: worked out on another thread, and only while somebody looks at it."""

from __future__ import annotations

from PySide6.QtCore import QTimer
from PySide6.QtGui import QHideEvent, QShowEvent
from PySide6.QtWidgets import QWidget

from deliberate.window.errand import Errand, Work
from deliberate.window.session import Session
from deliberate.window.text import plain_label

CALM_MS = 200  # an edit is often followed by another


class AnswerPage(QWidget):
    """Asks a moment after the last change while it is on show, and again when it is shown after a change.

    Each page has its own `_ask` (what to ask), `_take` (show the answer) and `_clear` (show none). `state` is its
    line about what goes on.
    """

    def __init__(self, session: Session, parent: QWidget) -> None:
        super().__init__(parent)
        self._session = session
        self._stale = True
        self.state = plain_label(self, muted=True)
        self._errand = Errand(self)
        self._errand.done.connect(self._take)
        self._errand.failed.connect(self._refuse)
        self._calm = QTimer(self)
        self._calm.setSingleShot(True)
        self._calm.setInterval(CALM_MS)
        self._calm.timeout.connect(self._begin)
        session.scenario_changed.connect(self.begin_again)
        session.codes_changed.connect(self.begin_again)

    @property
    def working(self) -> bool:
        """Whether the answer is being worked out, or about to be."""
        return self._errand.running or self._calm.isActive()

    def begin_again(self) -> None:
        """Forget the answer; ask anew if the page is on show."""
        self._errand.stop()
        self._stale = True
        self.state.setText("")
        self._clear()
        if self.isVisible():
            self._calm.start()

    def give_up(self) -> None:
        """Stop working; the next change asks again."""
        self._calm.stop()
        self._errand.stop()

    def close_down(self) -> None:
        """Stop the worker for good."""
        self._calm.stop()
        self._errand.close()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._stale:
            self._calm.start()

    def hideEvent(self, event: QHideEvent) -> None:
        super().hideEvent(event)
        if self.working:
            self.give_up()
            self._stale = True

    def _begin(self) -> None:
        self._stale = False
        self.state.setText("Working it out …")
        self._errand.start(self._ask())

    def _refuse(self, why: str) -> None:
        self.state.setText(f"{why[0].upper()}{why[1:]}.")

    def _ask(self) -> Work:
        """What to run on the other thread, with all that it needs read off the session now."""

    def _take(self, answer: object) -> None:
        """Show the answer."""

    def _clear(self) -> None:
        """Show no answer."""
