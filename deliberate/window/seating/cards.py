"""Tables as cards: each name with the colour of where that person starts, so that a mixed table can be seen."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QPoint, QPointF, QRect, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QLayout, QLayoutItem, QSizePolicy, QWidget

from deliberate.window.text import explain
from deliberate.window.theme import Look, mix

MARGIN = 10
DOT = 5.0
WIDTH = 172
GAP = 10
INDENT = round(2 * DOT) + 7
SPACE = 3


class TableCard(QWidget):
    """One table: its number and who sits there, drawn as plain text."""

    def __init__(
        self, look: Look, title: str, names: Sequence[str], colors: Sequence[QColor], parent: QWidget
    ) -> None:
        super().__init__(parent)
        self._look = look
        self.title, self.names, self._colors = title, tuple(names), tuple(colors)
        self._heading = QFont(self.font())
        self._heading.setWeight(QFont.Weight.DemiBold)
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self.setAccessibleName(f"{title}: {', '.join(names)}")
        explain(self, f"{title}: {', '.join(names)}")

    def sizeHint(self) -> QSize:
        return QSize(WIDTH, 2 * MARGIN + self._line() + sum(map(self._height, self.names)) + 2)

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def _line(self) -> int:
        return self.fontMetrics().lineSpacing() + SPACE

    def _height(self, name: str) -> int:
        """How high a name is, which wraps where it is too long for a line."""
        room = QRect(0, 0, WIDTH - 2 * MARGIN - INDENT, 10_000)
        return self.fontMetrics().boundingRect(room, self._wrapping(name), name).height() + SPACE

    def _wrapping(self, name: str) -> int:
        """Between words; anywhere only where a single word is too long."""
        flags = Qt.TextFlag.TextWordWrap | Qt.AlignmentFlag.AlignVCenter
        widest = max(map(self.fontMetrics().horizontalAdvance, name.replace("-", "- ").split()), default=0)
        return flags | Qt.TextFlag.TextWrapAnywhere if widest > WIDTH - 2 * MARGIN - INDENT else flags

    def paintEvent(self, event: QPaintEvent) -> None:
        theme, line = self._look.theme, self._line()
        with QPainter(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(QColor(theme.line))
            painter.setBrush(QColor(theme.canvas))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(0.5, 0.5, -0.5, -0.5), 8, 8)
            painter.setFont(self._heading)
            painter.setPen(QColor(theme.muted))
            row = QRect(MARGIN, MARGIN, self.width() - 2 * MARGIN, line)
            painter.drawText(row, Qt.AlignmentFlag.AlignVCenter, self.title)
            painter.setFont(self.font())
            top = row.bottom() + 1
            for name, color in zip(self.names, self._colors, strict=True):
                painter.setPen(QPen(mix(theme.mark, theme.canvas, 0.2), 1))
                painter.setBrush(color)
                painter.drawEllipse(QPointF(MARGIN + DOT, top + line / 2), DOT, DOT)
                painter.setPen(QColor(theme.ink))
                height = self._height(name)
                painter.drawText(
                    QRect(MARGIN + INDENT, top, row.width() - INDENT, height), self._wrapping(name), name
                )
                top += height


class Flow(QLayout):
    """Cards side by side in rows, as many as there is room for."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._items: list[QLayoutItem] = []
        self.setContentsMargins(0, 0, 0, 0)

    def addItem(self, item: QLayoutItem) -> None:
        self._items.append(item)

    def count(self) -> int:
        return len(self._items)

    def itemAt(self, index: int) -> QLayoutItem | None:
        return self._items[index] if 0 <= index < len(self._items) else None

    def takeAt(self, index: int) -> QLayoutItem | None:
        return self._items.pop(index) if 0 <= index < len(self._items) else None

    def hasHeightForWidth(self) -> bool:
        return True

    def heightForWidth(self, width: int) -> int:
        return self._arrange(QRect(0, 0, width, 0), place=False)

    def sizeHint(self) -> QSize:
        return QSize(2 * WIDTH + GAP, self.heightForWidth(2 * WIDTH + GAP))

    def minimumSize(self) -> QSize:
        return QSize(WIDTH, 0)

    def setGeometry(self, area: QRect) -> None:
        super().setGeometry(area)
        self._arrange(area, place=True)

    def _arrange(self, area: QRect, *, place: bool) -> int:
        """Put the cards into rows; how high all rows are together."""
        x, y, high = area.x(), area.y(), 0
        for item in self._items:
            size = item.sizeHint()
            if x > area.x() and x + size.width() > area.right() + 1:
                x, y, high = area.x(), y + high + GAP, 0
            if place:
                item.setGeometry(QRect(QPoint(x, y), size))
            x, high = x + size.width() + GAP, max(high, size.height())
        return y + high - area.y()
