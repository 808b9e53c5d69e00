"""The second page: what is asked, on which scale, and where its marks lie."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from PySide6.QtWidgets import QCheckBox, QGridLayout, QHBoxLayout, QLabel, QWidget

from deliberate.rehearsal.words import number
from deliberate.scenario import edits
from deliberate.scenario.values import Question
from deliberate.window.session import Session
from deliberate.window.sidebar.agreement_tests import AgreementTests
from deliberate.window.sidebar.fields import LineField, TextField
from deliberate.window.sidebar.numbers import plain, typed_number
from deliberate.window.sidebar.page import Page, label_for
from deliberate.window.sidebar.question_list import QuestionList
from deliberate.window.text import explain, plain_label


@dataclass(frozen=True)
class Mark:
    """A mark or range that a question may have, and where it is put when it is first wanted."""

    field: str
    label: str
    name: str
    meaning: str
    usual: Callable[[Question], float]


PASS = Mark(
    "pass_mark", "Pa&ss mark", "the pass mark", "Views above it vote for; without one there is no vote",
    lambda question: question.middle,
)  # fmt: skip
OBJECTION = Mark(
    "objection_mark", "Ob&jection mark", "the objection mark", "Whoever has a vote and is below it objects",
    lambda question: question.low + question.width / 4,
)  # fmt: skip
HEARING = Mark(
    "hearing_range", "Hearin&g range", "the hearing range",
    "In a round only views that are no further away than this are heard",
    lambda question: question.width / 4,
)  # fmt: skip


class QuestionPage(Page):
    """Everything about the question on screen; it holds in all variants."""

    def __init__(self, session: Session, parent: QWidget) -> None:
        super().__init__(session, "Question", parent)
        self.questions = QuestionList(session, self.body)
        self.text = TextField("What is asked", self.body, lines=3)
        self.text.given.connect(lambda text: self._change("Change what is asked", text=text))
        self.column.addWidget(self.text)
        self.column.addWidget(self.questions)
        self.questions.added.connect(self._ask_for_text)
        self._add_scale()
        self._add_vote()
        self.add_heading("Hearing")
        grid = self._mark_grid()
        self.hearing = MarkRow(self, grid, 0, HEARING)
        self.add_heading("Agreement")
        self.tests = AgreementTests(session, self.body)
        self.column.addWidget(self.tests)
        self.column.addStretch(1)

    def _add_scale(self) -> None:
        self.add_heading("Scale")
        grid, body = self.add_grid(), self.body
        self.low = LineField("Low end of the scale", body)
        self.high = LineField("High end of the scale", body)
        self.low_label = LineField("What the low end means", body, hint="what it means")
        self.high_label = LineField("What the high end means", body, hint="what it means")
        self.unit = LineField("Unit", body, hint="none")
        ends = QHBoxLayout()
        ends.setSpacing(4)
        ends.addWidget(label_for(self.low, "Fr&om", body))
        ends.addWidget(self.low, 1)
        ends.addWidget(QLabel("to", body))
        ends.addWidget(self.high, 1)
        grid.addLayout(ends, 0, 0, 1, 2)
        texts = (("Lo&w end", self.low_label), ("High e&nd", self.high_label), ("Un&it", self.unit))
        for row, (text, field) in enumerate(texts, start=1):
            grid.addWidget(label_for(field, text, body), row, 0)
            grid.addWidget(field, row, 1)
        grid.setColumnStretch(1, 1)
        self.along = QCheckBox("Numbe&rs move along", body)
        explain(
            self.along,
            "When an end changes, starts, margins and marks move in proportion; otherwise they stay as they are",
        )
        self.along.setChecked(True)
        self.column.addWidget(self.along)
        self.low.given.connect(lambda text: self._set_scale(low=text))
        self.high.given.connect(lambda text: self._set_scale(high=text))
        self.low_label.given.connect(lambda text: self._change("Change what the low end means", low_label=text))
        self.high_label.given.connect(lambda text: self._change("Change what the high end means", high_label=text))
        self.unit.given.connect(lambda text: self._change("Change the unit", unit=text))

    def _add_vote(self) -> None:
        self.add_heading("Vote")
        grid = self._mark_grid()
        self.pass_mark = MarkRow(self, grid, 0, PASS)
        self.undecided = LineField(
            "Undecided band", self.body, meaning="Views no further than this from the pass mark do not vote"
        )
        self.undecided_label = label_for(self.undecided, "Un&decided ±", self.body)
        self.undecided_label.setContentsMargins(22, 0, 0, 0)
        grid.addWidget(self.undecided_label, 1, 0)
        grid.addWidget(self.undecided, 1, 1)
        self.objection = MarkRow(self, grid, 2, OBJECTION)
        self.vote_words = plain_label(self.body, muted=True)
        self.column.addWidget(self.vote_words)
        self.undecided.given.connect(self._set_undecided)

    def _mark_grid(self) -> QGridLayout:
        grid = self.add_grid()
        grid.setColumnStretch(1, 1)
        grid.setColumnMinimumWidth(0, self.fontMetrics().horizontalAdvance("Objection mark") + 32)
        return grid

    def read(self) -> None:
        question = self.session.question
        self.questions.read()
        self.text.show_text(question.text, question.id)
        self.low.show_text(plain(question.low), question.id)
        self.high.show_text(plain(question.high), question.id)
        self.low_label.show_text(question.low_label, question.id)
        self.high_label.show_text(question.high_label, question.id)
        self.unit.show_text(question.unit, question.id)
        for mark in (self.pass_mark, self.objection, self.hearing):
            mark.read(question)
        self.undecided.show_text(plain(question.undecided), question.id)
        self.undecided.setEnabled(question.pass_mark is not None)
        self.undecided_label.setEnabled(question.pass_mark is not None)
        self.vote_words.setText(vote_in_words(question))
        self.tests.read()

    def _ask_for_text(self) -> None:
        self.text.setFocus()
        self.text.selectAll()

    # Edits

    def change(self, step: str, change: Callable[[Question], dict[str, object]]) -> None:
        """Change fields of the question on screen."""
        asked = self.session.question
        self.session.edit(step, lambda scenario: edits.change_question(scenario, asked.id, **change(asked)))

    def _change(self, step: str, **fields: object) -> None:
        self.change(step, lambda _: fields)

    def _set_undecided(self, text: str) -> None:
        self.change(
            "Change the undecided band",
            lambda _: {"undecided": typed_number(text, "the undecided band") if text.strip() else 0.0},
        )

    def _set_scale(self, low: str | None = None, high: str | None = None) -> None:
        question = self.session.question
        numbers = "rescale" if self.along.isChecked() else "keep"
        self.session.edit(
            "Change the scale",
            lambda scenario: edits.set_scale(
                scenario,
                question.id,
                question.low if low is None else typed_number(low, "the low end"),
                question.high if high is None else typed_number(high, "the high end"),
                numbers=numbers,
            ),
        )


class MarkRow:
    """A box that says whether the question has the mark, and where it lies."""

    def __init__(self, page: QuestionPage, grid: QGridLayout, row: int, mark: Mark) -> None:
        self._page, self._mark = page, mark
        self.box = QCheckBox(mark.label, page.body)
        explain(self.box, mark.meaning)
        self.field = LineField(mark.name, page.body, meaning=mark.meaning)
        grid.addWidget(self.box, row, 0)
        grid.addWidget(self.field, row, 1)
        self.box.clicked.connect(self._switch)
        self.field.given.connect(self._type)

    def read(self, question: Question) -> None:
        """Show where the mark of `question` lies."""
        value = getattr(question, self._mark.field)
        self.box.setChecked(value is not None)
        self.field.setEnabled(value is not None)
        self.field.show_text("" if value is None else plain(value), question.id)

    def _switch(self, wanted: bool) -> None:
        mark = self._mark
        self._page.change(
            f"Set {mark.name}" if wanted else f"Drop {mark.name}",
            lambda question: {mark.field: mark.usual(question) if wanted else None},
        )
        self.read(self._page.session.question)

    def _type(self, text: str) -> None:
        mark = self._mark
        self._page.change(
            f"Change {mark.name}",
            lambda _: {mark.field: typed_number(text, mark.name) if text.strip() else None},
        )


def vote_in_words(question: Question) -> str:
    """Who votes how, in one sentence."""
    mark, band = question.pass_mark, question.undecided
    if mark is None:
        return "No vote on this question."
    if band:
        words = (
            f"For above {number(mark + band, question, beside=mark)}, against below"
            f" {number(mark - band, question, beside=mark)}, no vote between."
        )
    else:
        shown = number(mark, question)
        words = f"For above {shown}, against below; no vote at exactly {shown}."
    if question.objection_mark is not None:
        words += f" Below {number(question.objection_mark, question)} it is an objection."
    return words
