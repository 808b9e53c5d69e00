"""Whose view counts for the selected person: bars to drag, numbers to type, names to add."""

from __future__ import annotations

from PySide6.QtCore import QPoint, QStringListModel, Qt, QTimer, Signal
from PySide6.QtGui import QKeyEvent, QMouseEvent, QResizeEvent
from PySide6.QtWidgets import (
    QAbstractItemDelegate,
    QAbstractItemView,
    QCheckBox,
    QCompleter,
    QHBoxLayout,
    QHeaderView,
    QLineEdit,
    QMenu,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from deliberate.rehearsal.words import amount, shown_names
from deliberate.window.session import Session
from deliberate.window.sidebar.points_delegate import NUMBER_SAMPLE, PointsDelegate
from deliberate.window.sidebar.points_model import BASES, BASIS, NAME, POINTS, PointsModel
from deliberate.window.text import ElidedLabel, explain, plain_label, strong
from deliberate.window.theme import Look

COLOURS_EVERY_MS = 100
NAME_LETTERS = 10
SHORT_BAR = 44
Hint = QAbstractItemDelegate.EndEditHint


class PointsTable(QWidget):
    """Heading, table, sum, and the line that adds somebody; shown while one person is selected."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self.model = PointsModel(session, self)
        self.heading = ElidedLabel(self)
        strong(self.heading)
        self.table = _Rows(self)
        self.table.setModel(self.model)
        self.delegate = PointsDelegate(session, look, self)
        self.table.setItemDelegate(self.delegate)
        self.table.fit_columns()
        self.make_room = QCheckBox("others make room", self)
        explain(
            self.make_room,
            "When one number changes, all others shrink or grow in proportion; otherwise only the own view does",
        )
        self.make_room.setChecked(True)
        self.sum = plain_label(self)
        self.sum.setWordWrap(False)
        self.sum.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.add = QLineEdit(self)
        self.add.setPlaceholderText("add someone who is heard …")
        self.add.setAccessibleName("Add someone who is heard")
        self.known = QStringListModel(self)
        self.completer = QCompleter(self.known, self)
        self.completer.setCaseSensitivity(Qt.CaseSensitivity.CaseInsensitive)
        self.completer.setFilterMode(Qt.MatchFlag.MatchContains)
        self.add.setCompleter(self.completer)
        self._colours = QTimer(self)
        self._colours.setSingleShot(True)
        self._colours.setInterval(COLOURS_EVERY_MS)
        self._colours.timeout.connect(self.model.refresh_beliefs)
        self._lay_out()
        self.delegate.proposed.connect(self._preview)
        self.delegate.given.connect(self._give)
        self.table.removal_wanted.connect(self._stop_hearing)
        self.table.let_go.connect(self.delegate.finish)
        self.table.customContextMenuRequested.connect(self._open_menu)
        self.make_room.toggled.connect(self._set_make_room)
        # Queued: Return in the list ends the field too, before the completer has put the name into it.
        self.add.returnPressed.connect(self._hear, Qt.ConnectionType.QueuedConnection)
        self.completer.activated.connect(self._hear, Qt.ConnectionType.QueuedConnection)
        session.player.moved.connect(self._follow_round)
        session.rehearsal_changed.connect(self._follow_round)
        look.changed.connect(self.table.viewport().update)

    def _lay_out(self) -> None:
        foot = QHBoxLayout()
        foot.addWidget(self.make_room, 1)
        foot.addWidget(self.sum)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(4)
        column.addWidget(self.heading)
        column.addWidget(self.table, 1)
        column.addLayout(foot)
        column.addWidget(self.add)

    def refresh(self) -> None:
        """Read the selected person's points again, and who could be added."""
        self.model.refresh()
        listener, variant = self.model.listener, self._session.variant
        self.setVisible(listener is not None)
        if listener is None:
            return
        names = shown_names(variant)
        self.heading.setText(f"Whose view counts for {names.get(listener, listener)}")
        self.sum.setText(f"in all {amount(round(self.model.total, 6))}")
        names_left = [names[person.id] for person in variant.people if not self.model.hears(person.id)]
        if names_left != self.known.stringList():
            self.known.setStringList(names_left)

    def _follow_round(self) -> None:
        if not self._colours.isActive() and self.isVisible():
            self._colours.start()

    def _preview(self, row: int, _points: float) -> None:
        self.table.update(self.model.index(row, POINTS))

    def _give(self, row: int, points: float) -> None:
        if row < self.model.rowCount():
            self.model.give(self.model.source(row), points)

    def _set_make_room(self, make_room: bool) -> None:
        self.model.make_room = make_room

    # Adding and removing

    def _hear(self) -> None:
        """Add the person whose name, or the only one whose name begins so, stands in the field."""
        typed = " ".join(self.add.text().split())
        if not typed:
            return
        known = shown_names(self._session.variant)
        exact = [one for one, name in known.items() if name.casefold() == typed.casefold()]
        found = exact or [one for one, name in known.items() if name.casefold().startswith(typed.casefold())]
        if len(found) != 1:
            how_many = "nobody here" if not found else "more than one person"
            self._session.refused.emit(f"{how_many} is called “{typed}”: choose a name from the list")
        elif self.model.hears(found[0]):
            self._session.refused.emit(f"{known[found[0]]} counts already: change the points in the table")
        elif self.model.hear(found[0]):
            self.add.clear()

    def _stop_hearing(self) -> None:
        rows = {index.row() for index in self.table.selectionModel().selectedIndexes()}
        self.model.stop_hearing([self.model.source(row) for row in sorted(rows)])

    def _open_menu(self, at: QPoint) -> None:
        index = self.table.indexAt(at)
        if not index.isValid():
            return
        row = index.row()
        menu = QMenu(self)
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        menu.addAction("Change the points", lambda: self.table.edit(self.model.index(row, POINTS)))
        if self.model.source(row) != self.model.listener:
            source = self.model.source(row)
            basis = menu.addMenu("Where the number comes from")
            for word in BASES:
                action = basis.addAction(word, lambda word=word: self.model.set_basis(source, word))
                action.setCheckable(True)
                action.setChecked(self.model.index(row, BASIS).data() == word)
            menu.addSeparator()
            menu.addAction("Stop listening", lambda: self.model.stop_hearing([source]))
        menu.popup(self.table.viewport().mapToGlobal(at))


class _Rows(QTableView):
    removal_wanted = Signal()
    let_go = Signal()

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAccessibleName("Points of the selected person")
        self.setShowGrid(False)
        self.setWordWrap(False)
        self.setTabKeyNavigation(False)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setEditTriggers(
            QAbstractItemView.EditTrigger.DoubleClicked
            | QAbstractItemView.EditTrigger.EditKeyPressed
            | QAbstractItemView.EditTrigger.AnyKeyPressed
        )
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)
        self.setMinimumHeight(90)
        self.verticalHeader().hide()
        self.verticalHeader().setDefaultSectionSize(max(self.fontMetrics().height() + 8, 24))
        self.horizontalHeader().hide()
        self.horizontalHeader().setMinimumSectionSize(20)
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Fixed)

    def fit_columns(self) -> None:
        """Names first, then bars long enough to be dragged; where a number comes from only where there is room."""
        metrics, room = self.fontMetrics(), self.viewport().width()
        least = metrics.horizontalAdvance("n") * NAME_LETTERS
        points = metrics.horizontalAdvance(NUMBER_SAMPLE) + 16 + SHORT_BAR
        basis = metrics.horizontalAdvance("observed") + 14
        shows_basis = least + points + basis <= room
        left = room - least - points - (basis if shows_basis else 0)
        name = least + max(left, 0) // 2
        self.setColumnHidden(BASIS, not shows_basis)
        self.setColumnWidth(NAME, name)
        self.setColumnWidth(BASIS, basis)
        self.setColumnWidth(POINTS, max(room - name - (basis if shows_basis else 0), points))

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self.fit_columns()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        super().mouseReleaseEvent(event)
        self.let_go.emit()

    def closeEditor(self, editor: QWidget, hint: QAbstractItemDelegate.EndEditHint) -> None:
        """Return and Tab go on to the next number."""
        steps = {Hint.SubmitModelCache: 1, Hint.EditNextItem: 1, Hint.EditPreviousItem: -1}
        super().closeEditor(editor, Hint.NoHint)
        current = self.currentIndex()
        after = current.siblingAtRow(current.row() + steps.get(hint, 0))
        if hint in steps and after.isValid():
            self.setCurrentIndex(after)
            if hint != Hint.SubmitModelCache:
                self.edit(after)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        editing = self.state() == QAbstractItemView.State.EditingState
        if event.key() == Qt.Key.Key_Delete and not editing:
            self.removal_wanted.emit()
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and not editing and self.currentIndex().isValid():
            self.edit(self.currentIndex().siblingAtColumn(POINTS))
        else:
            super().keyPressEvent(event)
