"""Which columns of the table of people are on screen: as many as leave the names room, or those she chose."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QObject
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QHeaderView, QMenu, QTableView

from deliberate.rehearsal.words import number
from deliberate.scenario.values import Question, Variant
from deliberate.window.sidebar.people_columns import HEADINGS, Column, Row, shown
from deliberate.window.text import tooltip

# What is needed first while a meeting is sketched and played; the selected people's other numbers stand below too.
NEEDED_FIRST = (
    Column.START, Column.NOW, Column.PRESENT, Column.FIRMNESS, Column.OWN, Column.BALLOTS, Column.MARGIN, Column.ROLE,
)  # fmt: skip
ESSENTIAL = (Column.START, Column.NOW, Column.PRESENT)
MEASURED = (Column.START, Column.MARGIN, Column.BALLOTS)  # as wide as what stands in them
LEAST_NAME_LETTERS = 9
NAME_LETTERS = 10  # beside the essential columns
WIDE_NAME_LETTERS = 16  # before any other column comes
SWATCH_ROOM = 16


class ColumnFit(QObject):
    """Shows, hides and sizes the columns of one table whenever its width changes."""

    def __init__(self, table: QTableView) -> None:
        super().__init__(table)
        self._table = table
        self.chosen: dict[Column, bool] = {}  # what she wants on screen or not; the others follow the width
        self._longest = {column: heading.sample for column, heading in HEADINGS.items()}
        header = table.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        header.setMinimumSectionSize(20)
        table.viewport().installEventFilter(self)
        self.fit()

    def measure(self, variant: Variant, question: Question) -> None:
        """Take the widths from what stands in the columns now; numbers are never cut."""
        longest = {column: heading.sample for column, heading in HEADINGS.items()}
        for column in MEASURED:
            texts = (shown(column, Row(person, 0.0, 0.0), question) for person in variant.people)
            longest[column] = max((longest[column], *texts), key=len)
        # Beliefs that play brings up are rarely round numbers.
        odd = (question.low + question.width * part for part in (0.0, 0.1371, 0.4567, 0.8713, 1.0))
        longest[Column.NOW] = max((number(value, question) for value in odd), key=len)
        if longest != self._longest:
            self._longest = longest
            self.fit()

    def fit(self) -> None:
        """Choose the columns anew and give the names what is left."""
        table = self._table
        room, letter = table.viewport().width(), table.fontMetrics().horizontalAdvance("n")
        on_screen = [column for column in NEEDED_FIRST if self.chosen.get(column)]
        used = sum(map(self._width, on_screen))
        for column in NEEDED_FIRST:
            if column in self.chosen:
                continue
            used += self._width(column)
            name = letter * (NAME_LETTERS if column in ESSENTIAL else WIDE_NAME_LETTERS)
            if used + name > room:
                break
            on_screen.append(column)
        for column in NEEDED_FIRST:
            table.setColumnHidden(column, column not in on_screen)
            table.setColumnWidth(column, self._width(column))
        left = room - sum(map(self._width, on_screen))
        table.setColumnWidth(Column.NAME, max(left, letter * LEAST_NAME_LETTERS))

    def choose(self, column: Column, on_screen: bool) -> None:
        """Keep a column on screen, or off it, at any width."""
        self.chosen[column] = on_screen
        self.fit()

    def follow_width(self) -> None:
        """Show as many as fit again."""
        self.chosen.clear()
        self.fit()

    def add_to(self, menu: QMenu) -> None:
        """Entries to choose the columns by."""
        for column in NEEDED_FIRST:
            heading = HEADINGS[column]
            action = QAction(heading.short, menu)
            action.setCheckable(True)
            action.setChecked(not self._table.isColumnHidden(column))
            action.setToolTip(tooltip(heading.meaning))
            action.triggered.connect(lambda checked, column=column: self.choose(column, checked))
            menu.addAction(action)
        menu.addSeparator()
        menu.addAction("As many as fit", self.follow_width)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if event.type() == QEvent.Type.Resize:
            self.fit()
        return False

    def _width(self, column: Column) -> int:
        metrics, heading = self._table.fontMetrics(), HEADINGS[column]
        cell = metrics.horizontalAdvance(self._longest[column]) + (SWATCH_ROOM if column == Column.NOW else 0)
        return max(cell, metrics.horizontalAdvance(heading.short)) + 10
