"""Mixed tables: ask for a seating, look at it, make it a variant, put the list on paper."""

from __future__ import annotations

import importlib
import threading
from dataclasses import dataclass
from pathlib import Path

from msgspec.structs import replace
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication, QHideEvent, QKeyEvent
from PySide6.QtWidgets import (
    QDialog,
    QFileDialog,
    QFrame,
    QHBoxLayout,
    QProgressBar,
    QPushButton,
    QScrollArea,
    QVBoxLayout,
    QWidget,
)

from deliberate.errors import DeliberateError
from deliberate.rehearsal.seating import sheet
from deliberate.rehearsal.seating.plan import as_variant
from deliberate.rehearsal.seating.wish import Seating, Wish
from deliberate.rehearsal.words import sentence
from deliberate.scenario.values import Question, Scenario, Variant
from deliberate.window.asking import tell
from deliberate.window.errand import Errand, Progress, Stopped
from deliberate.window.seating import paper
from deliberate.window.seating.form import WishForm
from deliberate.window.seating.result import BEFORE, ResultView
from deliberate.window.session import Session
from deliberate.window.theme import Look

TITLE = "Mixed tables"
MOVED_ON = "The meeting has changed since these tables were found. Find a seating again."
ANOTHER_WISH = "Other tables are wanted now. Find a seating again."
STEPS = 1000  # of the progress bar
FIELDS_WIDTH = 320


@dataclass(frozen=True, eq=False)
class Asked:
    """What a seating is looked for."""

    scenario: Scenario
    variant: Variant
    question: Question


