"""The window of the comparison, beside the work: it follows every edit."""

from __future__ import annotations

import importlib
from pathlib import Path

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import (
    QAbstractItemView,
    QComboBox,
    QDialog,
    QFileDialog,
    QHBoxLayout,
    QHeaderView,
    QLabel,
    QPushButton,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from deliberate.window.comparison.run import Comparison
from deliberate.window.comparison.table import ComparisonModel
from deliberate.window.session import Session
from deliberate.window.text import plain_label
from deliberate.window.theme import Look

FIGURES = (
    ("Highest, mean and lowest belief", "beliefs"),
    ("Spread", "spread"),
    ("Ballots in favour", "votes"),
)
ONE_VARIANT = "There is one variant only. Variants > Add a copy makes another way of setting up the same meeting."

NAME_WIDTH = 200


class _RowsOnly(QStyledItemDelegate):
    """Cells without a focus of their own: the tinted row says which variant stands in front."""

    def initStyleOption(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> None:
        super().initStyleOption(option, index)
        option.state &= ~QStyle.StateFlag.State_HasFocus


class ComparisonDialog(QDialog):
    """One chart with a line for each variant, and a table of figures below."""

    def __init__(self, session: Session, look: Look, window: QWidget) -> None:
        super().__init__(window)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle("Variants compared")
        self._session = session
        self.comparison = Comparison(session, self)
        self.comparison.refused.connect(session.refused)
        plot = importlib.import_module("deliberate.window.comparison.plot")
        self.plot = plot.ComparisonPlot(session, self.comparison, look, self)
        self.figure = QComboBox(self)
        for words, figure in FIGURES:
            self.figure.addItem(words, figure)
        self.figure.setAccessibleName("What the chart shows by round")
        self.figure.activated.connect(self._show_figure)
        self.hint = plain_label(self, muted=True)
        self.model = ComparisonModel(session, self.comparison, self)
        self.table = self._table()
        self._lay_out()
        self.comparison.changed.connect(self._refresh)
        self.finished.connect(self.comparison.close)
        self._refresh()
        self.resize(940, 640)
        self.table.setFocus()
        self.table.setCurrentIndex(self.model.index(session.place, 0))

    def _table(self) -> QTableView:
        table = QTableView(self)
        table.setItemDelegate(_RowsOnly(table))
        table.setModel(self.model)
        table.setAccessibleName("Figures of the compared variants")
        table.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        table.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        table.setShowGrid(False)
        table.setWordWrap(True)
        table.verticalHeader().hide()
        table.setTabKeyNavigation(False)
        header = table.horizontalHeader()
        header.setHighlightSections(False)
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter | _WRAP)
        header.setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.Interactive)
        header.resizeSection(0, NAME_WIDTH)
        header.setFixedHeight(2 * header.fontMetrics().height() + 12)
        table.verticalHeader().setMinimumSectionSize(2 * header.fontMetrics().height() + 10)
        table.verticalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        table.selectionModel().currentRowChanged.connect(self._bring_forward)
        return table

    def _lay_out(self) -> None:
        above = QHBoxLayout()
        label = QLabel("&By round", self)
        label.setBuddy(self.figure)
        above.addWidget(label)
        above.addWidget(self.figure)
        above.addStretch(1)
        copy = QPushButton("&Copy the table", self)
        copy.clicked.connect(self.copy_table)
        save = QPushButton("&Save as CSV …", self)
        save.clicked.connect(self.ask_save)
        picture = QPushButton("Copy the &picture", self)
        picture.clicked.connect(self.copy_picture)
        close = QPushButton("C&lose", self)
        close.clicked.connect(self.close)
        below = QHBoxLayout()
        for button in (copy, save, picture):
            below.addWidget(button)
        below.addStretch(1)
        below.addWidget(close)
        for button in (copy, save, picture, close):
            button.setAutoDefault(False)
        column = QVBoxLayout(self)
        column.addLayout(above)
        column.addWidget(self.plot, 3)
        column.addWidget(self.hint)
        column.addWidget(self.table, 2)
        column.addLayout(below)

    def _refresh(self) -> None:
        several = len(self.comparison.variants) > 1
        self.hint.setText("" if several else ONE_VARIANT)
        self.hint.setVisible(not several)
        place = self.figure.findData("votes")
        self.figure.model().item(place).setEnabled(self._session.question.pass_mark is not None)
        if self._session.question.pass_mark is None and self.figure.currentIndex() == place:
            self.figure.setCurrentIndex(0)
            self._show_figure(0)

    def _show_figure(self, place: int) -> None:
        self.plot.show_figure(self.figure.itemData(place))

    def _bring_forward(self, current: QModelIndex) -> None:
        self.plot.bring_forward(current.row())

    # Copying and saving

    def copy_table(self) -> None:
        """Put the table on the clipboard, for a sheet."""
        QGuiApplication.clipboard().setText(self.model.text("\t"))
        self._session.said.emit("The table is on the clipboard")

    def copy_picture(self) -> None:
        """Put the chart on the clipboard as a picture."""
        QGuiApplication.clipboard().setPixmap(self.plot.grab())
        self._session.said.emit("The chart is on the clipboard")

    def ask_save(self) -> None:
        """Ask for a file and save the table as CSV."""
        chosen, _ = QFileDialog.getSaveFileName(self, "Save the table", "", "CSV sheets (*.csv)")
        if chosen:
            path = Path(chosen)
            self.save(path if path.suffix else path.with_suffix(".csv"))

    def save(self, path: Path) -> None:
        """Save the table as CSV (RFC 4180, UTF-8 with its mark, so that sheets read the names)."""
        try:
            path.write_text(self.model.text(","), encoding="utf-8-sig", newline="")
        except OSError as error:
            self._session.refused.emit(f"The table was not saved: {error.strerror or 'it could not be written'}")
            return
        self._session.said.emit("The table is saved")


_WRAP = Qt.TextFlag.TextWordWrap
