"""The people of the shown variant as a table that Qt's views can show, edit and sort."""

from __future__ import annotations

from itertools import compress

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt

from deliberate.errors import DeliberateError
from deliberate.scenario.values import Person, Question, Variant
from deliberate.window.session import Session
from deliberate.window.sidebar.people_columns import (
    HEADINGS,
    NO,
    YES,
    Column,
    Row,
    change,
    shown,
    sort_key,
    typed_over,
)
from deliberate.window.text import tooltip

Index = QModelIndex | QPersistentModelIndex
SORT_ROLE = Qt.ItemDataRole.UserRole
BELIEF_ROLE = Qt.ItemDataRole.UserRole + 1  # belief to colour the cell's swatch with
ABSENT_ROLE = Qt.ItemDataRole.UserRole + 3  # whether the person is not there

COLUMNS = len(Column)
_LEFT = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
_RIGHT = Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
_ALIGNED = tuple(_LEFT if column in (Column.NAME, Column.ROLE) else _RIGHT for column in Column)
_SHOWN = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemNeverHasChildren
_UNLIKE_OTHERS = {Column.NOW: _SHOWN, Column.PRESENT: _SHOWN | Qt.ItemFlag.ItemIsUserCheckable}
_FLAGS = tuple(_UNLIKE_OTHERS.get(column, _SHOWN | Qt.ItemFlag.ItemIsEditable) for column in Column)
# While painting, Qt asks every cell for fonts, brushes and more; only these depend on the person.
_TOLD = {
    Qt.ItemDataRole.DisplayRole,
    Qt.ItemDataRole.EditRole,
    Qt.ItemDataRole.CheckStateRole,
    Qt.ItemDataRole.ToolTipRole,
    Qt.ItemDataRole.AccessibleTextRole,
    SORT_ROLE,
    BELIEF_ROLE,
    ABSENT_ROLE,
}


