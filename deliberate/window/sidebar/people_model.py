"""The people of the shown variant as a table that Qt's views can show, edit and sort."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt, Signal

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import amount, number
from deliberate.scenario import edits
from deliberate.scenario.values import Person, Scenario
from deliberate.window.session import Session
from deliberate.window.sidebar.numbers import typed_number

Index = QModelIndex | QPersistentModelIndex
SORT_ROLE = Qt.ItemDataRole.UserRole
BELIEF_ROLE = Qt.ItemDataRole.UserRole + 1  # belief to colour the cell's swatch with
UNKNOWN = "?"


class Column(IntEnum):
    """The columns, left to right."""

    NAME = 0
    START = 1
    NOW = 2
    MARGIN = 3
    FIRMNESS = 4
    OWN = 5
    BALLOTS = 6
    PRESENT = 7


@dataclass(frozen=True)
class Heading:
    """What stands over a column, and what it means."""

    short: str
    meaning: str


HEADINGS = {
    Column.NAME: Heading("Name", "Name of the person"),
    Column.START: Heading("starts", "Starting belief, on the question's scale; empty when it is not known"),
    Column.NOW: Heading("now", "Belief at the round shown"),
    Column.MARGIN: Heading("±", "How far off the starting belief may be, on the question's scale"),
    Column.FIRMNESS: Heading("firm", "How much of the starting belief comes back in every round, in hundredths"),
    Column.OWN: Heading("own", "Points of 100 for the own view"),
    Column.BALLOTS: Heading("votes", "Votes cast; 0 attends without a vote"),
    Column.PRESENT: Heading("here", "Present; who is not neither hears, is heard, nor votes"),
}
Change = Callable[[Scenario], Scenario]


class PeopleModel(QAbstractTableModel):
    """One row per person. An edit goes to the session; with several people selected it goes to all of them."""

    refused = Signal(str)

    def __init__(self, session: Session, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._people: tuple[Person, ...] = session.variant.people
        self._own: list[float] = []
        self._now: NDArray[np.float64] = session.beliefs_at(session.player.position)
        self._weigh()
        session.scenario_changed.connect(self.refresh)
        session.rehearsal_changed.connect(self.refresh_now)

    # Shape

    def rowCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else len(self._people)

    def columnCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else len(Column)

    def person(self, row: int) -> Person:
        """The person in `row`."""
        return self._people[row]

    def row_of(self, person_id: str) -> int | None:
        """The row of a person, or None."""
        return next((row for row, person in enumerate(self._people) if person.id == person_id), None)

    def refresh(self) -> None:
        """Read the people again."""
        people = self._session.variant.people
        if people is self._people:
            self._weigh()
            self.refresh_now()
            self._tell(Column.START, Column.OWN)
            return
        same = [one.id for one in people] == [one.id for one in self._people]
        if not same:
            self.beginResetModel()
        self._people = people
        self._now = self._session.beliefs_at(self._session.player.position)
        self._weigh()
        if same:
            self._tell(Column.NAME, Column.PRESENT)
        else:
            self.endResetModel()

    def refresh_now(self) -> None:
        """Read the beliefs at the present round again."""
        self._now = self._session.beliefs_at(self._session.player.position)
        self._tell(Column.NOW, Column.NOW)

    def _tell(self, first: Column, last: Column) -> None:
        if self._people:
            self.dataChanged.emit(self.index(0, first), self.index(len(self._people) - 1, last))

    def _weigh(self) -> None:
        """Own points of everybody, of 100."""
        variant = self._session.variant
        totals = {person.id: person.own_weight for person in variant.people}
        for arrow in variant.arrows:
            totals[arrow.listener] += arrow.weight
        self._own = [
            100 * person.own_weight / totals[person.id] if totals[person.id] else 100.0 for person in variant.people
        ]

    # Cells

    def flags(self, index: Index) -> Qt.ItemFlag:
        if not index.isValid():
            return Qt.ItemFlag.NoItemFlags
        flags = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemNeverHasChildren
        if index.column() == Column.PRESENT:
            return flags | Qt.ItemFlag.ItemIsUserCheckable
        if index.column() != Column.NOW:
            return flags | Qt.ItemFlag.ItemIsEditable
        return flags

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> str | Qt.AlignmentFlag | None:
        if orientation != Qt.Orientation.Horizontal or not 0 <= section < len(Column):
            return None
        heading = HEADINGS[Column(section)]
        if role == Qt.ItemDataRole.DisplayRole:
            return heading.short
        if role in (Qt.ItemDataRole.ToolTipRole, Qt.ItemDataRole.AccessibleTextRole):
            return heading.meaning
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _alignment(section)
        return None

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        if not index.isValid() or not 0 <= index.row() < len(self._people):
            return None
        row, column = index.row(), Column(index.column())
        if role == Qt.ItemDataRole.DisplayRole:
            return self._text(row, column)
        if role == Qt.ItemDataRole.EditRole:
            text = self._text(row, column)
            return "" if text == UNKNOWN else text
        if role == SORT_ROLE:
            return self._sort_key(row, column)
        if role == Qt.ItemDataRole.CheckStateRole and column == Column.PRESENT:
            return Qt.CheckState.Checked if self._people[row].present else Qt.CheckState.Unchecked
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _alignment(column)
        if role == BELIEF_ROLE and column == Column.NOW:
            return float(self._now[row])
        if role == Qt.ItemDataRole.AccessibleTextRole:
            name, heading = self._people[row].shown_name, HEADINGS[column]
            shown = ("yes" if self._people[row].present else "no") if column == Column.PRESENT else None
            return name if column == Column.NAME else f"{name}, {heading.short}: {shown or self._text(row, column)}"
        return None

    def _text(self, row: int, column: Column) -> str | None:
        person, question = self._people[row], self._session.question
        match column:
            case Column.NAME:
                return person.shown_name
            case Column.START:
                belief = person.beliefs.get(question.id)
                return UNKNOWN if belief is None else amount(belief)
            case Column.NOW:
                return number(float(self._now[row]), question)
            case Column.MARGIN:
                margin = person.margins.get(question.id)
                return "" if margin is None else amount(margin)
            case Column.FIRMNESS:
                return amount(round(person.firmness * 100, 6))
            case Column.OWN:
                return amount(round(self._own[row], 1))
            case Column.BALLOTS:
                return amount(person.ballots)
            case Column.PRESENT:
                return None

    def _sort_key(self, row: int, column: Column) -> object:
        person, question = self._people[row], self._session.question
        match column:
            case Column.NAME:
                return person.shown_name.casefold()
            case Column.START:
                return person.beliefs.get(question.id, question.middle)
            case Column.NOW:
                return float(self._now[row])
            case Column.MARGIN:
                return person.margins.get(question.id, -1.0)
            case Column.FIRMNESS:
                return person.firmness
            case Column.OWN:
                return self._own[row]
            case Column.BALLOTS:
                return person.ballots
            case Column.PRESENT:
                return int(person.present)

    # Edits

    def setData(self, index: Index, value: object, role: int = Qt.ItemDataRole.EditRole) -> bool:
        if not index.isValid():
            return False
        row, column = index.row(), Column(index.column())
        if role == Qt.ItemDataRole.CheckStateRole and column == Column.PRESENT:
            present = Qt.CheckState(value) == Qt.CheckState.Checked
            return self._change(row, "Change who is present", lambda ids, variant: _presence(ids, present, variant))
        if role != Qt.ItemDataRole.EditRole or str(value) == self.data(index, role):
            return False
        try:
            return self._type(row, column, str(value))
        except DeliberateError as error:
            self._session.refused.emit(str(error))
            return False

    def _type(self, row: int, column: Column, text: str) -> bool:
        question, person = self._session.question.id, self._people[row]
        if column == Column.NAME:
            return self._session.edit(
                f"Rename {person.shown_name}", lambda scenario: edits.rename_person(scenario, person.id, text)
            )
        empty = not text.strip() or text.strip() == UNKNOWN
        match column:
            case Column.START:
                value = None if empty else typed_number(text, "a starting belief")
                return self._change(
                    row,
                    "Set the starting belief",
                    lambda ids, variant: lambda s: edits.set_belief(s, ids, question, value, variant=variant),
                )
            case Column.MARGIN:
                value = None if empty else typed_number(text, "a margin")
                return self._change(
                    row,
                    "Set the margin",
                    lambda ids, variant: lambda s: edits.set_margin(s, ids, question, value, variant=variant),
                )
            case Column.FIRMNESS:
                hundredths = typed_number(text, "firmness")
                if not 0 <= hundredths <= 100:
                    raise DeliberateError(f"firmness must be from 0 to 100, is {amount(hundredths)}")
                return self._change(
                    row,
                    "Set the firmness",
                    lambda ids, variant: lambda s: edits.set_firmness(s, ids, hundredths / 100, variant=variant),
                )
            case Column.OWN:
                points = typed_number(text, "own points")
                return self._change(
                    row,
                    "Set the own points",
                    lambda ids, variant: lambda s: edits.set_own_points(s, ids, points, variant=variant),
                )
            case Column.BALLOTS:
                votes = typed_number(text, "the number of votes")
                return self._change(
                    row,
                    "Set the votes",
                    lambda ids, variant: lambda s: edits.set_ballots(s, ids, votes, variant=variant),
                )
        return False

    def _change(self, row: int, step: str, change: Callable[[list[str], str], Change]) -> bool:
        """Edit the person in `row`, or all selected people when she is one of them, as one step."""
        person, selected = self._people[row], self._session.selection.people
        together = person.id in selected and len(selected) > 1
        ids = [one.id for one in self._people if one.id in selected] if together else [person.id]
        whose = f"{len(ids)} people" if together else person.shown_name
        return self._session.edit(f"{step} of {whose}", change(ids, self._session.variant.name))


def _presence(ids: list[str], present: bool, variant: str) -> Change:
    return lambda scenario: edits.set_presence(scenario, ids, present, variant=variant)


def _alignment(column: int) -> Qt.AlignmentFlag:
    side = Qt.AlignmentFlag.AlignLeft if column == Column.NAME else Qt.AlignmentFlag.AlignRight
    return side | Qt.AlignmentFlag.AlignVCenter
