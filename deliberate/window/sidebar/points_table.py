"""Whose view counts for the selected person: bars to drag, numbers to type, names to add."""

from __future__ import annotations

from PySide6.QtCore import (
    QEvent,
    QModelIndex,
    QObject,
    QPersistentModelIndex,
    QPoint,
    QRectF,
    QStringListModel,
    Qt,
    QTimer,
    Signal,
)
from PySide6.QtGui import QColor, QKeyEvent, QMouseEvent, QPainter
from PySide6.QtWidgets import (
    QAbstractItemView,
    QCheckBox,
    QComboBox,
    QCompleter,
    QHeaderView,
    QLineEdit,
    QMenu,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from deliberate.rehearsal.words import shown_names
from deliberate.window.session import Session
from deliberate.window.sidebar.people_model import BELIEF_ROLE
from deliberate.window.sidebar.points_model import BASES, BASIS, NAME, POINTS, POINTS_ROLE, PointsModel
from deliberate.window.text import plain_label, strong
from deliberate.window.theme import Look, belief_color

Index = QModelIndex | QPersistentModelIndex
BAR_HEIGHT = 10.0
NUMBER_SAMPLE = "100.0"


def bar_rect(option: QStyleOptionViewItem) -> QRectF:
    """Where the bar of a points cell lies; the number stands right of it."""
    number = option.fontMetrics.horizontalAdvance(NUMBER_SAMPLE) + 12
    rect = QRectF(option.rect).adjusted(4, 0, -number, 0)
    return QRectF(rect.left(), rect.center().y() - BAR_HEIGHT / 2, max(rect.width(), 0), BAR_HEIGHT)


class PointsDelegate(QStyledItemDelegate):
    """Paints a bar as long as the share, in the source's present colour; a drag along it proposes other points."""

    proposed = Signal(int, float)  # row, points, while the bar is dragged
    given = Signal(int, float)  # row, points, at release

    def __init__(self, session: Session, look: Look, parent: QObject) -> None:
        super().__init__(parent)
        self._session, self._look = session, look
        self._dragged: tuple[int, float] | None = None

    def createEditor(self, parent: QWidget, option: QStyleOptionViewItem, index: Index) -> QWidget:
        if index.column() == BASIS:
            choice = QComboBox(parent)
            choice.addItems(BASES)
            choice.setAccessibleName("Where the number comes from")
            return choice
        editor = QLineEdit(parent)
        editor.setFrame(False)
        editor.setAlignment(Qt.AlignmentFlag.AlignRight)
        editor.setStyleSheet("padding: 0 2px; border-radius: 0;")
        editor.setAccessibleName(str(index.data(Qt.ItemDataRole.AccessibleTextRole)))
        return editor

    def setEditorData(self, editor: QWidget, index: Index) -> None:
        if isinstance(editor, QComboBox):
            editor.setCurrentText(str(index.data()))
        else:
            super().setEditorData(editor, index)

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        option.state &= ~QStyle.StateFlag.State_HasFocus
        theme = self._look.theme
        if index.column() != POINTS:
            if index.column() == BASIS:
                option.palette.setColor(option.palette.ColorRole.Text, QColor(theme.muted))
            super().paint(painter, option, index)
            return
        points = float(index.data(POINTS_ROLE) or 0.0)
        text = str(index.data())
        if self._dragged is not None and self._dragged[0] == index.row():
            points = self._dragged[1]
            text = f"{points:g}"
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(Qt.PenStyle.NoPen)
        if option.state & QStyle.StateFlag.State_Selected:
            painter.fillRect(option.rect, QColor(theme.tint))
        bar = bar_rect(option)
        painter.setBrush(QColor(theme.raised))
        painter.drawRoundedRect(bar, 3, 3)
        belief = index.data(BELIEF_ROLE)
        filled = QRectF(bar.left(), bar.top(), bar.width() * min(points, 100.0) / 100, bar.height())
        painter.setBrush(belief_color(float(belief or 0.0), self._session.question, theme))
        painter.setPen(QColor(theme.mark))
        painter.drawRoundedRect(filled, 3, 3)
        painter.setPen(QColor(theme.ink))
        painter.drawText(
            option.rect.adjusted(0, 0, -6, 0), Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter, text
        )
        painter.restore()

    def editorEvent(self, event: QEvent, model: QObject, option: QStyleOptionViewItem, index: Index) -> bool:
        if index.column() != POINTS or not isinstance(event, QMouseEvent):
            return super().editorEvent(event, model, option, index)
        bar = bar_rect(option)
        x = event.position().x()
        inside = bar.adjusted(-4, -8, 6, 8).contains(event.position())
        if event.type() == QEvent.Type.MouseButtonPress and event.button() == Qt.MouseButton.LeftButton and inside:
            self._propose(index.row(), x, bar)
            return True
        if event.type() == QEvent.Type.MouseMove and self._dragged is not None:
            self._propose(self._dragged[0], x, bar)
            return True
        if event.type() == QEvent.Type.MouseButtonRelease and self._dragged is not None:
            row, points = self._dragged
            self._dragged = None
            self.given.emit(row, points)
            return True
        return False

    def release(self) -> None:
        """Forget a drag that left the table."""
        self._dragged = None

    def _propose(self, row: int, x: float, bar: QRectF) -> None:
        points = round(min(max((x - bar.left()) / max(bar.width(), 1.0), 0.0), 1.0) * 100)
        self._dragged = (row, float(points))
        self.proposed.emit(row, float(points))


class PointsTable(QWidget):
    """Heading, table, and the line that adds somebody; shown while one person is selected."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self.model = PointsModel(session, self)
        self.heading = plain_label(self)
        strong(self.heading)
        self.sub = plain_label(self, muted=True, text="100 points, the own view included")
        self.table = _Rows(self)
        self.table.setModel(self.model)
        self.delegate = PointsDelegate(session, look, self)
        self.table.setItemDelegate(self.delegate)
        self.table.fit_columns()
        self.make_room = QCheckBox("the others make room", self)
        self.make_room.setToolTip(
            "When one number changes, all others shrink or grow in proportion; otherwise only the own view does"
        )
        self.make_room.setChecked(True)
        self.add = QLineEdit(self)
        self.add.setPlaceholderText("add someone who is heard …")
        self.add.setAccessibleName("Add someone who is heard")
        self.known = QStringListModel(self)
        completer = QCompleter(self.known, self)
        completer.setCaseSensitivity(Qt.CaseSensitivity.CaseInsensitive)
        completer.setFilterMode(Qt.MatchFlag.MatchContains)
        self.add.setCompleter(completer)
        self._colours = QTimer(self)
        self._colours.setSingleShot(True)
        self._colours.setInterval(100)
        self._colours.timeout.connect(self.model.refresh_beliefs)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(3)
        for part, stretch in ((self.heading, 0), (self.sub, 0), (self.table, 1), (self.make_room, 0), (self.add, 0)):
            column.addWidget(part, stretch)
        self.delegate.proposed.connect(self._preview)
        self.delegate.given.connect(self._give)
        self.table.removal_wanted.connect(self._stop_hearing)
        self.table.customContextMenuRequested.connect(self._menu)
        self.make_room.toggled.connect(self._set_make_room)
        self.add.returnPressed.connect(self._hear)
        self.model.modelReset.connect(self.refresh)
        session.scenario_changed.connect(self.refresh)
        session.player.moved.connect(self._follow_round)
        session.rehearsal_changed.connect(self.model.refresh_beliefs)
        self.refresh()

    def refresh(self) -> None:
        """Read whose row is shown, and who could be added."""
        listener, variant = self.model.listener, self._session.variant
        self.setVisible(listener is not None)
        if listener is None:
            return
        names = shown_names(variant)
        self.heading.setText(f"Whose view counts for {names.get(listener, listener)}")
        heard = {self.model.source(row) for row in range(self.model.rowCount())}
        self.known.setStringList([names[person.id] for person in variant.people if person.id not in heard])

    def _follow_round(self) -> None:
        if not self._colours.isActive():
            self._colours.start()

    def _preview(self, row: int, _points: float) -> None:
        self.table.update(self.model.index(row, POINTS))

    def _give(self, row: int, points: float) -> None:
        if row < self.model.rowCount():
            self.model.give(self.model.source(row), points)

    def _set_make_room(self, make_room: bool) -> None:
        self.model.make_room = make_room

    def _hear(self) -> None:
        wanted = self.add.text().strip().casefold()
        names = shown_names(self._session.variant)
        found = [one for one, name in names.items() if name.casefold() == wanted]
        found = found or [one for one, name in names.items() if wanted and name.casefold().startswith(wanted)]
        if len(found) != 1:
            self._session.refused.emit(
                f"nobody here is called “{self.add.text().strip()}”; choose a name from the list"
            )
            return
        if self.model.hear(found[0]):
            self.add.clear()

    def _stop_hearing(self) -> None:
        rows = sorted({index.row() for index in self.table.selectionModel().selectedIndexes()})
        sources = [self.model.source(row) for row in rows]
        for source in sources:
            if source != self.model.listener:
                self.model.give(source, 0.0, merge="stop hearing")

    def _menu(self, at: QPoint) -> None:
        index = self.table.indexAt(at)
        if not index.isValid() or self.model.source(index.row()) == self.model.listener:
            return
        self.table.selectRow(index.row())
        menu = QMenu(self)
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        menu.addAction("Change the points", self._edit_points)
        menu.addAction("Change where they come from", self._edit_basis)
        menu.addSeparator()
        menu.addAction("Stop listening", self._stop_hearing)
        menu.popup(self.table.viewport().mapToGlobal(at))

    def _edit_points(self) -> None:
        self.table.edit(self.table.currentIndex().siblingAtColumn(POINTS))

    def _edit_basis(self) -> None:
        self.table.edit(self.table.currentIndex().siblingAtColumn(BASIS))


class _Rows(QTableView):
    removal_wanted = Signal()

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAccessibleName("Points of the selected person")
        self.setShowGrid(False)
        self.setWordWrap(False)
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

    def fit_columns(self) -> None:
        """The points take what names and bases leave."""
        header = self.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        header.setSectionResizeMode(POINTS, QHeaderView.ResizeMode.Stretch)
        letters = self.fontMetrics().horizontalAdvance("n")
        self.setColumnWidth(NAME, letters * 13)
        self.setColumnWidth(BASIS, self.fontMetrics().horizontalAdvance("observed") + 14)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        editing = self.state() == QAbstractItemView.State.EditingState
        if event.key() == Qt.Key.Key_Delete and not editing:
            self.removal_wanted.emit()
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and not editing and self.currentIndex().isValid():
            self.edit(self.currentIndex().siblingAtColumn(POINTS))
        else:
            super().keyPressEvent(event)
