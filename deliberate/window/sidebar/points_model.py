"""The 100 points of one listener as a table: her own view first, then those she hears."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import amount, shown_names
from deliberate.scenario import edits
from deliberate.scenario.access import arrow_between
from deliberate.scenario.edits.points import Others
from deliberate.scenario.values import Basis, Scenario
from deliberate.window.session import Session
from deliberate.window.sidebar.numbers import plain, typed_number
from deliberate.window.sidebar.people_model import BELIEF_ROLE
from deliberate.window.text import tooltip

Index = QModelIndex | QPersistentModelIndex
POINTS_ROLE = Qt.ItemDataRole.UserRole + 2
NAME, POINTS, BASIS = range(3)
BASES: tuple[Basis, ...] = ("guess", "stated", "observed")
HEADINGS = (
    ("whose view", "Whose view counts"),
    ("points", "Points of 100"),
    ("from", "Where the number comes from: a guess, stated by the listener, or observed"),
)


class PointsModel(QAbstractTableModel):
    """Rows of the one selected person; empty when none or several are selected."""

    def __init__(self, session: Session, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self.make_room = True
        self.listener: str | None = None
        self._rows: list[tuple[str, float]] = []
        self._names: Mapping[str, str] = {}
        self._beliefs: dict[str, float] = {}

    def refresh(self) -> None:
        """Read the selected person's row of points again."""
        session, variant = self._session, self._session.variant
        chosen = session.selection.people
        listener = next(iter(chosen)) if len(chosen) == 1 else None
        rows = list(edits.points_of(variant, listener).items()) if listener is not None else []
        self._names = shown_names(variant)
        self.refresh_beliefs()
        if (listener, [one for one, _ in rows]) == (self.listener, [one for one, _ in self._rows]):
            self._rows = rows
            if rows:
                self.dataChanged.emit(self.index(0, 0), self.index(len(rows) - 1, BASIS))
            return
        self.beginResetModel()
        self.listener, self._rows = listener, rows
        self.endResetModel()

    def refresh_beliefs(self) -> None:
        """Read the present beliefs again, for the colours of the bars."""
        session = self._session
        now = session.beliefs_at(session.player.position).tolist()
        self._beliefs = {person.id: belief for person, belief in zip(session.variant.people, now, strict=True)}
        if self._rows:
            self.dataChanged.emit(self.index(0, POINTS), self.index(len(self._rows) - 1, POINTS), [BELIEF_ROLE])

    def rowCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else len(self._rows)

    def columnCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else len(HEADINGS)

    def source(self, row: int) -> str:
        """The id of the person in `row`."""
        return self._rows[row][0]

    @property
    def total(self) -> float:
        """All points together."""
        return math.fsum(points for _, points in self._rows)

    def hears(self, person: str) -> bool:
        """Whether this person's view counts, the listener's own included."""
        return any(source == person for source, _ in self._rows)

    def flags(self, index: Index) -> Qt.ItemFlag:
        if not index.isValid():
            return Qt.ItemFlag.NoItemFlags
        flags = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemNeverHasChildren
        own = self.source(index.row()) == self.listener
        editable = index.column() == POINTS or (index.column() == BASIS and not own)
        return flags | Qt.ItemFlag.ItemIsEditable if editable else flags

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> object:
        if orientation != Qt.Orientation.Horizontal or not 0 <= section < len(HEADINGS):
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return HEADINGS[section][0]
        if role == Qt.ItemDataRole.ToolTipRole:
            return HEADINGS[section][1]
        return None

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        if not index.isValid() or not 0 <= index.row() < len(self._rows):
            return None
        source, points = self._rows[index.row()]
        if role == Qt.ItemDataRole.EditRole and index.column() == POINTS:
            return plain(round(points, 9))
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.EditRole):
            return self._text(source, points, index.column())
        if role == Qt.ItemDataRole.ToolTipRole:
            return tooltip(self._sentence(source, points))
        if role == POINTS_ROLE:
            return points
        if role == BELIEF_ROLE:
            return self._beliefs.get(source)
        if role == Qt.ItemDataRole.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignRight if index.column() == POINTS else Qt.AlignmentFlag.AlignLeft
            return side | Qt.AlignmentFlag.AlignVCenter
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return self._sentence(source, points)
        return None

    def _sentence(self, source: str, points: float) -> str:
        listener = self._names.get(str(self.listener), str(self.listener))
        whom = "the own view" if source == self.listener else self._names.get(source, source)
        return f"{listener} listens to {whom}: {amount(round(points, 1))} of 100 points"

    def _text(self, source: str, points: float, column: int) -> str:
        own = source == self.listener
        if column == NAME:
            return "own view" if own else self._names.get(source, source)
        if column == POINTS:
            return amount(round(points, 1))
        arrow = None if own else arrow_between(self._session.variant, str(self.listener), source)
        return "" if arrow is None else arrow.basis

    def setData(self, index: Index, value: object, role: int = Qt.ItemDataRole.EditRole) -> bool:
        if not index.isValid() or role != Qt.ItemDataRole.EditRole or self.listener is None:
            return False
        source = self.source(index.row())
        if index.column() == BASIS:
            return self.set_basis(source, str(value))
        if str(value) == self.data(index, role):
            return False
        try:
            return self.give(source, typed_number(str(value), "points"))
        except DeliberateError as error:
            self._session.refused.emit(str(error))
            return False

    def give(self, source: str, points: float) -> bool:
        """Let `source` count for `points` of the listener's 100; 0 stops listening."""
        return self._change("Change the points of", {source: points})

    def stop_hearing(self, sources: Sequence[str]) -> bool:
        """Let these people not count any more; the own view stays."""
        gone = dict.fromkeys((one for one in sources if one != self.listener), 0.0)
        return self._change("Take points away from those heard by", gone)

    def _change(self, step: str, points: Mapping[str, float]) -> bool:
        listener, variant = self.listener, self._session.variant.name
        if listener is None or not points:
            return False
        others: Others = "rescale" if self.make_room else "keep"

        def change(scenario: Scenario) -> Scenario:
            for source, wanted in points.items():
                scenario = edits.set_points(scenario, listener, source, wanted, variant=variant, others=others)
            return scenario

        return self._session.edit(f"{step} {self._names[listener]}", change)

    def hear(self, source: str) -> bool:
        """Let the listener hear one more person, with what she gives to a source on average."""
        given = [points for one, points in self._rows if one != self.listener]
        points = sum(given) / len(given) if given else 20.0
        return self.give(source, min(round(points / (1 + points / 100)), 50) or 1)

    def set_basis(self, source: str, basis: str) -> bool:
        """Note where the points for `source` come from."""
        wanted = next((one for one in BASES if one == basis), None)
        listener, variant = self.listener, self._session.variant.name
        if wanted is None or listener is None or source == listener:
            return False
        return self._session.edit(
            f"Say where the points of {self._names[listener]} come from",
            lambda scenario: edits.set_basis(scenario, [(listener, source)], wanted, variant=variant),
        )
