"""How cells are painted and typed into."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, QObject, QPersistentModelIndex, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter
from PySide6.QtWidgets import QLineEdit, QStyle, QStyledItemDelegate, QStyleOptionViewItem, QWidget

from deliberate.window.session import Session
from deliberate.window.sidebar.people_columns import Column
from deliberate.window.sidebar.people_model import ABSENT_ROLE, BELIEF_ROLE
from deliberate.window.theme import Look, belief_color

Index = QModelIndex | QPersistentModelIndex
SWATCH = 9.0
MARGIN = 3
EDITOR_ROOM = 28  # beyond the text as it is, for a few letters more


class CellDelegate(QStyledItemDelegate):
    """A plain field to type into, and a swatch of the belief's colour before the present belief."""

    def __init__(self, session: Session, look: Look, parent: QObject) -> None:
        super().__init__(parent)
        self._session, self._look = session, look

    def createEditor(self, parent: QWidget, option: QStyleOptionViewItem, index: Index) -> QWidget:
        editor = QLineEdit(parent)
        editor.setFrame(False)
        editor.setAlignment(Qt.AlignmentFlag(index.data(Qt.ItemDataRole.TextAlignmentRole)))
        editor.setTextMargins(0, 0, 0, 0)
        editor.setStyleSheet("padding: 0 2px; border-radius: 0;")
        editor.setAccessibleName(str(index.data(Qt.ItemDataRole.AccessibleTextRole)))
        return editor

    def updateEditorGeometry(self, editor: QWidget, option: QStyleOptionViewItem, index: Index) -> None:
        """As wide as the cell, and wider where a long name needs it and the table has the room."""
        cell = option.rect
        needed = option.fontMetrics.horizontalAdvance(str(index.data(Qt.ItemDataRole.EditRole))) + EDITOR_ROOM
        left = max(cell.left(), 0) if index.column() == Column.NAME else cell.left()
        most = editor.parentWidget().width() - left
        editor.setGeometry(left, cell.top(), max(min(needed, most), cell.width()), cell.height())

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        """The cell's text, muted for those who are not there. Qt itself would ask each for ten roles."""
        theme, cell = self._look.theme, option.rect
        if index.column() == Column.PRESENT:
            option.state &= ~QStyle.StateFlag.State_HasFocus  # the view paints the focus itself, in the accent
            super().paint(painter, option, index)
            return
        if option.state & QStyle.StateFlag.State_Selected:
            painter.fillRect(cell, QColor(theme.tint))
        text = str(index.data())
        room = cell.adjusted(MARGIN, 0, -MARGIN, 0)
        needed = option.fontMetrics.horizontalAdvance(text)
        if needed > room.width():
            text = option.fontMetrics.elidedText(text, Qt.TextElideMode.ElideRight, room.width())
        painter.setPen(QColor(theme.muted if index.data(ABSENT_ROLE) else theme.ink))
        side = Qt.AlignmentFlag(index.data(Qt.ItemDataRole.TextAlignmentRole))
        painter.drawText(room, side | Qt.TextFlag.TextSingleLine, text)
        if index.column() == Column.NOW and needed + SWATCH + 3 * MARGIN < cell.width():
            self._paint_swatch(painter, QRectF(cell), float(index.data(BELIEF_ROLE)))

    def _paint_swatch(self, painter: QPainter, cell: QRectF, belief: float) -> None:
        theme = self._look.theme
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QColor(theme.mark))
        painter.setBrush(belief_color(belief, self._session.question, theme))
        painter.drawEllipse(QPointF(cell.left() + SWATCH / 2 + MARGIN, cell.center().y()), SWATCH / 2, SWATCH / 2)
        painter.restore()
