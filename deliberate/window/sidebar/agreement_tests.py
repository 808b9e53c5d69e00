"""The agreement tests of a question: each in a line or two, with its numbers to type."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from msgspec.structs import replace
from PySide6.QtCore import Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QMenu, QVBoxLayout, QWidget

from deliberate.scenario import edits
from deliberate.scenario.values import AgreementTest, Question
from deliberate.window.session import Session
from deliberate.window.sidebar.fields import LineField
from deliberate.window.sidebar.numbers import plain, share_text, typed_number, typed_share
from deliberate.window.sidebar.page import small_button
from deliberate.window.text import explain, plain_label, tooltip

TITLES = {
    "share-within": "Share within a range",
    "quartile-range": "Quartile range",
    "spread": "Spread",
    "rand-ucla": "RAND/UCLA",
}
MEANINGS = {
    "share-within": "Agreement when at least this share of those present with a vote is within the range",
    "quartile-range": "Agreement when the middle half of the views lies within this range",
    "spread": "Agreement when the highest and the lowest view are no further apart than this",
    "rand-ucla": "The test of the RAND/UCLA appropriateness method, for 8 to 16 ratings from 1 to 9",
}
WORDED = {  # lines of: word before the number, field, what the number is
    "share-within": (
        (("at least", "at_least", "share needed"),),
        (("from", "low", "low end"), ("to", "high", "high end")),
    ),
    "quartile-range": ((("at most", "at_most", "largest range"),),),
    "spread": ((("at most", "at_most", "largest spread"),),),
}
EMPTY = "No test: say what will count as agreement before the views are known."


def usual_test(kind: str, question: Question) -> AgreementTest:
    """A test of this kind with numbers to start from."""
    match kind:
        case "share-within":
            low = question.middle if question.pass_mark is None else question.pass_mark
            return AgreementTest(test="share-within", low=low, high=question.high, at_least="3/4")
        case "quartile-range":
            return AgreementTest(test="quartile-range", at_most=question.width / 8)
        case "spread":
            return AgreementTest(test="spread", at_most=question.width / 10)
    return AgreementTest(test="rand-ucla")


class AgreementTests(QWidget):
    """The tests of the question on screen, below each other, and the button that adds one."""

    def __init__(self, session: Session, parent: QWidget) -> None:
        super().__init__(parent)
        self._session = session
        self.rows: list[TestRow] = []
        self.empty = plain_label(self, muted=True, text=EMPTY)
        self.add = small_button("Add a test …", "Add an agreement test", self)
        self.kinds = QMenu(self.add)
        self.kinds.setToolTipsVisible(True)
        self.kinds.aboutToShow.connect(self._offer)
        self.add.setMenu(self.kinds)
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(8)
        self._column.addWidget(self.empty)
        foot = QHBoxLayout()
        foot.addWidget(self.add)
        foot.addStretch(1)
        self._column.addLayout(foot)

    def read(self) -> None:
        """Fill the rows from the session."""
        tests = self._session.question.agreement
        if [test.test for test in tests] != [row.kind for row in self.rows]:
            self._rebuild([test.test for test in tests])
        for row, test in zip(self.rows, tests, strict=True):
            row.read(test, self._session.question.id)
        self.empty.setVisible(not tests)

    def _rebuild(self, kinds: list[str]) -> None:
        for row in self.rows:
            row.hide()
            row.deleteLater()
        self.rows = [TestRow(kind, self) for kind in kinds]
        for place, row in enumerate(self.rows):
            self._column.insertWidget(place + 1, row)
            row.given.connect(self._set)
            row.removal_wanted.connect(self._remove)

    def _offer(self) -> None:
        self.kinds.clear()
        question = self._session.question
        for kind, title in TITLES.items():
            action = self.kinds.addAction(title, lambda kind=kind: self._append(kind))
            action.setToolTip(tooltip(MEANINGS[kind]))
            action.setEnabled(kind != "rand-ucla" or (question.low, question.high) == (1, 9))

    # Edits

    def _change(self, step: str, change: Callable[[tuple[AgreementTest, ...], Question], object]) -> None:
        asked = self._session.question
        self._session.edit(
            step,
            lambda scenario: edits.change_question(scenario, asked.id, agreement=change(asked.agreement, asked)),
        )

    def _append(self, kind: str) -> None:
        self._change("Add an agreement test", lambda tests, question: (*tests, usual_test(kind, question)))

    def _remove(self, row: TestRow) -> None:
        at = self.rows.index(row)
        self._change("Remove an agreement test", lambda tests, _: (*tests[:at], *tests[at + 1 :]))
        self.add.setFocus()

    def _set(self, row: TestRow, field: str, text: str) -> None:
        at = self.rows.index(row)
        self._change(
            "Change an agreement test",
            lambda tests, _: (*tests[:at], replace(tests[at], **{field: _typed(field, text)}), *tests[at + 1 :]),
        )


def _typed(field: str, text: str) -> object:
    if field == "at_least":
        return typed_share(text, "the share")
    return typed_number(text, {"low": "the low end", "high": "the high end"}.get(field, "the figure"))


class TestRow(QWidget):
    """One test: what it is called, and its numbers as a line to read."""

    __test__ = False  # not a test of the program

    given = Signal(object, str, str)  # the row, the field, what was typed
    removal_wanted = Signal(object)

    def __init__(self, kind: str, parent: QWidget) -> None:
        super().__init__(parent)
        self.kind = kind
        self.fields: dict[str, LineField] = {}
        title = QLabel(TITLES[kind], self)
        explain(title, MEANINGS[kind])
        self.remove = small_button("Remove", f"Remove the test {TITLES[kind]}", self)
        self.remove.clicked.connect(lambda: self.removal_wanted.emit(self))
        head = QHBoxLayout()
        head.addWidget(title, 1)
        head.addWidget(self.remove)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(3)
        column.addLayout(head)
        for words in WORDED.get(kind, ()):
            column.addLayout(self._line(words))

    def _line(self, words: Sequence[tuple[str, str, str]]) -> QHBoxLayout:
        line = QHBoxLayout()
        line.setSpacing(8)
        for word, field, name in words:
            line.addWidget(QLabel(word, self))
            number = LineField(f"{TITLES[self.kind]}: {name}", self, meaning=MEANINGS[self.kind])
            number.given.connect(lambda text, field=field: self.given.emit(self, field, text))
            line.addWidget(number, 1)
            self.fields[field] = number
        return line

    def read(self, test: AgreementTest, question: str) -> None:
        """Show the numbers of `test`, which belongs to `question`."""
        for field, line in self.fields.items():
            value = getattr(test, field)
            line.show_text(share_text(value) if field == "at_least" else plain(value), question)
