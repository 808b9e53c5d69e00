"""What is wanted of the tables, as fields."""

from __future__ import annotations

from math import ceil

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QFormLayout, QHBoxLayout, QLabel, QSpinBox, QVBoxLayout, QWidget

from deliberate.errors import DeliberateError
from deliberate.rehearsal.seating.told import GOALS
from deliberate.rehearsal.seating.wish import Wish, seated_people, table_sizes
from deliberate.rehearsal.words import in_words, sentence
from deliberate.scenario.values import Variant
from deliberate.window.seating.conditions import ConditionsEditor
from deliberate.window.sidebar.fields import Choice
from deliberate.window.text import plain_label, strong

USUAL_SIZE = 5
PLACES = [
    ("before the other stages", "before"),
    ("after the other stages", "after"),
    ("instead of its table stages", "instead"),
]
UNHEARD = [("go to the own table", "rescale"), ("go to the own view", "own")]


class WishForm(QWidget):
    """The fields, and what they come to. `changed` says that another seating is wanted now."""

    changed = Signal()

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self._variant: Variant | None = None
        self._filling = False
        self.goal = Choice("What the seating is for", self, [(words, goal) for goal, words in GOALS.items()])
        self.counted = Choice("What is given", self, [("Tables", "tables"), ("People at a table", "size")])
        self.number = _spin("How many", 1, 500, self)
        self.comes_to = plain_label(self, muted=True)
        self.rotations = _spin("How often people are seated anew", 1, 20, self)
        self.rounds = _spin("Rounds at each seating", 1, 1_000, self)
        self.place = Choice("Where in the plan", self, PLACES)
        self.unheard = Choice("Points for those at other tables", self, UNHEARD)
        self.conditions = ConditionsEditor(self)
        self.rotations.setValue(2)
        self.rounds.setValue(2)
        self._lay_out()
        # Not `chosen`: an entry found by typing its first letters counts as well.
        self.counted.currentIndexChanged.connect(self._count_otherwise)
        for spin in (self.number, self.rotations, self.rounds):
            spin.valueChanged.connect(self._change)
        for choice in (self.place, self.unheard, self.goal):
            choice.currentIndexChanged.connect(self._change)
        self.conditions.changed.connect(self._change)

    def _lay_out(self) -> None:
        first = QHBoxLayout()
        first.setSpacing(8)
        first.addWidget(self.counted, 1)
        first.addWidget(self.number)
        rows = QFormLayout()
        rows.setContentsMargins(0, 0, 0, 0)
        rows.setHorizontalSpacing(10)
        rows.setVerticalSpacing(7)
        rows.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.AllNonFixedFieldsGrow)
        for text, field in (
            ("Seated &anew, times", self.rotations),
            ("&Rounds each time", self.rounds),
            ("In the p&lan", self.place),
            ("&Other tables' points", self.unheard),
        ):
            label = QLabel(text, self)
            label.setBuddy(field)
            rows.addRow(label, field)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(7)
        for heading, parts in (
            ("What the seating is for", [self.goal]),
            ("Tables", [first, self.comes_to, rows]),
            ("Conditions", [self.conditions]),
        ):
            title = plain_label(self, text=heading, muted=True)
            strong(title)
            column.addWidget(title)
            for part in parts:
                if isinstance(part, QWidget):
                    column.addWidget(part)
                else:
                    column.addLayout(part)
            column.addSpacing(6)
        column.addStretch(1)

    @property
    def wish(self) -> Wish:
        """What is wanted now."""
        number, by_tables = self.number.value(), self.counted.currentData() == "tables"
        return Wish(
            tables=number if by_tables else None,
            size=None if by_tables else number,
            rotations=self.rotations.value(),
            rounds=self.rounds.value(),
            goal=self.goal.currentData(),
            place=self.place.currentData(),
            unheard=self.unheard.currentData(),
            together=self.conditions.together,
            apart=self.conditions.apart,
            roles=self.conditions.roles,
            linked=self.conditions.linked.isChecked(),
        )

    def refresh(self, variant: Variant) -> None:
        """Ask about the people and the plan of this variant."""
        begun = self._variant is not None
        self._variant = variant
        self._filling = True
        if not begun:
            self.number.setValue(max(2, round(len(seated_people(variant)) / USUAL_SIZE)))
        has_tables = any(stage.setting == "tables" for stage in variant.plan.stages)
        place = self.place.currentData() if begun else "before"
        self.place.set_options(PLACES if has_tables else PLACES[:2])
        self.place.show_value(place if has_tables or place != "instead" else "before")
        self.conditions.refresh(variant)
        self._filling = False
        self._tell()

    def _count_otherwise(self) -> None:
        """The same tables, given by the other number."""
        least = 2 if self.counted.currentData() == "size" else 1
        self.number.setMinimum(least)
        self.number.setValue(max(ceil(self._seated() / self.number.value()), least))
        self._change()

    def _change(self) -> None:
        if not self._filling:
            self._tell()
            self.changed.emit()

    def _seated(self) -> int:
        return 0 if self._variant is None else len(seated_people(self._variant))

    def _tell(self) -> None:
        try:
            sizes = table_sizes(self._seated(), self.wish)
        except DeliberateError as error:
            self.comes_to.setText(f"{sentence(str(error))}.")
            return
        people = in_words(self._seated(), "person", "people")
        parts = [f"{in_words(sizes.count(size), 'table', 'tables')} of {size}" for size in sorted(set(sizes))[::-1]]
        self.comes_to.setText(f"{sentence(people)} at {' and '.join(parts)}.")


def _spin(name: str, low: int, high: int, parent: QWidget) -> QSpinBox:
    spin = QSpinBox(parent)
    spin.setRange(low, high)
    spin.setAccessibleName(name)
    spin.setMinimumWidth(72)
    spin.setMinimumHeight(24)
    return spin
