"""The table of the comparison: a row for each variant, with a mark that takes it in or leaves it out."""

from __future__ import annotations

import csv
import io
from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt

from deliberate.rehearsal import comparing
from deliberate.window.chart.figures import safe_cell
from deliberate.window.comparison.run import Comparison
from deliberate.window.session import Session
from deliberate.window.text import tooltip

Index = QModelIndex | QPersistentModelIndex
WAITING = "…"
HEADINGS = ("Variant", *comparing.HEADINGS)


def letter(place: int) -> str:
    """The short name of a variant on the chart: A to Z, then A2 and so on."""
    again, one = divmod(place, 26)
    return chr(ord("A") + one) + (str(again + 1) if again else "")


class ComparisonModel(QAbstractTableModel):
    """Variants by figures, in words."""

    def __init__(self, session: Session, comparison: Comparison, parent: QObject) -> None:
        super().__init__(parent)
        self._session, self._comparison = session, comparison
        self._cells: tuple[tuple[str, ...], ...] = ()
        comparison.changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Read the figures again."""
        cells = tuple(self._row(place) for place in range(len(self._comparison.variants)))
        if len(cells) != len(self._cells):
            self.beginResetModel()
            self._cells = cells
            self.endResetModel()
            return
        self._cells = cells
        self.dataChanged.emit(self.index(0, 0), self.index(len(cells) - 1, len(HEADINGS) - 1))

    def text(self, between: str) -> str:
        """The rows that are compared with their headings, for a sheet (RFC 4180 where `between` is a comma)."""
        kept = io.StringIO()
        rows = csv.writer(kept, delimiter=between)
        rows.writerow(HEADINGS)
        for place, cells in enumerate(self._cells):
            if self._comparison.chosen(place):
                rows.writerow([safe_cell(cell) for cell in cells])
        return kept.getvalue()

    def _row(self, place: int) -> tuple[str, ...]:
        variant, rehearsal = self._comparison.variants[place], self._comparison.rehearsal(place)
        if rehearsal is not None:
            return variant.name, *comparing.figures(rehearsal, variant, self._session.question)
        return variant.name, *([WAITING if self._comparison.chosen(place) else ""] * len(comparing.HEADINGS))

    # Qt's questions

    def rowCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008
        return 0 if parent.isValid() else len(self._cells)

    def columnCount(self, parent: Index = QModelIndex()) -> int:  # noqa: B008
        return 0 if parent.isValid() else len(HEADINGS)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        if not index.isValid() or index.row() >= len(self._cells):
            return None
        place, column = index.row(), index.column()
        cell = self._cells[place][column]
        match role:
            case Qt.ItemDataRole.DisplayRole:
                return f"{letter(place)}  {cell}" if column == 0 else cell
            case Qt.ItemDataRole.ToolTipRole:
                return tooltip(cell)
            case Qt.ItemDataRole.AccessibleTextRole:
                compared = "" if self._comparison.chosen(place) else ", not compared"
                return f"{letter(place)}, {cell}{compared}" if column == 0 else f"{HEADINGS[column]}: {cell}"
            case Qt.ItemDataRole.CheckStateRole if column == 0:
                return Qt.CheckState.Checked if self._comparison.chosen(place) else Qt.CheckState.Unchecked
        return None

    def setData(self, index: Index, value: Any, role: int = Qt.ItemDataRole.EditRole) -> bool:
        if role != Qt.ItemDataRole.CheckStateRole or index.column() != 0:
            return False
        self._comparison.choose(index.row(), Qt.CheckState(value) == Qt.CheckState.Checked)
        return True

    def flags(self, index: Index) -> Qt.ItemFlag:
        flags = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable
        return flags | Qt.ItemFlag.ItemIsUserCheckable if index.column() == 0 else flags

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        if orientation == Qt.Orientation.Horizontal and role == Qt.ItemDataRole.DisplayRole:
            return HEADINGS[section]
        return None
