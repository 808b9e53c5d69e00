"""The left bar: pages behind a row of quiet tabs."""

from __future__ import annotations

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QStackedWidget, QTabBar, QVBoxLayout, QWidget

from deliberate.window.session import Session
from deliberate.window.sidebar.people_page import PeoplePage
from deliberate.window.theme import Look


class Sidebar(QWidget):
    """Edits everything that is not drawn."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.people = PeoplePage(session, look, self)
        self.pages = QStackedWidget(self)
        self.tabs = QTabBar(self)
        self.tabs.setDrawBase(False)
        self.tabs.setExpanding(False)
        self.tabs.setAccessibleName("Pages of the left bar")
        for title, page in (("People", self.people),):
            self.tabs.addTab(title)
            self.pages.addWidget(page)
        self.tabs.currentChanged.connect(self.pages.setCurrentIndex)
        column = QVBoxLayout(self)
        column.setContentsMargins(6, 4, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.tabs)
        column.addWidget(self.pages, 1)

    def sizeHint(self) -> QSize:
        return QSize(self.fontMetrics().horizontalAdvance("n") * 44, 600)
