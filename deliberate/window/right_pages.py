"""Below the chart: what stands out, what would help, and what the result hangs on, one page at a time."""

from __future__ import annotations

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QStackedWidget, QTabBar, QVBoxLayout, QWidget

from deliberate.rehearsal.results import Suggestion
from deliberate.window.findings_panel import FindingsPanel
from deliberate.window.hangs_on_page import HangsOnPage
from deliberate.window.remedies_page import RemediesPage
from deliberate.window.session import Session
from deliberate.window.theme import Look

TITLES = ("What stands out", "What would help", "What it hangs on")


class RightPages(QWidget):
    """Three pages behind a row of words. The second and third compute only while they are looked at."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.findings = FindingsPanel(session, look, self)
        self.remedies = RemediesPage(session, look, self)
        self.hangs_on = HangsOnPage(session, look, self)
        self.remedies.tried.connect(self._try)
        self.pages = QStackedWidget(self)
        self.tabs = QTabBar(self)
        self.tabs.setProperty("words", True)
        self.tabs.setDrawBase(False)
        self.tabs.setExpanding(False)
        self.tabs.setUsesScrollButtons(False)
        self.tabs.setAccessibleName("Pages below the chart")
        for title, page in zip(TITLES, (self.findings, self.remedies, self.hangs_on), strict=True):
            self.tabs.addTab(title)
            self.pages.addWidget(page)
        self.tabs.currentChanged.connect(self.pages.setCurrentIndex)
        column = QVBoxLayout(self)
        column.setContentsMargins(9, 4, 6, 4)
        column.setSpacing(6)
        column.addWidget(self.tabs)
        column.addWidget(self.pages, 1)

    def sizeHint(self) -> QSize:
        return QSize(340, 300)

    def turn_to(self, place: int) -> None:
        """Show a page and give it the keys."""
        self.tabs.setCurrentIndex(place)
        self.tabs.setFocus()

    def close_down(self) -> None:
        """Stop what is being worked out."""
        self.remedies.close_down()
        self.hangs_on.close_down()

    def _try(self, suggestion: Suggestion) -> None:
        # What it does to the result is told on the first page.
        self.tabs.setCurrentIndex(0)
        self.findings.try_change(suggestion)
