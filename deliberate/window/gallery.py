"""The demos, one row each: a small picture of the people, the title, how many they are, and what it shows."""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path

from PySide6.QtCore import (
    QAbstractListModel,
    QModelIndex,
    QPersistentModelIndex,
    QPointF,
    QRect,
    QRectF,
    QSize,
    Qt,
    Signal,
)
from PySide6.QtGui import QColor, QFont, QPainter, QPen
from PySide6.QtWidgets import (
    QDialog,
    QHBoxLayout,
    QListView,
    QPushButton,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QVBoxLayout,
    QWidget,
)

from deliberate import files
from deliberate.files.resources import demo_scenarios
from deliberate.scenario.values import Scenario
from deliberate.window.text import elided, plain_label
from deliberate.window.theme import Look, belief_color

Index = QModelIndex | QPersistentModelIndex
SKETCH = QSize(76, 54)
MARGIN = 10
ROW = Qt.ItemDataRole.UserRole


@dataclass(frozen=True)
class Demo:
    """One row of the gallery."""

    path: Path
    scenario: Scenario

    @property
    def people(self) -> str:
        """How many people the meeting has."""
        count = len(self.scenario.variants[0].people)
        return f"{count} people" if count != 1 else "1 person"

    @property
    def says(self) -> str:
        """The first sentence of its notes."""
        return first_sentence(self.scenario.notes)


def first_sentence(text: str) -> str:
    """The first sentence of `text`, or all of it where none ends."""
    found = re.match(r"(.+?[.!?])(?=\s|$)", text.strip(), re.DOTALL)
    return " ".join((found.group(1) if found else text).split())


class _Demos(QAbstractListModel):
    def __init__(self, demos: tuple[Demo, ...], parent: QWidget) -> None:
        super().__init__(parent)
        self._demos = demos

    def rowCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else len(self._demos)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        if not index.isValid():
            return None
        demo = self._demos[index.row()]
        if role == Qt.ItemDataRole.DisplayRole:
            return demo.scenario.title  # what typing the first letters looks for
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return f"{demo.scenario.title}, {demo.people}. {demo.says}"
        return demo if role == ROW else None


class _Row(QStyledItemDelegate):
    """Paints a row; every text in it is drawn as it is."""

    def __init__(self, look: Look, parent: QListView) -> None:
        super().__init__(parent)
        self._look, self._list = look, parent

    def sizeHint(self, option: QStyleOptionViewItem, index: Index) -> QSize:
        demo: Demo = index.data(ROW)
        words = self._words(QRect(0, 0, self._list.viewport().width(), 10_000))
        metrics = option.fontMetrics
        says = metrics.boundingRect(words, Qt.TextFlag.TextWordWrap, demo.says)
        height = max(SKETCH.height(), metrics.height() + 4 + says.height())
        return QSize(words.width(), height + 2 * MARGIN)

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        demo: Demo = index.data(ROW)
        theme, place = self._look.theme, option.rect
        chosen = bool(option.state & QStyle.StateFlag.State_Selected)
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if chosen:
            painter.fillRect(place, QColor(theme.tint))
            painter.fillRect(QRect(place.left(), place.top(), 3, place.height()), QColor(theme.accent))
        at = QRect(place.left() + MARGIN + 2, place.top() + MARGIN, SKETCH.width(), SKETCH.height())
        paint_sketch(painter, QRectF(at), demo.scenario, self._look)
        words = self._words(place)
        title_font = QFont(option.font)
        title_font.setWeight(QFont.Weight.DemiBold)
        line = option.fontMetrics.height()
        count_width = option.fontMetrics.horizontalAdvance(demo.people) + 12
        painter.setPen(QColor(theme.muted))
        painter.drawText(
            QRect(words.left(), words.top(), words.width(), line), Qt.AlignmentFlag.AlignRight, demo.people
        )
        painter.drawText(words.adjusted(0, line + 4, 0, 0), Qt.TextFlag.TextWordWrap, demo.says)
        painter.setPen(QColor(theme.accent if chosen else theme.ink))
        painter.setFont(title_font)
        title = elided(demo.scenario.title, title_font, words.width() - count_width)
        painter.drawText(QRect(words.left(), words.top(), words.width() - count_width, line), 0, title)
        painter.restore()

    @staticmethod
    def _words(place: QRect) -> QRect:
        return place.adjusted(2 * MARGIN + SKETCH.width() + 8, MARGIN, -MARGIN - 4, 0)


def paint_sketch(painter: QPainter, place: QRectF, scenario: Scenario, look: Look) -> None:
    """The first variant's people at their places in the colours of their starts, and the arrows as thin lines."""
    variant, question = scenario.variants[0], scenario.questions[0]
    spots = {person.id: (person.x or 0.0, person.y or 0.0) for person in variant.people}
    if not spots:
        return
    xs, ys = zip(*spots.values(), strict=True)
    radius = 5.0 if len(spots) <= 16 else 3.0
    inner = place.adjusted(radius, radius, -radius, -radius)
    scale = min(inner.width() / (max(xs) - min(xs) or 1.0), inner.height() / (max(ys) - min(ys) or 1.0))
    middle_x, middle_y = (max(xs) + min(xs)) / 2, (max(ys) + min(ys)) / 2
    points = {
        id_: inner.center() + QPointF((x - middle_x) * scale, (y - middle_y) * scale) for id_, (x, y) in spots.items()
    }
    painter.setPen(QPen(QColor(look.theme.line), 1.0 if len(variant.arrows) <= 60 else 0.4))
    for arrow in variant.arrows:
        painter.drawLine(points[arrow.listener], points[arrow.source])
    painter.setPen(QPen(QColor(look.theme.panel), 1.0))
    for person in variant.people:
        painter.setBrush(belief_color(person.beliefs.get(question.id, question.middle), question, look.theme))
        painter.drawEllipse(points[person.id], radius, radius)


class Gallery(QDialog):
    """A list of demos to choose from; Return, a double click or the button opens one."""

    chosen = Signal(object)  # the path of the demo

    def __init__(self, look: Look, parent: QWidget, paths: tuple[Path, ...] | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle("Demos")
        demos = tuple(Demo(path, files.read(path)) for path in (demo_scenarios() if paths is None else paths))
        self.list = QListView(self)
        self.list.setAccessibleName("Demos")
        self.list.setModel(_Demos(demos, self))
        self.list.setItemDelegate(_Row(look, self.list))
        self.list.setVerticalScrollMode(QListView.ScrollMode.ScrollPerPixel)
        self.list.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.list.setResizeMode(QListView.ResizeMode.Adjust)
        self.list.setCurrentIndex(self.list.model().index(0, 0))
        self.list.activated.connect(self._open)
        self.open_button = QPushButton("&Open", self)
        self.open_button.setDefault(True)
        self.open_button.setEnabled(bool(demos))
        self.open_button.clicked.connect(lambda: self._open(self.list.currentIndex()))
        close = QPushButton("Close", self)
        close.setAutoDefault(False)
        close.clicked.connect(self.reject)
        buttons = QHBoxLayout()
        buttons.setSpacing(8)
        buttons.addWidget(plain_label(self, muted=True, text="All people and places are invented."), 1)
        buttons.addWidget(close)
        buttons.addWidget(self.open_button)
        buttons.setContentsMargins(16, 10, 16, 14)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.list, 1)
        column.addLayout(buttons)
        self.resize(660, 600)

    def _open(self, index: Index) -> None:
        demo: Demo | None = index.data(ROW)
        if demo is not None:
            self.accept()
            self.chosen.emit(demo.path)
