"""The table of people: sorted on demand, selected in step with the canvas, edited by keyboard."""

from __future__ import annotations

from PySide6.QtCore import (
    QItemSelection,
    QItemSelectionModel,
    QModelIndex,
    QRect,
    QSortFilterProxyModel,
    Qt,
    QTimer,
)
from PySide6.QtGui import QColor, QKeyEvent, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableView, QWidget

from deliberate.scenario import edits
from deliberate.window.session import Session
from deliberate.window.sidebar.delegates import CellDelegate
from deliberate.window.sidebar.people_model import SORT_ROLE, Column, PeopleModel
from deliberate.window.theme import Look

NOW_EVERY_MS = 100
SAMPLES = {
    Column.START: "100.0", Column.NOW: "  100.0", Column.MARGIN: "10", Column.FIRMNESS: "firm", Column.OWN: "33.3",
    Column.BALLOTS: "votes", Column.PRESENT: "here",
}  # fmt: skip
EMPTY_HINT = "Nobody yet: double-click on the picture"


class PeopleTable(QTableView):
    """People in rows; the rows selected are the people selected."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session, self._look = session, look
        self._following = False
        self._sorted_by = -1
        self.people = PeopleModel(session, self)
        self.proxy = QSortFilterProxyModel(self)
        self.proxy.setDynamicSortFilter(False)
        self.proxy.setSortRole(SORT_ROLE)
        self.proxy.setSourceModel(self.people)
        self.setModel(self.proxy)
        self.setItemDelegate(CellDelegate(session, look, self))
        self._now = QTimer(self)
        self._now.setSingleShot(True)
        self._now.setInterval(NOW_EVERY_MS)
        self._now.timeout.connect(self.people.refresh_now)
        self._dress()
        self.selectionModel().selectionChanged.connect(self._tell_selection)
        session.selection_changed.connect(self._take_selection)
        self.people.modelReset.connect(self._take_selection)
        session.player.moved.connect(self._follow_round)
        self.horizontalHeader().sectionClicked.connect(self.sort_by)
        look.changed.connect(self.viewport().update)
        self._take_selection()

    def _dress(self) -> None:
        self.setAccessibleName("People")
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ExtendedSelection)
        self.setEditTriggers(
            QAbstractItemView.EditTrigger.DoubleClicked
            | QAbstractItemView.EditTrigger.EditKeyPressed
            | QAbstractItemView.EditTrigger.AnyKeyPressed
        )
        self.setShowGrid(False)
        self.setWordWrap(False)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.verticalHeader().hide()
        height = self.fontMetrics().height()
        self.verticalHeader().setDefaultSectionSize(max(height + 8, 24))
        self.verticalHeader().setMinimumSectionSize(24)
        header = self.horizontalHeader()
        header.setHighlightSections(False)
        header.setMinimumSectionSize(24)
        header.setSectionsClickable(True)
        header.setSectionResizeMode(QHeaderView.ResizeMode.Interactive)
        header.setSectionResizeMode(Column.NAME, QHeaderView.ResizeMode.Stretch)
        header.setSortIndicatorShown(False)
        for column, sample in SAMPLES.items():
            self.setColumnWidth(column, self.fontMetrics().horizontalAdvance(sample) + 12)

    # Order

    def sort_by(self, column: int) -> None:
        """Sort by a column: up, down, then the meeting's own order again."""
        header = self.horizontalHeader()
        order = header.sortIndicatorOrder()
        if column != self._sorted_by:
            self._sorted_by, order = column, Qt.SortOrder.AscendingOrder
        elif order == Qt.SortOrder.AscendingOrder:
            order = Qt.SortOrder.DescendingOrder
        else:
            self._sorted_by = -1
        header.setSortIndicatorShown(self._sorted_by >= 0)
        header.setSortIndicator(column, order)
        self.proxy.sort(self._sorted_by, order)

    # Selection, both ways

    def _tell_selection(self) -> None:
        if self._following:
            return
        rows = self.selectionModel().selectedRows()
        chosen = {self.people.person(self.proxy.mapToSource(row).row()).id for row in rows}
        self._following = True
        self._session.select(people=chosen)
        self._following = False

    def _take_selection(self) -> None:
        if self._following:
            return
        wanted = self._session.selection.people
        selection = QItemSelection()
        first = QModelIndex()
        for row in range(self.proxy.rowCount()):
            index = self.proxy.index(row, 0)
            if self.people.person(self.proxy.mapToSource(index).row()).id in wanted:
                selection.select(index, self.proxy.index(row, self.proxy.columnCount() - 1))
                first = index if not first.isValid() else first
        self._following = True
        self.selectionModel().select(selection, QItemSelectionModel.SelectionFlag.ClearAndSelect)
        if first.isValid() and len(wanted) == 1 and self.state() != QAbstractItemView.State.EditingState:
            column = max(self.currentIndex().column(), 0)
            current = first.siblingAtColumn(column)
            self.selectionModel().setCurrentIndex(current, QItemSelectionModel.SelectionFlag.NoUpdate)
            self.scrollTo(current)
        self._following = False

    def _follow_round(self) -> None:
        """At most ten times a second: a table of hundreds is slow to refresh."""
        if not self._now.isActive():
            self._now.start()

    # Keys and painting

    def keyPressEvent(self, event: QKeyEvent) -> None:
        current, editing = self.currentIndex(), self.state() == QAbstractItemView.State.EditingState
        if event.key() == Qt.Key.Key_Delete and not editing:
            self._remove_selected()
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and not editing and current.isValid():
            self.edit(current)
        elif event.key() == Qt.Key.Key_Space and current.isValid() and current.column() == Column.PRESENT:
            checked = current.data(Qt.ItemDataRole.CheckStateRole) == Qt.CheckState.Checked
            state = Qt.CheckState.Unchecked if checked else Qt.CheckState.Checked
            self.proxy.setData(current, state, Qt.ItemDataRole.CheckStateRole)
        else:
            super().keyPressEvent(event)

    def _remove_selected(self) -> None:
        session = self._session
        ids = [person.id for person in session.variant.people if person.id in session.selection.people]
        if not ids:
            return
        who = (
            session.variant.people[self.people.row_of(ids[0]) or 0].shown_name
            if len(ids) == 1
            else f"{len(ids)} people"
        )
        variant = session.variant.name
        session.edit(f"Remove {who}", lambda scenario: edits.remove_people(scenario, ids, variant=variant))

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        with QPainter(self.viewport()) as painter:
            if not self._session.variant.people:
                painter.setPen(QColor(self._look.theme.muted))
                room = self.viewport().rect().adjusted(8, 8, -8, -8)
                painter.drawText(room, Qt.AlignmentFlag.AlignTop | Qt.TextFlag.TextWordWrap, EMPTY_HINT)
            elif self.hasFocus() and self.currentIndex().isValid():
                painter.setPen(QPen(QColor(self._look.theme.accent), 1))
                cell: QRect = self.visualRect(self.currentIndex())
                painter.drawRect(cell.adjusted(0, 0, -1, -1))
