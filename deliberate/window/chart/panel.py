"""The frame of the chart: heading, menu, the line about the ballot. The chart itself comes after the first frame."""

from __future__ import annotations

import importlib
from pathlib import Path

from PySide6.QtCore import QSize
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QFileDialog, QHBoxLayout, QMenu, QToolButton, QVBoxLayout, QWidget

from deliberate.errors import DeliberateError
from deliberate.window.chart.endings import ballot_in_words
from deliberate.window.chart.figures import as_csv, as_tabs
from deliberate.window.session import Session
from deliberate.window.text import explain, plain_label, strong
from deliberate.window.theme import Look


class ChartPanel(QWidget):
    """Beliefs by round with spread and ballot. Empty until `load` brings the plotting library."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session, self._look = session, look
        self.chart: QWidget | None = None
        heading = plain_label(self, muted=True, text="Beliefs by round")
        strong(heading)
        self.whole = QToolButton(self)
        self.whole.setText("Show all")
        self.whole.setProperty("quiet", True)
        self.whole.setToolTip("Show all rounds and the whole scale")
        self.whole.hide()
        self.menu_button = QToolButton(self)
        self.menu_button.setText("Copy or save")
        self.menu_button.setProperty("quiet", True)
        self.menu_button.setToolTip("The chart as a picture, or its figures")
        self.menu_button.setPopupMode(QToolButton.ToolButtonPopupMode.InstantPopup)
        menu = QMenu(self)
        menu.addAction("Copy the picture", self.copy_picture)
        menu.addAction("Copy the figures", self.copy_figures)
        menu.addSeparator()
        menu.addAction("Save the picture …", self.ask_save_picture)
        menu.addAction("Save the figures as CSV …", self.ask_save_figures)
        self.menu_button.setMenu(menu)
        self.doubt = QToolButton(self)
        self.doubt.setText("Doubt")
        self.doubt.setCheckable(True)
        self.doubt.setProperty("quiet", True)
        explain(self.doubt, "Draw the guessed numbers again and again, and show how far views may differ")
        self.doubt.toggled.connect(session.doubting.want)
        self.ballot = plain_label(self)
        self.ballot.setContentsMargins(0, 0, 8, 0)
        row = QHBoxLayout()
        row.addWidget(heading, 1)
        row.addWidget(self.whole)
        row.addWidget(self.doubt)
        row.addWidget(self.menu_button)
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(14, 8, 6, 6)
        self._column.setSpacing(4)
        self._column.addLayout(row)
        self._column.addStretch(1)
        self._column.addWidget(self.ballot)
        session.rehearsal_changed.connect(self.refresh)
        session.scenario_changed.connect(self.refresh)
        session.doubting.changed.connect(self.refresh)
        session.doubting.progressed.connect(self._tell_progress)

    def sizeHint(self) -> QSize:
        return QSize(360, 400)

    def load(self) -> None:
        """Bring the plotting library and draw. Takes a few tenths of a second the first time."""
        if self.chart is not None:
            return
        plot = importlib.import_module("deliberate.window.chart.plot")
        chart = plot.BeliefChart(self._session, self._look, self)
        self._column.removeItem(self._column.itemAt(1))
        self._column.insertWidget(1, chart, 1)
        chart.zoomed.connect(self.whole.setVisible)
        self.whole.clicked.connect(chart.show_all)
        self.chart = chart
        self.setFocusProxy(chart)

    def refresh(self) -> None:
        """Say again what the ballots come to, in the draws where these are wanted."""
        rehearsal, doubting = self._session.rehearsal, self._session.doubting
        self.doubt.setChecked(doubting.wanted)
        if doubting.wanted:
            self._say(doubting.doubt.says if doubting.doubt is not None else doubting.refusal or "Drawing …")
        else:
            self._say(ballot_in_words(rehearsal) if rehearsal is not None else "")

    def _tell_progress(self, part: float) -> None:
        if self._session.doubting.drawing:
            self._say(f"Drawing … {part:.0%}; another press on Doubt stops it")

    def _say(self, text: str) -> None:
        self.ballot.setText(text)
        self.ballot.setVisible(bool(text))

    # Copying and saving

    def copy_picture(self) -> None:
        """Put the chart on the clipboard as a picture."""
        if self.chart is not None:
            QGuiApplication.clipboard().setPixmap(self.chart.grab())
            self._session.said.emit("The chart is on the clipboard")

    def copy_figures(self) -> None:
        """Put the beliefs by round on the clipboard, for a sheet."""
        if self._session.rehearsal is not None:
            QGuiApplication.clipboard().setText(as_tabs(self._session.rehearsal, self._session.variant))
            self._session.said.emit("The figures are on the clipboard")

    def ask_save_picture(self) -> None:
        """Ask for a file and save the chart as PNG, at twice its size on screen."""
        path = self._ask("Save the picture", "PNG pictures (*.png)", ".png")
        if path is not None:
            self.save_picture(path)

    def ask_save_figures(self) -> None:
        """Ask for a file and save the beliefs by round as CSV."""
        path = self._ask("Save the figures", "CSV sheets (*.csv)", ".csv")
        if path is not None:
            self.save_figures(path)

    def save_picture(self, path: Path) -> None:
        """Save the chart as PNG."""
        if self.chart is None:
            return
        if self.chart.picture(scale=2.0).save(str(path), "PNG"):
            self._session.said.emit(f"Saved as {path.name}")
        else:
            self._session.refused.emit(f"{path.name} could not be written; try another folder")

    def save_figures(self, path: Path) -> None:
        """Save the beliefs by round as CSV (RFC 4180, UTF-8 with its mark, so that sheets read the names)."""
        rehearsal = self._session.rehearsal
        if rehearsal is None:
            return
        try:
            path.write_text(as_csv(rehearsal, self._session.variant), encoding="utf-8-sig", newline="")
        except OSError as error:
            self._session.refused.emit(str(DeliberateError(error.strerror or "could not be written", path.name)))
            return
        self._session.said.emit(f"Saved as {path.name}")

    def _ask(self, title: str, kinds: str, suffix: str) -> Path | None:
        chosen, _ = QFileDialog.getSaveFileName(self, title, "", kinds)
        if not chosen:
            return None
        path = Path(chosen)
        return path if path.suffix else path.with_suffix(suffix)
