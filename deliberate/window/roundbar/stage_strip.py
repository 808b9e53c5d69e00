"""The row above the ruler in which one stage of the plan is edited in place."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt, Signal
from PySide6.QtGui import QKeyEvent, QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QComboBox, QHBoxLayout, QLabel, QLineEdit, QPushButton, QSpinBox, QWidget

from deliberate.scenario import edits
from deliberate.scenario.values import Afterwards, Setting, Stage, Unheard
from deliberate.window.session import Session

SETTINGS: tuple[tuple[Setting, str], ...] = (
    ("plenary", "Plenary: as drawn"),
    ("tables", "At tables"),
    ("panel", "Panel: speakers are heard"),
    ("pairs", "In pairs"),
    ("silence", "Silence: nobody is heard"),
)
UNHEARD: tuple[tuple[Unheard, str], ...] = (
    ("own", "unheard: to the own view"),
    ("rescale", "unheard: to those heard"),
)
AFTERWARDS: tuple[tuple[Afterwards, str], ...] = (
    ("last", "then the last stage on"),
    ("repeat", "then all stages again"),
)
CHOICES: dict[str, str] = {
    "tables": "Seat people …",
    "panel": "Choose speakers …",
    "pairs": "Choose pairs …",
}


class StageStrip(QWidget):
    """Name, rounds and setting of the stage at `index`; what is not heard; its place; what follows the plan."""

    choose_on_canvas = Signal(int)
    closed = Signal()
    moved_to = Signal(int)

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._filling = False
        self.index = -1
        self.name = QLineEdit(self)
        self.name.setMaxLength(200)
        self.name.setMinimumWidth(90)
        self.name.setAccessibleName("Name of the stage")
        self.name.editingFinished.connect(self._rename)
        self.rounds = QSpinBox(self)
        self.rounds.setRange(1, 10_000)
        self.rounds.setAccessibleName("Rounds of the stage")
        self.rounds.setKeyboardTracking(False)
        self.rounds.valueChanged.connect(self._change_rounds)
        self.setting = self._choice(SETTINGS, "Who can hear whom", self._change_setting)
        self.choose = QPushButton(self)
        self.choose.clicked.connect(self._choose)
        self.unheard = self._choice(UNHEARD, "Points that are not heard", self._change_unheard)
        self.earlier = self._button("←", "Move the stage earlier", self._move_earlier)
        self.later = self._button("→", "Move the stage later", self._move_later)
        self.add = self._button("Add", "Add a stage behind this one", self.add_behind)
        self.remove = self._button("Remove", "Remove the stage", self._remove)
        self.after = self._choice(AFTERWARDS, "After the last round", self._change_afterwards)
        self.done = self._button("Done", "Close the stage", self.closed.emit)
        self._lay_out()
        session.scenario_changed.connect(self.refresh)
        self.hide()

    def _lay_out(self) -> None:
        rounds_label = QLabel("rounds", self)
        rounds_label.setProperty("muted", True)
        of_the_stage, of_the_plan = QHBoxLayout(), QHBoxLayout()
        for part, stretch in (
            (self.name, 1), (self.rounds, 0), (rounds_label, 0), (self.setting, 0), (self.choose, 0),
            (self.unheard, 0),
        ):  # fmt: skip
            of_the_stage.addWidget(part, stretch)
        for part in (self.earlier, self.later, self.add, self.remove):
            of_the_plan.addWidget(part)
        of_the_plan.addStretch(1)
        of_the_plan.addWidget(self.after)
        of_the_plan.addWidget(self.done)
        self._halves = QBoxLayout(QBoxLayout.Direction.LeftToRight, self)
        self._halves.setContentsMargins(16, 6, 12, 0)
        for half, stretch in ((of_the_stage, 1), (of_the_plan, 0)):
            half.setSpacing(6)
            self._halves.addLayout(half, stretch)
        self._halves.setSpacing(6)

    def minimumSizeHint(self) -> QSize:
        """That of two rows, so that a window in which there is one can be made narrower."""
        margins = self._halves.contentsMargins()
        widest = max(self._halves.itemAt(place).minimumSize().width() for place in range(2))
        return QSize(widest + margins.left() + margins.right(), super().minimumSizeHint().height())

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit()

    def _fit(self) -> None:
        """One row where there is room for all words, otherwise two."""
        halves = [self._halves.itemAt(place).sizeHint().width() for place in range(2)]
        margins = self._halves.contentsMargins()
        needed = sum(halves) + self._halves.spacing() + margins.left() + margins.right()
        one_row = needed <= self.width()
        ways = QBoxLayout.Direction
        self._halves.setDirection(ways.LeftToRight if one_row else ways.TopToBottom)

    def _choice(self, entries: tuple[tuple[str, str], ...], name: str, changed: object) -> QComboBox:
        combo = QComboBox(self)
        combo.setAccessibleName(name)
        combo.setToolTip(name)
        combo.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToContents)
        combo.setMinimumWidth(80)  # a last resort: there is a second row
        for key, words in entries:
            combo.addItem(words, key)
        combo.activated.connect(changed)
        return combo

    def _button(self, text: str, name: str, act: object) -> QPushButton:
        button = QPushButton(text, self)
        button.setToolTip(name)
        button.setAccessibleName(name)
        button.clicked.connect(act)
        return button

    @property
    def stage(self) -> Stage:
        """The stage being edited."""
        return self._session.variant.plan.stages[self.index]

    def show_stage(self, index: int) -> None:
        """Edit the stage at `index`; -1 closes the row."""
        self.index = index
        self.refresh()
        self.setVisible(index >= 0)

    def refresh(self) -> None:
        """Read the stage again."""
        plan = self._session.variant.plan
        if not 0 <= self.index < len(plan.stages):
            return
        stage = self.stage
        self._filling = True
        if self.name.text() != stage.name:
            self.name.setText(stage.name)
        self.rounds.setValue(stage.rounds)
        self.setting.setCurrentIndex(self.setting.findData(stage.setting))
        self.unheard.setCurrentIndex(self.unheard.findData(stage.unheard))
        self.after.setCurrentIndex(self.after.findData(plan.afterwards))
        chosen = stage.setting in CHOICES
        self.choose.setVisible(chosen)
        self.choose.setText(CHOICES.get(stage.setting, ""))
        somebody_absent = not all(person.present for person in self._session.variant.people)
        self.unheard.setVisible(stage.setting != "plenary" or somebody_absent)
        self.earlier.setEnabled(self.index > 0)
        self.later.setEnabled(self.index < len(plan.stages) - 1)
        self.remove.setEnabled(len(plan.stages) > 1)
        self._filling = False
        self._fit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape:
            self.closed.emit()
        else:
            super().keyPressEvent(event)

    # Edits

    def _change(self, step: str, merge: str = "", **fields: object) -> None:
        variant, index = self._session.variant.name, self.index
        self._session.edit(
            step,
            lambda scenario: edits.change_stage(scenario, index, variant=variant, **fields),
            merge=merge,
        )

    def _rename(self) -> None:
        if self.index < 0 or self.name.text().strip() == self.stage.name:
            return
        if not self.name.text().strip():
            self.name.setText(self.stage.name)
            return
        self._change(f"Rename stage “{self.stage.name}”", name=self.name.text())

    def _change_rounds(self, rounds: int) -> None:
        if not self._filling:
            self._change(f"Change the rounds of {self.stage.name}", f"rounds {self.index}", rounds=rounds)

    def _change_setting(self, place: int) -> None:
        variant, index, setting = self._session.variant.name, self.index, self.setting.itemData(place)
        self._session.edit(
            f"Change who hears whom in {self.stage.name}",
            lambda scenario: edits.set_setting(scenario, index, setting, variant=variant),
        )

    def _change_unheard(self, place: int) -> None:
        self._change(f"Change unheard points in {self.stage.name}", unheard=self.unheard.itemData(place))

    def _change_afterwards(self, place: int) -> None:
        variant, afterwards = self._session.variant.name, self.after.itemData(place)
        self._session.edit(
            "Change what follows the plan",
            lambda scenario: edits.set_afterwards(scenario, afterwards, variant=variant),
        )

    def _choose(self) -> None:
        self.choose_on_canvas.emit(self.index)

    def _move_earlier(self) -> None:
        self._move(-1)

    def _move_later(self) -> None:
        self._move(1)

    def _move(self, by: int) -> None:
        variant, index = self._session.variant.name, self.index
        if self._session.edit(
            f"Move stage “{self.stage.name}”",
            lambda scenario: edits.move_stage(scenario, index, index + by, variant=variant),
        ):
            self.moved_to.emit(index + by)

    def add_behind(self) -> None:
        """Add a stage behind the one being edited (at the end when none is) and edit it."""
        variant = self._session.variant
        index = self.index if self.index >= 0 else len(variant.plan.stages) - 1
        taken = {stage.name for stage in variant.plan.stages}
        number = next(n for n in range(len(taken) + 1, 2 * len(taken) + 3) if f"Stage {n}" not in taken)
        stage = Stage(name=f"Stage {number}", rounds=3)
        if self._session.edit(
            f"Add “{stage.name}”",
            lambda scenario: edits.add_stage(scenario, stage, variant=variant.name, at=index + 1),
        ):
            self.moved_to.emit(index + 1)

    def _remove(self) -> None:
        variant, index = self._session.variant.name, self.index
        self._session.edit(
            f"Remove stage “{self.stage.name}”",
            lambda scenario: edits.remove_stage(scenario, index, variant=variant),
        )
        self.moved_to.emit(min(index, len(self._session.variant.plan.stages) - 1))
