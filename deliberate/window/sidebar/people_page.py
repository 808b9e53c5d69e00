"""The first page: everybody in a table, and below it what belongs to the selected ones."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QSplitter, QVBoxLayout, QWidget

from deliberate.window.session import Session
from deliberate.window.sidebar.people_table import PeopleTable
from deliberate.window.sidebar.points_table import PointsTable
from deliberate.window.sidebar.start_editor import StartEditor
from deliberate.window.text import plain_label
from deliberate.window.theme import Look

NOBODY_CHOSEN = "Select somebody to see where they start and whose view counts for them."


class PeoplePage(QWidget):
    """Table of people over the start and the points of those selected. While it is hidden, reading waits."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._stale = True
        self.table = PeopleTable(session, look, self)
        below = QWidget(self)
        self.start = StartEditor(session, below)
        self.points = PointsTable(session, look, below)
        self.hint = plain_label(below, muted=True, text=NOBODY_CHOSEN)
        column = QVBoxLayout(below)
        column.setContentsMargins(12, 8, 10, 8)
        column.setSpacing(10)
        column.addWidget(self.start)
        column.addWidget(self.points, 1)
        column.addWidget(self.hint)
        column.addStretch(0)
        self.split = QSplitter(Qt.Orientation.Vertical, self)
        self.split.setHandleWidth(1)
        self.split.setChildrenCollapsible(False)
        self.split.addWidget(self.table)
        self.split.addWidget(below)
        self.split.setSizes([300, 300])
        whole = QVBoxLayout(self)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.addWidget(self.split)
        session.scenario_changed.connect(self.refresh)
        session.selection_changed.connect(self._read_selected)

    def refresh(self) -> None:
        """Read the people again, now or when the page is next shown."""
        self._stale = not self.isVisible()
        if not self._stale:
            self.table.refresh()
            self._read_selected()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._stale:
            self.refresh()

    def _read_selected(self) -> None:
        if not self.isVisible():
            self._stale = True
            return
        self.start.refresh()
        self.points.refresh()
        self.hint.setVisible(not self._session.selection.people)
