"""Where the selected people start: a slider over the question's scale and a number."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QCheckBox, QHBoxLayout, QLineEdit, QSlider, QVBoxLayout, QWidget

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import amount, decimals, number
from deliberate.scenario import edits
from deliberate.scenario.values import Person
from deliberate.window.session import Session
from deliberate.window.sidebar.numbers import typed_number
from deliberate.window.text import plain_label

STEPS = 1_000


class StartEditor(QWidget):
    """Shown while people are selected; a change goes to all of them, as one step at the slider's release."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._filling = False
        self.heading = plain_label(self)
        self.heading.setWordWrap(True)
        self.slider = QSlider(Qt.Orientation.Horizontal, self)
        self.slider.setRange(0, STEPS)
        self.slider.setPageStep(STEPS // 10)
        self.slider.setSingleStep(STEPS // 100)
        self.slider.setAccessibleName("Starting belief")
        self.slider.setMinimumHeight(24)
        self.field = QLineEdit(self)
        self.field.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.field.setFixedWidth(self.fontMetrics().horizontalAdvance("100,000.0") + 14)
        self.field.setAccessibleName("Starting belief as a number")
        self.known = QCheckBox("known", self)
        self.known.setToolTip("Without a start the middle of the scale is used, and said so")
        self.low, self.high = plain_label(self, muted=True), plain_label(self, muted=True)
        self.high.setAlignment(Qt.AlignmentFlag.AlignRight)
        row = QHBoxLayout()
        row.setSpacing(8)
        row.addWidget(self.slider, 1)
        row.addWidget(self.field)
        row.addWidget(self.known)
        ends = QHBoxLayout()
        ends.addWidget(self.low)
        ends.addWidget(self.high)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.heading)
        column.addLayout(row)
        column.addLayout(ends)
        self.slider.valueChanged.connect(self._slide)
        self.slider.sliderReleased.connect(self._release)
        self.field.editingFinished.connect(self._type)
        self.known.clicked.connect(self._know)
        session.scenario_changed.connect(self.refresh)
        session.selection_changed.connect(self.refresh)
        self.refresh()

    @property
    def people(self) -> list[Person]:
        """The selected people."""
        chosen = self._session.selection.people
        return [person for person in self._session.variant.people if person.id in chosen]

    def refresh(self) -> None:
        """Read the selected people again."""
        people, question = self.people, self._session.question
        self.setVisible(bool(people))
        if not people:
            return
        belief = people[0].beliefs.get(question.id)
        self._filling = True
        who = people[0].shown_name if len(people) == 1 else f"{len(people)} people"
        self.heading.setText(f"{who}: starting belief")
        self.low.setText(_end(question.low_label, amount(question.low)))
        self.high.setText(_end(question.high_label, amount(question.high)))
        self.known.setChecked(belief is not None)
        shown = question.middle if belief is None else belief
        self.slider.setValue(round((shown - question.low) / question.width * STEPS))
        self.field.setText("" if belief is None else amount(belief))
        self.field.setPlaceholderText("?")
        self._filling = False

    def _value(self) -> float:
        """The slider's belief, rounded to the digits that are shown on this scale."""
        question = self._session.question
        exact = question.low + question.width * self.slider.value() / STEPS
        places = decimals(question) - 1 if question.width >= 1 else decimals(question)
        return min(max(round(exact, max(places, 0)), question.low), question.high)

    def _slide(self) -> None:
        if self._filling:
            return
        self.field.setText(number(self._value(), self._session.question))
        if not self.slider.isSliderDown():
            self._set(self._value(), merge="slide")

    def _release(self) -> None:
        self._set(self._value())

    def _type(self) -> None:
        text = self.field.text().strip()
        belief = self.people[0].beliefs.get(self._session.question.id) if self.people else None
        if not self.people or text == ("" if belief is None else amount(belief)):
            return
        try:
            self._set(typed_number(text, "a starting belief") if text else None)
        except DeliberateError as error:
            self._session.refused.emit(str(error))
        self.refresh()

    def _know(self, known: bool) -> None:
        self._set(self._value() if known else None)

    def _set(self, belief: float | None, merge: str = "") -> None:
        session, people = self._session, self.people
        ids, question, variant = [person.id for person in people], session.question.id, session.variant.name
        who = people[0].shown_name if len(people) == 1 else f"{len(people)} people"
        session.edit(
            f"Set the starting belief of {who}",
            lambda scenario: edits.set_belief(scenario, ids, question, belief, variant=variant),
            merge=merge and f"{merge} {ids}",
        )


def _end(label: str, figure: str) -> str:
    return f"{figure} {label}".strip()
