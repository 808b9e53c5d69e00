"""The left bar: four pages, one at a time, behind a row of words."""

from __future__ import annotations

from functools import cached_property
from typing import TYPE_CHECKING, TypeVar

from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtWidgets import QApplication, QStackedWidget, QTabBar, QVBoxLayout, QWidget

from deliberate.window.session import Session
from deliberate.window.sidebar.people_page import PeoplePage
from deliberate.window.theme import Look

if TYPE_CHECKING:
    from deliberate.window.sidebar.ballot_page import BallotPage
    from deliberate.window.sidebar.meeting_page import MeetingPage
    from deliberate.window.sidebar.question_page import QuestionPage

LEAST_WIDTH = 230
TITLES = ("Peop&le", "Q&uestion", "&Ballot", "&Meeting")
Page = TypeVar("Page", bound=QWidget)


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
        self._session = session
        self.people = PeoplePage(session, look, self)
        self.pages.addWidget(self.people)
        for title in TITLES:
            self.tabs.addTab(title)
        for _ in TITLES[1:]:
            self.pages.addWidget(QWidget(self))  # makes room for a page that comes later
        self.tabs.currentChanged.connect(self._turn_to)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 4, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.tabs)
        column.addWidget(self.pages, 1)

    # The other pages come when they are first asked for: the start is quicker.

    @cached_property
    def question(self) -> QuestionPage:
        """What is talked about."""
        from deliberate.window.sidebar.question_page import QuestionPage

        return self._put(1, QuestionPage(self._session, self))

    @cached_property
    def ballot(self) -> BallotPage:
        """The rule of the vote."""
        from deliberate.window.sidebar.ballot_page import BallotPage

        return self._put(2, BallotPage(self._session, self))

    @cached_property
    def meeting(self) -> MeetingPage:
        """Title and notes."""
        from deliberate.window.sidebar.meeting_page import MeetingPage

        return self._put(3, MeetingPage(self._session, self))

    def load(self) -> None:
        """Make all pages."""
        for page in (self.question, self.ballot, self.meeting):
            page.ensurePolished()

    def _put(self, place: int, page: Page) -> Page:
        """Put a page where its room is."""
        room = self.pages.widget(place)
        self.pages.insertWidget(place, page)
        self.pages.removeWidget(room)
        room.deleteLater()
        return page

    def _turn_to(self, place: int) -> None:
        self.load()
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
