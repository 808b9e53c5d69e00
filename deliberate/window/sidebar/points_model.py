"""The 100 points of one listener as a table: her own view first, then those she hears."""

from __future__ import annotations

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import amount, shown_names
from deliberate.scenario import edits
from deliberate.scenario.access import arrow_between
from deliberate.scenario.values import Basis
from deliberate.window.session import Session
from deliberate.window.sidebar.numbers import typed_number
from deliberate.window.sidebar.people_model import BELIEF_ROLE

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
        self._names = shown_names(session.variant)
        self._beliefs = dict[str, float]()
        session.scenario_changed.connect(self.refresh)
        session.selection_changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Read the selected person's row of points again."""
        session, variant = self._session, self._session.variant
        chosen = [person.id for person in variant.people if person.id in session.selection.people]
        listener = chosen[0] if len(chosen) == 1 else None
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
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.EditRole):
            return self._text(source, points, index.column())
        if role == POINTS_ROLE:
            return points
        if role == BELIEF_ROLE:
            return self._beliefs.get(source)
        if role == Qt.ItemDataRole.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignRight if index.column() == POINTS else Qt.AlignmentFlag.AlignLeft
            return side | Qt.AlignmentFlag.AlignVCenter
        if role == Qt.ItemDataRole.AccessibleTextRole and self.listener is not None:
            listens = self._names.get(self.listener, self.listener)
            whom = "the own view" if source == self.listener else self._names.get(source, source)
            return f"{listens} listens to {whom}: {amount(round(points, 1))} of 100 points"
        return None

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
            return self._set_basis(source, str(value))
        if str(value) == self.data(index):
            return False
        try:
            return self.give(source, typed_number(str(value), "points"))
        except DeliberateError as error:
            self._session.refused.emit(str(error))
            return False

    def give(self, source: str, points: float, merge: str = "") -> bool:
        """Let `source` count for `points` of the listener's 100; 0 stops listening."""
        listener, variant = self.listener, self._session.variant.name
        assert listener is not None
        others = "rescale" if self.make_room else "keep"
        return self._session.edit(
            f"Change the points of {self._names[listener]}",
            lambda scenario: edits.set_points(scenario, listener, source, points, variant=variant, others=others),
            merge=merge,
        )

    def hear(self, source: str) -> bool:
        """Let the listener hear one more person, with what she gives to a source on average."""
        given = [points for one, points in self._rows if one != self.listener]
        points = sum(given) / len(given) if given else 20.0
        return self.give(source, min(round(points / (1 + points / 100)), 50) or 1)

    def _set_basis(self, source: str, basis: str) -> bool:
        wanted = next((one for one in BASES if one == basis), None)
        listener, variant = self.listener, self._session.variant.name
        if wanted is None or listener is None or source == listener:
            return False
        return self._session.edit(
            f"Say where the points of {self._names[listener]} come from",
            lambda scenario: edits.set_basis(scenario, [(listener, source)], wanted, variant=variant),
        )
