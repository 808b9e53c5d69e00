"""What every seating must keep: who sits with whom, who does not, and whom every table needs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from PySide6.QtCore import QEvent, QObject, Qt, Signal
from PySide6.QtGui import QKeyEvent, QResizeEvent
from PySide6.QtWidgets import QCheckBox, QGridLayout, QListWidget, QListWidgetItem, QPushButton, QVBoxLayout, QWidget

from deliberate.rehearsal.seating.told import condition_words
from deliberate.rehearsal.seating.wish import seated_people
from deliberate.rehearsal.words import sentence, shown_names
from deliberate.scenario.values import Variant
from deliberate.window.sidebar.fields import Choice
from deliberate.window.text import explain, plain_label

ROWS_SHOWN = 4


@dataclass(frozen=True)
class Pairing:
    """Two people who sit together, or never do."""

    kind: Literal["together", "apart"]
    people: tuple[str, str]


@dataclass(frozen=True)
class RoleAtEvery:
    """Somebody with this role at every table."""

    role: str


Condition = Pairing | RoleAtEvery


class ConditionsEditor(QWidget):
    """Adds and removes conditions; `changed` says that there are others."""

    changed = Signal()

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self._variant: Variant | None = None
        self.conditions: list[Condition] = []
        self.first = Choice("First person", self)
        self.kind = Choice("Together or apart", self, [("sits with", "together"), ("never with", "apart")])
        self.second = Choice("Second person", self)
        self.add_pair = _small("Add", "Add this condition on two people", self)
        self.every = plain_label(self, text="At every table somebody with the role", muted=True)
        self.role = Choice("Role that every table needs", self)
        self.add_role = _small("Add", "Add: somebody with this role at every table", self)
        self.linked = QCheckBox("Everybody hears or is heard at their table", self)
        self.list = QListWidget(self)
        self.list.setAccessibleName("Conditions")
        self.list.setWordWrap(True)
        self.list.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.list.setTextElideMode(Qt.TextElideMode.ElideNone)
        self.list.installEventFilter(self)
        self.remove = _small("Remove", "Remove the chosen condition (Delete)", self)
        self._lay_out()
        self.first.currentIndexChanged.connect(self._refresh_buttons)
        self.second.currentIndexChanged.connect(self._refresh_buttons)
        self.add_pair.clicked.connect(self._add_pair)
        self.add_role.clicked.connect(self._add_role)
        self.remove.clicked.connect(self._remove)
        self.list.currentRowChanged.connect(self._refresh_buttons)
        self.linked.toggled.connect(self.changed)

    def _lay_out(self) -> None:
        grid = QGridLayout()
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(6)
        grid.setVerticalSpacing(6)
        grid.addWidget(self.first, 0, 0)
        grid.addWidget(self.kind, 0, 1)
        grid.addWidget(self.second, 1, 0)
        grid.addWidget(self.add_pair, 1, 1)
        grid.addWidget(self.every, 2, 0, 1, 2)
        grid.addWidget(self.role, 3, 0)
        grid.addWidget(self.add_role, 3, 1)
        grid.setColumnStretch(0, 3)
        grid.setColumnStretch(1, 2)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        column.addLayout(grid)
        column.addWidget(self.linked)
        column.addWidget(self.list)
        column.addWidget(self.remove, 0, Qt.AlignmentFlag.AlignLeft)

    @property
    def together(self) -> tuple[tuple[str, str], ...]:
        """Pairs who sit at one table."""
        return self._pairs("together")

    @property
    def apart(self) -> tuple[tuple[str, str], ...]:
        """Pairs who never do."""
        return self._pairs("apart")

    @property
    def roles(self) -> tuple[str, ...]:
        """Roles that every table needs."""
        return tuple(one.role for one in self.conditions if isinstance(one, RoleAtEvery))

    def refresh(self, variant: Variant) -> None:
        """Offer the people and roles of a variant; conditions on somebody who is not there go."""
        self._variant = variant
        known, seated = shown_names(variant), seated_people(variant)
        people = [(known[one], one) for one in seated]
        chosen = self.first.currentData(), self.second.currentData()
        for box, before, place in zip((self.first, self.second), chosen, (0, 1), strict=True):
            box.set_options(people)
            box.show_value(before if before in seated else (seated[min(place, len(seated) - 1)] if seated else None))
        roles = list(dict.fromkeys(one.role for one in variant.people if one.present and one.role))
        role = self.role.currentData()
        self.role.set_options([(one, one) for one in roles])
        self.role.show_value(role if role in roles else (roles[0] if roles else None))
        for part in (self.every, self.role, self.add_role):
            part.setVisible(bool(roles))
        self.conditions = [
            one
            for one in self.conditions
            if (one.role in roles if isinstance(one, RoleAtEvery) else set(one.people) <= set(seated))
        ]
        self._fill()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress and event.key() == Qt.Key.Key_Delete:
            self._remove()
            return True
        return super().eventFilter(watched, event)

    def _pairs(self, kind: str) -> tuple[tuple[str, str], ...]:
        return tuple(one.people for one in self.conditions if isinstance(one, Pairing) and one.kind == kind)

    def _add_pair(self) -> None:
        one, other = self.first.currentData(), self.second.currentData()
        pairing = Pairing(self.kind.currentData(), (one, other))
        same = {Pairing(kind, pair) for kind in ("together", "apart") for pair in ((one, other), (other, one))}
        # Two are either together or apart: the newer condition takes the place of the older.
        self._set([*(kept for kept in self.conditions if kept not in same), pairing])

    def _add_role(self) -> None:
        wanted = RoleAtEvery(self.role.currentData())
        self._set([*(kept for kept in self.conditions if kept != wanted), wanted])

    def _remove(self) -> None:
        row = self.list.currentRow()
        if 0 <= row < len(self.conditions):
            self._set([*self.conditions[:row], *self.conditions[row + 1 :]])

    def _set(self, conditions: list[Condition]) -> None:
        self.conditions = conditions
        self._fill()
        self.changed.emit()

    def _fill(self) -> None:
        assert self._variant is not None
        row = min(max(self.list.currentRow(), 0), len(self.conditions) - 1)
        self.list.clear()
        for one in self.conditions:
            kind, about = ("role", one.role) if isinstance(one, RoleAtEvery) else (one.kind, one.people)
            self.list.addItem(QListWidgetItem(sentence(condition_words(kind, about, self._variant))))
        self.list.setCurrentRow(row)
        self.list.setVisible(bool(self.conditions))
        self._fit_list()
        self.remove.setVisible(bool(self.conditions))
        self._refresh_buttons()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit_list()

    def _fit_list(self) -> None:
        """As high as the first few conditions, which may take several lines each."""
        rows = range(min(len(self.conditions), ROWS_SHOWN))
        self.list.setFixedHeight(sum(self.list.sizeHintForRow(row) for row in rows) + 12)

    def _refresh_buttons(self) -> None:
        one, other = self.first.currentData(), self.second.currentData()
        self.add_pair.setEnabled(one is not None and other is not None and one != other)
        self.remove.setEnabled(self.list.currentRow() >= 0)


def _small(text: str, meaning: str, parent: QWidget) -> QPushButton:
    button = QPushButton(text, parent)
    button.setAutoDefault(False)
    button.setAccessibleName(meaning)
    explain(button, meaning)
    return button