class PeopleModel(QAbstractTableModel):
    """One row per person. An edit goes to the session; with several people selected it goes to all of them."""

    def __init__(self, session: Session, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._variant: Variant = session.variant
        self._question: Question = session.question
        self._own: list[float] = own_points(self._variant)
        self._now: NDArray[np.float64] = session.beliefs_at(session.player.position)

    # Shape

    def rowCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else len(self._variant.people)

    def columnCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else COLUMNS

    def person(self, row: int) -> Person:
        """The person in `row`."""
        return self._variant.people[row]

    def refresh(self) -> None:
        """Read the people again, telling views which rows differ."""
        before, asked = self._variant, self._question
        variant, question = self._session.variant, self._session.question
        same = [one.id for one in variant.people] == [one.id for one in before.people]
        if not same:
            self.beginResetModel()
        own = self._own if _same_points(variant, before) else own_points(variant)
        differs = (
            [True] * len(variant.people)
            if question is not asked or not same
            else [
                new is not old or mine != was
                for new, old, mine, was in zip(variant.people, before.people, own, self._own, strict=True)
            ]
        )
        self._variant, self._question, self._own = variant, question, own
        self._now = self._session.beliefs_at(self._session.player.position)
        if not same:
            self.endResetModel()
            return
        rows = list(compress(range(len(differs)), differs))
        if rows:
            self.dataChanged.emit(self.index(rows[0], 0), self.index(rows[-1], COLUMNS - 1))

    def refresh_now(self) -> None:
        """Read the beliefs at the present round again."""
        now = self._session.beliefs_at(self._session.player.position)
        if len(now) == len(self._variant.people):
            self._now = now
        if self._variant.people:
            last = self.index(len(self._variant.people) - 1, Column.NOW)
            self.dataChanged.emit(self.index(0, Column.NOW), last, [Qt.ItemDataRole.DisplayRole, BELIEF_ROLE])

    # Cells

    def flags(self, index: Index) -> Qt.ItemFlag:
        if not index.isValid():
            return Qt.ItemFlag.NoItemFlags
        return _FLAGS[index.column()]

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> str | Qt.AlignmentFlag | None:
        if orientation != Qt.Orientation.Horizontal or not 0 <= section < COLUMNS:
            return None
        heading = HEADINGS[Column(section)]
        if role == Qt.ItemDataRole.DisplayRole:
            return heading.short
        if role in (Qt.ItemDataRole.ToolTipRole, Qt.ItemDataRole.AccessibleTextRole):
            return heading.meaning
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _ALIGNED[section]
        return None

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        if not index.isValid() or not 0 <= index.row() < len(self._variant.people):
            return None
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _ALIGNED[index.column()]
        if role not in _TOLD:
            return None
        column, row = Column(index.column()), self.row(index.row())
        if role == Qt.ItemDataRole.DisplayRole:
            return None if column == Column.PRESENT else shown(column, row, self._question)
        if role == Qt.ItemDataRole.EditRole:
            return typed_over(column, row, self._question)
        if role == SORT_ROLE:
            return sort_key(column, row, self._question)
        if role == Qt.ItemDataRole.CheckStateRole and column == Column.PRESENT:
            return Qt.CheckState.Checked if row.person.present else Qt.CheckState.Unchecked
        if role == ABSENT_ROLE:
            return not row.person.present
        if role == BELIEF_ROLE and column == Column.NOW:
            return row.now
        if role == Qt.ItemDataRole.ToolTipRole and column == Column.NAME:
            part = f", {row.person.role}" if row.person.role else ""
            return tooltip(f"{row.person.shown_name}{part}")
        if role == Qt.ItemDataRole.AccessibleTextRole:
            name, heading = row.person.shown_name, HEADINGS[column]
            words = {Column.PRESENT: YES if row.person.present else NO}
            text = words.get(column) or shown(column, row, self._question)
            return name if column == Column.NAME else f"{name}, {heading.short}: {text}"
        return None

    def row(self, row: int) -> Row:
        """The person in `row` with own points and present belief."""
        return Row(self._variant.people[row], self._own[row], float(self._now[row]))

    # Edits

    def setData(self, index: Index, value: object, role: int = Qt.ItemDataRole.EditRole) -> bool:
        if not index.isValid():
            return False
        column = Column(index.column())
        if role == Qt.ItemDataRole.CheckStateRole and column == Column.PRESENT:
            return self.give(index.row(), column, YES if Qt.CheckState(value) == Qt.CheckState.Checked else NO)
        if role != Qt.ItemDataRole.EditRole or str(value) == self.data(index, role):
            return False
        return self.give(index.row(), column, str(value))

    def give(self, row: int, column: Column, text: str) -> bool:
        """Give the person in `row` what was typed, or all selected people when she is one of them, as one step."""
        person, selected = self.person(row), self._session.selection.people
        together = person.id in selected and len(selected) > 1 and column != Column.NAME
        ids = [one.id for one in self._variant.people if one.id in selected] if together else [person.id]
        whose = f"{len(ids)} people" if together else person.shown_name
        link = " " if column == Column.NAME else " of "
        try:
            edit = change(column, ids, text, question=self._question.id, variant=self._variant.name)
        except DeliberateError as error:
            self._session.refused.emit(str(error))
            return False
        return self._session.edit(f"{HEADINGS[column].step}{link}{whose}", edit)


def own_points(variant: Variant) -> list[float]:
    """Everybody's points of 100 for the own view, in the order of the people."""
    totals = {person.id: person.own_weight for person in variant.people}
    for arrow in variant.arrows:
        totals[arrow.listener] += arrow.weight
    return [100 * person.own_weight / totals[person.id] if totals[person.id] else 100.0 for person in variant.people]


def _same_points(variant: Variant, before: Variant) -> bool:
    return variant.arrows is before.arrows and [one.own_weight for one in variant.people] == [
        one.own_weight for one in before.people
    ]