class SeatingDialog(QDialog):
    """Beside the work, not in its way. The search runs on another thread; what it finds for a meeting that has moved
    on is dropped."""

    def __init__(self, session: Session, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(TITLE)
        self._session = session
        self.seating: Seating | None = None
        self._asked = Asked(session.scenario, session.variant, session.question)
        self._enough = threading.Event()
        self._made = ""  # the variant with these tables
        self.errand = Errand(self)
        self.form = WishForm(self)
        self.find = _button("&Find a seating", self)  # Tab goes in the order in which things are made
        self.find.setDefault(True)
        self.bar = QProgressBar(self)
        self.bar.setRange(0, STEPS)
        self.bar.setTextVisible(False)
        self.bar.setFixedHeight(6)
        self.bar.setAccessibleName("How far the search is")
        self.stop = _button("&Stop here", self)
        self.result = ResultView(look, self)
        self.make = _button("Make it a &variant", self)
        self.copy = _button("&Copy the list", self)
        self.print = _button("&Print …", self)
        self.pdf = _button("Save as P&DF …", self)
        self.close_button = _button("Close", self)
        self._lay_out()
        self._connect()
        self.form.refresh(session.variant)
        self._refresh_buttons()
        self.resize(960, 660)

    def _lay_out(self) -> None:
        fields = QScrollArea(self)
        fields.setWidgetResizable(True)
        fields.setFrameShape(QFrame.Shape.NoFrame)
        fields.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        fields.setWidget(self.form)
        self.form.layout().setContentsMargins(0, 0, 12, 0)
        bar = fields.verticalScrollBar().sizeHint().width()
        fields.setFixedWidth(max(self.form.sizeHint().width(), FIELDS_WIDTH) + bar)
        left = QVBoxLayout()
        left.setSpacing(8)
        left.addWidget(fields, 1)
        left.addWidget(self.find)
        running = QHBoxLayout()
        running.setSpacing(10)
        running.addWidget(self.bar, 1)
        running.addWidget(self.stop)
        foot = QHBoxLayout()
        foot.setSpacing(8)
        for button in (self.make, self.copy, self.print, self.pdf):
            foot.addWidget(button)
        foot.addStretch(1)
        foot.addWidget(self.close_button)
        right = QVBoxLayout()
        right.setSpacing(8)
        right.addLayout(running)
        right.addWidget(self.result, 1)
        right.addLayout(foot)
        row = QHBoxLayout(self)
        row.setContentsMargins(16, 14, 16, 14)
        row.setSpacing(22)
        row.addLayout(left)
        row.addLayout(right, 1)

    def _connect(self) -> None:
        session = self._session
        self.find.clicked.connect(self.search)
        self.stop.clicked.connect(self.stop_here)
        self.make.clicked.connect(self.make_variant)
        self.copy.clicked.connect(self._copy)
        self.print.clicked.connect(self._print)
        self.pdf.clicked.connect(self._save_pdf)
        self.close_button.clicked.connect(self.reject)
        self.form.changed.connect(lambda: self._drop(ANOTHER_WISH))
        self.errand.progressed.connect(lambda share: self.bar.setValue(round(share * STEPS)))
        self.errand.done.connect(self._show)
        self.errand.failed.connect(self._refuse)
        session.scenario_changed.connect(self._follow)

    def search(self) -> None:
        """Look for a seating of the shown variant."""
        session = self._session
        self._asked = Asked(session.scenario, session.variant, session.question)
        self.seating = None
        self._made = ""
        self._enough = threading.Event()
        self.bar.setValue(0)
        self.result.say("Trying who could sit with whom …")
        self.errand.start(_Search(self._asked, self.form.wish, self._enough))
        self._refresh_buttons()

    def stop_here(self) -> None:
        """Let the search end with the best seating so far."""
        self._enough.set()

    def make_variant(self) -> None:
        """Put the seating into the plan of one more variant, and show that; one step."""
        if self.seating is None:
            return
        scenario, name = as_variant(self._session.scenario, self.seating)
        self._made = name
        if self._session.edit(f"Mixed tables: {name}", lambda _: scenario, show=name):
            self._session.said.emit(f"“{name}” is a variant now; People > Arrange shows its tables on the picture")

    def _show(self, seating: Seating) -> None:
        self.seating = seating
        self.result.show_seating(seating, self._asked.variant, self._asked.question)
        self._refresh_buttons()

    def _refuse(self, why: str) -> None:
        self.result.say(f"{sentence(why)}.")
        self._refresh_buttons()

    def _follow(self) -> None:
        """The meeting, the variant or the question is another one: what was found may no longer hold."""
        self.form.refresh(self._session.variant)
        if not self._still_holds():
            self._drop(MOVED_ON)
        self._refresh_buttons()

    def _still_holds(self) -> bool:
        """Whether nothing but places on the picture differs from what was asked, and that or its tables are shown."""
        session, asked = self._session, self._asked
        now = next((one for one in session.scenario.variants if one.name == asked.variant.name), None)
        return (
            now is not None
            and session.variant.name in (asked.variant.name, self._made)
            and session.question == asked.question
            and _without_places(now) == _without_places(asked.variant)
        )

    def _drop(self, why: str) -> None:
        found = self.seating is not None or self.errand.running
        self.errand.stop()
        self.seating = None
        self.result.say(why if found else BEFORE)
        self._refresh_buttons()

    def _refresh_buttons(self) -> None:
        running, found = self.errand.running, self.seating is not None
        self.find.setEnabled(not running)
        self.bar.setVisible(running)
        self.stop.setVisible(running)
        for button in (self.copy, self.print, self.pdf):
            button.setEnabled(found)
        is_made = any(one.name == self._made for one in self._session.scenario.variants)
        self.make.setEnabled(found and not is_made)

    # The list

    def _html(self) -> str:
        assert self.seating is not None
        return sheet.as_html(self._asked.scenario.title, self.seating, self._asked.variant)

    def _copy(self) -> None:
        assert self.seating is not None
        text = sheet.as_text(self._asked.scenario.title, self.seating, self._asked.variant)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit("The list of tables is on the clipboard")

    def _print(self) -> None:
        paper.print_list(self._html(), TITLE, self)

    def _save_pdf(self) -> None:
        name, _ = QFileDialog.getSaveFileName(self, "Save the list of tables", "tables.pdf", "PDF (*.pdf)")
        if not name:
            return
        try:
            paper.save_pdf(self._html(), TITLE, Path(name))
        except DeliberateError as error:
            tell(self, "Not saved", str(error))

    # Its life

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape and self.errand.running:
            self.stop_here()
            return
        super().keyPressEvent(event)

    def hideEvent(self, event: QHideEvent) -> None:
        super().hideEvent(event)
        if not event.spontaneous():  # closed, or the window it belongs to is: nobody waits for it any more
            self.errand.stop()

    def done(self, result: int) -> None:
        self.errand.close()
        super().done(result)


def _without_places(variant: Variant) -> Variant:
    return replace(variant, people=tuple(replace(one, x=None, y=None) for one in variant.people))


class _Search:
    """The work of one search; ends early when enough is found or nobody wants it any more."""

    def __init__(self, asked: Asked, wish: Wish, enough: threading.Event) -> None:
        self._asked = asked.scenario, asked.variant.name, asked.question.id, wish
        self._enough = enough

    def __call__(self, progress: Progress, stopped: Stopped) -> Seating:
        # The search needs libraries that take a moment to load, so it is loaded where nobody waits for it.
        seat = importlib.import_module("deliberate.rehearsal.seating.seat").seat
        found: Seating = seat(*self._asked, progress=progress, stopped=lambda: stopped() or self._enough.is_set())
        return found


def _button(text: str, parent: QWidget) -> QPushButton:
    button = QPushButton(text, parent)
    button.setAutoDefault(False)
    return button
