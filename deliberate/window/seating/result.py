"""The seating that was found: what it does, how sure that is, and the tables of each rotation."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QLabel, QScrollArea, QVBoxLayout, QWidget

from deliberate.rehearsal.seating.told import cautions, company, stage_names, standing, summary, table_names
from deliberate.rehearsal.seating.wish import Seating
from deliberate.rehearsal.words import shown_names
from deliberate.scenario.values import Question, Variant
from deliberate.window.seating.cards import Flow, TableCard
from deliberate.window.text import plain_label, strong
from deliberate.window.theme import Look, belief_color

BEFORE = (
    "Say how many tables there are and how often people are seated anew. The search then tries who could sit with "
    "whom, and shows the seating that serves best by this sketch, beside 1,000 seatings at random."
)


class ResultView(QWidget):
    """Shows one seating, or a few words where there is none."""

    def __init__(self, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self._look = look
        self._shown: tuple[Seating, Variant, Question] | None = None
        self.says = plain_label(self)
        strong(self.says)
        self.standing = plain_label(self, muted=True)
        self.caution = plain_label(self)
        self.cards: list[TableCard] = []
        self.scroll = QScrollArea(self)
        self.scroll.setWidgetResizable(True)
        self.scroll.setFrameShape(QFrame.Shape.NoFrame)
        self.scroll.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.scroll.setAccessibleName("Tables")
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        for part in (self.says, self.standing, self.caution):
            column.addWidget(part)
        column.addSpacing(4)
        column.addWidget(self.scroll, 1)
        look.changed.connect(self._paint_anew)
        self.say(BEFORE)

    def say(self, words: str) -> None:
        """Show words only."""
        self._shown = None
        self.says.setText("")
        self.says.hide()
        self.standing.setText(words)
        self.caution.hide()
        self._lay_tables(QWidget(self))

    def show_seating(self, seating: Seating, variant: Variant, question: Question) -> None:
        """Show what was found for a variant and a question."""
        self._shown = seating, variant, question
        self.says.setText(summary(seating, question))
        self.says.show()
        self.standing.setText(f"{standing(seating)} {company(seating)}")
        told = cautions(seating, variant)
        self.caution.setText("\n".join(told))
        self.caution.setVisible(bool(told))
        self._lay_tables(self._tables(seating, variant, question))

    def _paint_anew(self) -> None:
        if self._shown is not None:
            self.show_seating(*self._shown)

    def _tables(self, seating: Seating, variant: Variant, question: Question) -> QWidget:
        names, theme = shown_names(variant), self._look.theme
        starts = {one.id: one.beliefs.get(question.id, question.middle) for one in variant.people}
        page = QWidget(self)
        column = QVBoxLayout(page)
        column.setContentsMargins(0, 0, 8, 8)
        column.setSpacing(8)
        for rotation, tables in zip(stage_names(seating), seating.rotations, strict=True):
            heading = QLabel(rotation, page)
            heading.setProperty("muted", True)
            strong(heading)
            column.addWidget(heading)
            rows = Flow()
            for title, people in zip(table_names(seating), tables, strict=True):
                colors = [belief_color(starts[one], question, theme) for one in people]
                rows.addWidget(TableCard(self._look, title, [names[one] for one in people], colors, page))
            column.addLayout(rows)
        column.addStretch(1)
        return page

    def _lay_tables(self, page: QWidget) -> None:
        self.scroll.setWidget(page)  # and the former page goes
        self.cards = page.findChildren(TableCard)
