"""The table of people: sorted on demand, selected in step with the canvas, edited by keyboard."""

from __future__ import annotations

from collections.abc import Iterator

from PySide6.QtCore import (
    QItemSelection,
    QItemSelectionModel,
    QModelIndex,
    QPoint,
    QRect,
    QSortFilterProxyModel,
    Qt,
    QTimer,
)
from PySide6.QtGui import QColor, QGuiApplication, QKeyEvent, QKeySequence, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QAbstractItemDelegate, QAbstractItemView, QMenu, QTableView, QWidget

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import count
from deliberate.scenario import edits
from deliberate.window.session import Session
from deliberate.window.sidebar import people_sheet
from deliberate.window.sidebar.column_fit import ColumnFit
from deliberate.window.sidebar.delegates import CellDelegate
from deliberate.window.sidebar.people_columns import Column
from deliberate.window.sidebar.people_model import SORT_ROLE, PeopleModel
from deliberate.window.theme import Look

NOW_EVERY_MS = 100
EMPTY_HINT = "Nobody yet: double-click on the picture, or paste names here"
Keys = QKeySequence.StandardKey
Hint = QAbstractItemDelegate.EndEditHint


class PeopleTable(QTableView):
    """People in rows; the rows selected are the people selected."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session, self._look = session, look
        self._following = False
        self._sorted = (-1, Qt.SortOrder.AscendingOrder)
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
        self._now.timeout.connect(self._show_round)
        self._dress()
        self.columns = ColumnFit(self)
        self.selectionModel().selectionChanged.connect(self._tell_selection)
        session.selection_changed.connect(self._take_selection)
        self.people.modelReset.connect(self._take_selection)
        session.player.moved.connect(self._follow_round)
        session.rehearsal_changed.connect(self._show_round)
        self.horizontalHeader().sectionClicked.connect(self.sort_by)
        self.horizontalHeader().customContextMenuRequested.connect(self._open_header_menu)
        self.customContextMenuRequested.connect(self._open_menu)
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
        self.setTabKeyNavigation(False)  # Tab goes from cell to cell while typing, otherwise out of the table
        self.setShowGrid(False)
        self.setWordWrap(False)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)
        self.verticalHeader().hide()
        self.verticalHeader().setMinimumSectionSize(24)
        self.verticalHeader().setDefaultSectionSize(max(self.fontMetrics().height() + 8, 24))
        header = self.horizontalHeader()
        header.setHighlightSections(False)
        header.setSectionsClickable(True)
        header.setSortIndicatorShown(False)
        header.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)

    def refresh(self) -> None:
        """Read the people again."""
        self.people.refresh()
        self.columns.measure(self._session.variant, self._session.question)

    # Order

    def sort_by(self, column: int) -> None:
        """Sort by a column: up, down, then the meeting's own order again."""
        up, down = Qt.SortOrder.AscendingOrder, Qt.SortOrder.DescendingOrder
        before, self._sorted = self._sorted, (column, up)  # the header's own indicator has moved already
        if before == (column, up):
            self._sorted = (column, down)
        elif before == (column, down):
            self._sorted = (-1, up)
        header = self.horizontalHeader()
        header.setSortIndicatorShown(self._sorted[0] >= 0)
        header.setSortIndicator(*self._sorted)
        self.proxy.sort(*self._sorted)

    # Selection, both ways

    def _tell_selection(self) -> None:
        if self._following:
            return
        rows = self.selectionModel().selectedRows()
        chosen = {self._person_at(index.row()) for index in rows}
        self._following = True
        self._session.select(people=chosen)
        self._following = False

    def _take_selection(self) -> None:
        if self._following:
            return
        wanted = self._session.selection.people
        selection = QItemSelection()
        first = QModelIndex()
        for row in range(self.proxy.rowCount()) if wanted else ():
            if self._person_at(row) in wanted:
                index = self.proxy.index(row, 0)
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

    def _person_at(self, row: int) -> str:
        return self.people.person(self._source_row(row)).id

    def _source_row(self, row: int) -> int:
        return self.proxy.mapToSource(self.proxy.index(row, 0)).row()

    def _follow_round(self) -> None:
        """At most ten times a second: a table of hundreds is slow to refresh."""
        if not self._now.isActive() and self.isVisible():
            self._now.start()

    def _show_round(self) -> None:
        if self.isVisible():
            self.people.refresh_now()

    # Typing

    def closeEditor(self, editor: QWidget, hint: QAbstractItemDelegate.EndEditHint) -> None:
        """Return goes on to the next person, Tab to the next cell that can be typed into."""
        super().closeEditor(editor, Hint.NoHint)
        current = self.currentIndex()
        if hint == Hint.SubmitModelCache and len(self._session.selection.people) <= 1:
            self._go_to(current.siblingAtRow(current.row() + 1))
        elif hint in (Hint.EditNextItem, Hint.EditPreviousItem):
            cell = self._typed_next(current, 1 if hint == Hint.EditNextItem else -1)
            self._go_to(cell)
            if cell.isValid():
                self.edit(cell)

    def _go_to(self, cell: QModelIndex) -> None:
        if cell.isValid():
            stays = cell.row() == self.currentIndex().row()  # then all selected people stay selected
            flags = QItemSelectionModel.SelectionFlag
            self.selectionModel().setCurrentIndex(
                cell, flags.NoUpdate if stays else flags.ClearAndSelect | flags.Rows
            )
            self.scrollTo(cell)

    def _typed_next(self, cell: QModelIndex, step: int) -> QModelIndex:
        """The next cell on screen that text can be typed into, row by row; none after the last."""
        columns = self.model().columnCount()
        place = cell.row() * columns + cell.column() + step
        while 0 <= place < self.model().rowCount() * columns:
            other = self.model().index(*divmod(place, columns))
            if not self.isColumnHidden(other.column()) and other.flags() & Qt.ItemFlag.ItemIsEditable:
                return other
            place += step
        return QModelIndex()

    # Clipboard

    def copy(self) -> None:
        """Put the selected rows on the clipboard, as they are sorted and with the columns on screen."""
        rows = sorted(index.row() for index in self.selectionModel().selectedRows())
        if not rows:
            return
        people = [self.people.row(self._source_row(row)) for row in rows]
        text = people_sheet.as_text(people, list(self._columns_from(0)), self._session.question)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied {count(len(rows), 'row', 'rows')}")

    def paste(self) -> None:
        """Put the cells on the clipboard over the table from the current cell on; lines beyond the last add people.

        A single cell goes to all selected people. Without a current cell people are added.
        """
        session, current = self._session, self.currentIndex()
        try:
            cells = people_sheet.cells_in(QGuiApplication.clipboard().text())
        except DeliberateError as error:
            session.refused.emit(str(error))
            return
        if len(cells) == len(cells[0]) == 1 and len(session.selection.people) > 1 and current.isValid():
            self.people.give(self._source_row(current.row()), Column(current.column()), cells[0][0])
            return
        first = current.row() if current.isValid() else self.proxy.rowCount()
        edit = people_sheet.pasted(
            cells,
            [self._person_at(row) for row in range(first, self.proxy.rowCount())],
            list(self._columns_from(max(current.column(), 0))),
            question=session.question.id,
            variant=session.variant.name,
        )
        session.edit(f"Paste {count(len(cells), 'row', 'rows')}", edit)

    def _columns_from(self, first: int) -> Iterator[Column]:
        return (column for column in Column if column >= first and not self.isColumnHidden(column))

    # Menus

    def _open_menu(self, at: QPoint) -> None:
        menu = self._menu()
        current = self.indexAt(at)
        if current.isValid() and current.flags() & Qt.ItemFlag.ItemIsEditable:
            menu.addAction("Change", lambda: self.edit(current))
            menu.addSeparator()
        some = self.selectionModel().hasSelection()
        menu.addAction("Copy", self.copy).setEnabled(some)
        menu.addAction("Paste", self.paste)
        menu.addAction("Select all", self.selectAll)
        menu.addSeparator()
        menu.addAction("Remove", self._remove_selected).setEnabled(some)
        menu.addSeparator()
        columns = menu.addMenu("Columns")
        columns.setToolTipsVisible(True)
        self.columns.add_to(columns)
        menu.popup(self.viewport().mapToGlobal(at))

    def _open_header_menu(self, at: QPoint) -> None:
        menu = self._menu()
        self.columns.add_to(menu)
        menu.popup(self.horizontalHeader().mapToGlobal(at))

    def _menu(self) -> QMenu:
        menu = QMenu(self)
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        menu.setToolTipsVisible(True)
        return menu

    # Keys and painting

    def keyPressEvent(self, event: QKeyEvent) -> None:
        current, editing = self.currentIndex(), self.state() == QAbstractItemView.State.EditingState
        if event.matches(Keys.Copy):
            self.copy()
        elif event.matches(Keys.Paste):
            self.paste()
        elif event.key() == Qt.Key.Key_Delete and not editing:
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
        people = [person for person in session.variant.people if person.id in session.selection.people]
        if not people:
            return
        who = people[0].shown_name if len(people) == 1 else f"{len(people)} people"
        ids, variant = [person.id for person in people], session.variant.name
        session.edit(f"Remove {who}", lambda scenario: edits.remove_people(scenario, ids, variant=variant))

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        with QPainter(self.viewport()) as painter:
            if not self._session.variant.people:
                painter.setPen(QColor(self._look.theme.muted))
                room = self.viewport().rect().adjusted(12, 8, -12, -8)
                painter.drawText(room, Qt.AlignmentFlag.AlignTop | Qt.TextFlag.TextWordWrap, EMPTY_HINT)
            elif self.hasFocus() and self.currentIndex().isValid():
                painter.setPen(QPen(QColor(self._look.theme.accent), 1))
                cell: QRect = self.visualRect(self.currentIndex())
                painter.drawRect(cell.adjusted(0, 0, -1, -1))
