"""How cells are painted and typed into."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, QObject, QPersistentModelIndex, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter
from PySide6.QtWidgets import QLineEdit, QStyle, QStyledItemDelegate, QStyleOptionViewItem, QWidget

from deliberate.window.session import Session
from deliberate.window.sidebar.people_columns import Column
from deliberate.window.sidebar.people_model import BELIEF_ROLE
from deliberate.window.theme import Look, belief_color

Index = QModelIndex | QPersistentModelIndex
SWATCH = 9.0
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
        option.state &= ~QStyle.StateFlag.State_HasFocus  # the view paints the focus itself, in the accent
        super().paint(painter, option, index)
        belief = index.data(BELIEF_ROLE)
        if belief is not None and self._room(option, index):
            painter.save()
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(QColor(self._look.theme.mark))
            painter.setBrush(belief_color(belief, self._session.question, self._look.theme))
            centre = QPointF(option.rect.left() + SWATCH / 2 + 4, QRectF(option.rect).center().y())
            painter.drawEllipse(centre, SWATCH / 2, SWATCH / 2)
            painter.restore()

    def _room(self, option: QStyleOptionViewItem, index: Index) -> bool:
        text = str(index.data() or "")
        return option.rect.width() - option.fontMetrics.horizontalAdvance(text) > SWATCH + 16
