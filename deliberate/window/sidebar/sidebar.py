"""The left bar: four pages, one at a time, behind a row of words."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtWidgets import QApplication, QStackedWidget, QTabBar, QVBoxLayout, QWidget

from deliberate.window.session import Session
from deliberate.window.sidebar.ballot_page import BallotPage
from deliberate.window.sidebar.meeting_page import MeetingPage
from deliberate.window.sidebar.people_page import PeoplePage
from deliberate.window.sidebar.question_page import QuestionPage
from deliberate.window.theme import Look

LEAST_WIDTH = 230


class Sidebar(QWidget):
    """Edits everything that is not drawn."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.pages = QStackedWidget(self)
        self.tabs = _Words(self)
        self.tabs.setProperty("words", True)
        self.tabs.setDrawBase(False)
        self.tabs.setExpanding(False)
        self.tabs.setUsesScrollButtons(False)
        self.tabs.setAccessibleName("Pages of the left bar")
        self.people = PeoplePage(session, look, self)
        self.question = QuestionPage(session, self)
        self.ballot = BallotPage(session, self)
        self.meeting = MeetingPage(session, self)
        pages = (("Peop&le", self.people), ("Q&uestion", self.question), ("&Ballot", self.ballot))
        for title, page in (*pages, ("&Meeting", self.meeting)):
            self.tabs.addTab(title)
            self.pages.addWidget(page)
        self.tabs.currentChanged.connect(self._turn_to)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 4, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.tabs)
        column.addWidget(self.pages, 1)

    def _turn_to(self, place: int) -> None:
        if self.pages.isAncestorOf(QApplication.focusWidget()):
            self.tabs.setFocus()  # before its page hides, which would hand the focus on to the picture
        self.pages.setCurrentIndex(place)

    def sizeHint(self) -> QSize:
        return QSize(290, 600)

    def minimumSizeHint(self) -> QSize:
        return QSize(LEAST_WIDTH, 200)


class _Words(QTabBar):
    """The names of the pages; Alt and a letter goes there, so that Tab leads on into the page."""

    def event(self, event: QEvent) -> bool:
        done = super().event(event)
        if event.type() == QEvent.Type.Shortcut:
            self.setFocus(Qt.FocusReason.ShortcutFocusReason)
        return done
