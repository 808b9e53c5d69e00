"""How a row of points is painted, dragged and typed into."""

from __future__ import annotations

from PySide6.QtCore import (
    QAbstractItemModel,
    QEvent,
    QModelIndex,
    QObject,
    QPersistentModelIndex,
    QRectF,
    Qt,
    Signal,
)
from PySide6.QtGui import QColor, QMouseEvent, QPainter
from PySide6.QtWidgets import QComboBox, QLineEdit, QStyle, QStyledItemDelegate, QStyleOptionViewItem, QWidget

from deliberate.window.session import Session
from deliberate.window.sidebar.people_model import BELIEF_ROLE
from deliberate.window.sidebar.points_model import BASES, BASIS, POINTS, POINTS_ROLE
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

    def setModelData(self, editor: QWidget, model: QAbstractItemModel, index: Index) -> None:
        if isinstance(editor, QComboBox):
            model.setData(index, editor.currentText())
        else:
            super().setModelData(editor, model, index)

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
            self.finish()
            return True
        return False

    def finish(self) -> None:
        """End a drag that was let go outside the rows as if on them."""
        if self._dragged is not None:
            (row, points), self._dragged = self._dragged, None
            self.given.emit(row, points)

    def _propose(self, row: int, x: float, bar: QRectF) -> None:
        points = round(min(max((x - bar.left()) / max(bar.width(), 1.0), 0.0), 1.0) * 100)
        self._dragged = (row, float(points))
        self.proposed.emit(row, float(points))
