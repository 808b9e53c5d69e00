"""What belongs to the selected people: where they start, how sure that is, how firm they are, their votes."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QCheckBox, QHBoxLayout, QLabel, QSlider, QVBoxLayout, QWidget

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import amount, decimals, number
from deliberate.scenario import edits
from deliberate.scenario.values import Person
from deliberate.window.session import Session
from deliberate.window.sidebar.fields import LineField
from deliberate.window.sidebar.numbers import plain, typed_number
from deliberate.window.sidebar.people_columns import HEADINGS, UNKNOWN, Column, Row, change, typed_over
from deliberate.window.text import ElidedLabel, explain

STEPS = 1_000
FIELD_ROOM = 20
SEVERAL = "differ"  # stands in a field while several people are selected who do not have the same
DETAILS = (Column.MARGIN, Column.FIRMNESS, Column.BALLOTS)


class StartEditor(QWidget):
    """Shown while people are selected; a change goes to all of them, as one step at the slider's release."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._filling = False
        self.heading = ElidedLabel(self)
        self.slider = QSlider(Qt.Orientation.Horizontal, self)
        self.slider.setRange(0, STEPS)
        self.slider.setPageStep(STEPS // 10)
        self.slider.setSingleStep(STEPS // 100)
        self.slider.setAccessibleName("Starting belief")
        self.slider.setMinimumSize(40, 24)
        self.field = LineField("Starting belief as a number", self, meaning=HEADINGS[Column.START].meaning)
        self.field.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.known = QCheckBox("known", self)
        explain(self.known, "Without a start the middle of the scale is used, and said so")
        self.low = ElidedLabel(self, muted=True)
        self.high = ElidedLabel(self, muted=True, align=Qt.AlignmentFlag.AlignRight)
        row = QHBoxLayout()
        row.setSpacing(8)
        row.addWidget(self.slider, 1)
        row.addWidget(self.field)
        row.addWidget(self.known)
        ends = QHBoxLayout()
        ends.addWidget(self.low, 1)
        ends.addWidget(self.high, 1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.heading)
        column.addLayout(row)
        column.addLayout(ends)
        column.addSpacing(4)
        column.addLayout(self._lay_out_details())
        self.slider.valueChanged.connect(self._slide)
        self.slider.sliderReleased.connect(self._release)
        self.field.given.connect(self._type)
        self.known.clicked.connect(self._know)

    def _lay_out_details(self) -> QHBoxLayout:
        row = QHBoxLayout()
        row.setSpacing(4)
        self.details: dict[Column, LineField] = {}
        for column in DETAILS:
            heading = HEADINGS[column]
            label = QLabel(heading.short, self)
            label.setProperty("muted", True)
            field = LineField(heading.meaning, self, meaning=heading.meaning)
            field.setAlignment(Qt.AlignmentFlag.AlignRight)
            field.setStyleSheet("padding: 3px 3px;")  # three in a narrow row
            field.given.connect(lambda text, column=column: self._give(column, text))
            row.addWidget(label)
            row.addWidget(field, 1)
            self.details[column] = field
        return row

    @property
    def people(self) -> list[Person]:
        """The selected people."""
        chosen = self._session.selection.people
        return [person for person in self._session.variant.people if person.id in chosen] if chosen else []

    def refresh(self) -> None:
        """Read the selected people again."""
        people, question = self.people, self._session.question
        self.setVisible(bool(people))
        if not people:
            return
        starts = {person.beliefs.get(question.id) for person in people}
        belief = people[0].beliefs.get(question.id)
        self._filling = True
        self.heading.setText(f"Starting belief of {self._whose(people)}")
        self.low.setText(_end(question.low_label, amount(question.low)))
        self.high.setText(_end(question.high_label, amount(question.high)))
        self.known.setChecked(belief is not None)
        shown = question.middle if belief is None else belief
        self.slider.setValue(round((shown - question.low) / question.width * STEPS))
        self._show(self.field, Column.START, people)
        self.field.setPlaceholderText(SEVERAL if len(starts) > 1 else UNKNOWN)
        longest = max((self.field.text(), plain(question.low), plain(question.high), SEVERAL), key=len)
        self.field.setFixedWidth(self.fontMetrics().horizontalAdvance(longest) + FIELD_ROOM)
        for column, field in self.details.items():
            self._show(field, column, people)
        self._filling = False

    def _show(self, field: LineField, column: Column, people: Sequence[Person]) -> None:
        question = self._session.question
        texts = {typed_over(column, Row(person, 0.0, 0.0), question) for person in people}
        subject = (self._session.variant.name, question.id, [person.id for person in people])
        field.show_text(texts.pop() if len(texts) == 1 else "", subject)
        field.setPlaceholderText(SEVERAL if texts else "")

    def _value(self) -> float:
        """The slider's belief, rounded to the digits that are shown on this scale."""
        question = self._session.question
        exact = question.low + question.width * self.slider.value() / STEPS
        places = decimals(question) - 1 if question.width >= 1 else decimals(question)
        return min(max(round(exact, max(places, 0)), question.low), question.high)

    # Edits

    def _slide(self) -> None:
        if self._filling:
            return
        if self.slider.isSliderDown():
            self.field.setText(number(self._value(), self._session.question))
        else:
            self._set(self._value(), merge="slide")

    def _release(self) -> None:
        self._set(self._value())

    def _type(self, text: str) -> None:
        try:
            self._set(typed_number(text, "a starting belief") if text.strip() else None)
        except DeliberateError as error:
            self._session.refused.emit(str(error))

    def _know(self, known: bool) -> None:
        self._set(self._value() if known else None)

    def _set(self, belief: float | None, merge: str = "") -> None:
        session, people = self._session, self.people
        ids, question, variant = [person.id for person in people], session.question.id, session.variant.name
        session.edit(
            f"Set the starting belief of {self._whose(people)}",
            lambda scenario: edits.set_belief(scenario, ids, question, belief, variant=variant),
            merge=merge and f"{merge} {ids}",
        )

    def _give(self, column: Column, text: str) -> None:
        session, people = self._session, self.people
        ids, question, variant = [person.id for person in people], session.question.id, session.variant.name
        session.edit(
            f"{HEADINGS[column].step} of {self._whose(people)}",
            lambda scenario: change(column, ids, text, question=question, variant=variant)(scenario),
        )

    def _whose(self, people: Sequence[Person]) -> str:
        return people[0].shown_name if len(people) == 1 else f"{len(people)} people"


def _end(label: str, figure: str) -> str:
    return f"{figure} {label}".strip()
