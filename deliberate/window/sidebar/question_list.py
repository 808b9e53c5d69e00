"""The questions of the meeting in a short list: switch, add, order, remove."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QAbstractItemView, QHBoxLayout, QListWidget, QListWidgetItem, QVBoxLayout, QWidget

from deliberate.scenario import edits
from deliberate.window.session import Session
from deliberate.window.sidebar.page import small_button
from deliberate.window.text import tooltip

MOST_ROWS = 5
ROW_HEIGHT = 24
NEW_TEXT = "What else is to be decided?"


class QuestionList(QWidget):
    """The row that is current is the question on screen."""

    added = Signal()

    def __init__(self, session: Session, parent: QWidget) -> None:
        super().__init__(parent)
        self._session = session
        self._filling = False
        self.rows = _Rows(self)
        self.add = small_button("Add", "Add a question", self)
        self.up = small_button("Up", "Move this question up (Alt+Up)", self)
        self.down = small_button("Down", "Move this question down (Alt+Down)", self)
        self.remove = small_button("Remove", "Remove this question with its starting beliefs and polls", self)
        buttons = QHBoxLayout()
        buttons.setSpacing(2)
        for button in (self.add, self.up, self.down, self.remove):
            buttons.addWidget(button)
        buttons.addStretch(1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.rows)
        column.addLayout(buttons)
        self.rows.currentRowChanged.connect(self._show)
        self.rows.moving = self._move
        self.add.clicked.connect(self._add)
        self.up.clicked.connect(lambda: self._move(-1))
        self.down.clicked.connect(lambda: self._move(1))
        self.remove.clicked.connect(self._remove)

    def read(self) -> None:
        """Fill the list from the session."""
        questions = self._session.scenario.questions
        self._filling = True
        while self.rows.count() > len(questions):
            self.rows.takeItem(self.rows.count() - 1)
        while self.rows.count() < len(questions):
            item = QListWidgetItem()
            item.setSizeHint(QSize(0, ROW_HEIGHT))
            self.rows.addItem(item)
        for place, question in enumerate(questions):
            self.rows.item(place).setText(question.text)
            self.rows.item(place).setToolTip(tooltip(question.text))
        here = self._here()
        self.rows.setCurrentRow(here)
        self._filling = False
        self.rows.updateGeometry()
        several = len(questions) > 1
        self.rows.setVisible(several)
        for button in (self.up, self.down, self.remove):
            button.setVisible(several)
        self.add.setText("Add" if several else "Add a question")
        self.up.setEnabled(here > 0)
        self.down.setEnabled(here < len(questions) - 1)

    def _here(self) -> int:
        return [question.id for question in self._session.scenario.questions].index(self._session.question.id)

    def _show(self, place: int) -> None:
        if not self._filling and place >= 0:
            self._session.show_question(self._session.scenario.questions[place].id)

    def _add(self) -> None:
        session, like = self._session, self._session.question
        new = edits.fresh_question_id(session.scenario, NEW_TEXT)
        added = session.edit(
            "Add a question",
            lambda scenario: edits.add_question(
                scenario,
                NEW_TEXT,
                low=like.low,
                high=like.high,
                at=self._here() + 1,
                pass_mark=like.pass_mark,
                unit=like.unit,
            ),
        )
        if added:
            session.show_question(new)
            self.added.emit()

    def _move(self, by: int) -> None:
        question, to = self._session.question.id, self._here() + by
        if 0 <= to < len(self._session.scenario.questions):
            self._session.edit("Move a question", lambda scenario: edits.move_question(scenario, question, to))

    def _remove(self) -> None:
        session, here = self._session, self._here()
        question = session.question
        neighbour = session.scenario.questions[here - 1 if here else min(1, len(session.scenario.questions) - 1)].id
        if session.edit(f"Remove “{question.text}”", lambda scenario: edits.remove_question(scenario, question.id)):
            session.show_question(neighbour)


class _Rows(QListWidget):
    """As high as its rows, up to a few."""

    def __init__(self, parent: QuestionList) -> None:
        super().__init__(parent)
        self.moving = lambda _by: None
        self.setAccessibleName("Questions")
        self.setUniformItemSizes(True)
        self.setTextElideMode(Qt.TextElideMode.ElideRight)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setSizePolicy(self.sizePolicy().horizontalPolicy(), self.sizePolicy().verticalPolicy().Fixed)

    def sizeHint(self) -> QSize:
        return QSize(160, ROW_HEIGHT * min(max(self.count(), 1), MOST_ROWS) + 2 * self.frameWidth())

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        steps = {Qt.Key.Key_Up: -1, Qt.Key.Key_Down: 1}
        if event.modifiers() == Qt.KeyboardModifier.AltModifier and event.key() in steps:
            self.moving(steps[Qt.Key(event.key())])
        else:
            super().keyPressEvent(event)
