"""The fourth page: what the meeting is called, and the notes on it and on the variant on screen."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtWidgets import QWidget

from deliberate.scenario import edits
from deliberate.scenario.values import Scenario
from deliberate.window.session import Session
from deliberate.window.sidebar.fields import TextField
from deliberate.window.sidebar.page import Page
from deliberate.window.text import plain_label

CARE = "Notes are saved in the file as they stand. Whoever opens it reads them."


class MeetingPage(Page):
    """Title and notes. What is typed into notes without leaving them is one step."""

    def __init__(self, session: Session, parent: QWidget) -> None:
        super().__init__(session, "Meeting", parent)
        self.add_heading("Title")
        self.title = TextField("Title of the meeting", self.body, lines=2)
        self.column.addWidget(self.title)
        self.add_heading("Notes on the meeting")
        self.notes = TextField("Notes on the meeting", self.body, lines=5, notes=True)
        self.column.addWidget(self.notes, 1)
        self.variant_heading = self.add_heading("")
        self.variant_notes = TextField("Notes on the variant", self.body, lines=5, notes=True)
        self.column.addWidget(self.variant_notes, 1)
        self.column.addWidget(plain_label(self.body, muted=True, text=CARE))
        self.title.given.connect(
            lambda text: session.edit("Change the title", lambda scenario: edits.set_title(scenario, text))
        )
        self.notes.given.connect(self._set_notes)
        self.variant_notes.given.connect(self._set_variant_notes)
        for field in (self.notes, self.variant_notes):
            field.left.connect(session.seal_step)

    def read(self) -> None:
        scenario, variant = self.session.scenario, self.session.variant
        self.title.show_text(scenario.title)
        self.notes.show_text(scenario.notes)
        self.variant_heading.setText(f"Notes on “{variant.name}”")
        self.variant_notes.show_text(variant.notes, variant.name)

    def _set_notes(self, text: str) -> None:
        self._note("Change the notes", lambda scenario: edits.set_notes(scenario, text))

    def _set_variant_notes(self, text: str) -> None:
        variant = self.session.variant.name
        self._note(
            f"Change the notes on “{variant}”",
            lambda scenario: edits.set_variant_notes(scenario, variant, text),
        )

    def _note(self, step: str, change: Callable[[Scenario], Scenario]) -> None:
        self.session.edit(step, change, merge=step)
