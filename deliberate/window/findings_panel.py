"""What stands out: findings as short sentences, the most important first, and what a tried change does."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtCore import QRectF, QSize
from PySide6.QtGui import QColor, QPainter, QPaintEvent
from PySide6.QtWidgets import QFrame, QLabel, QVBoxLayout, QWidget

from deliberate.rehearsal import comparing
from deliberate.rehearsal.results import Finding, Rehearsal, Suggestion
from deliberate.rehearsal.suggestions import apply, words
from deliberate.scenario.values import Question
from deliberate.window.cards import Card, Cards, Told
from deliberate.window.session import Session
from deliberate.window.text import plain_label, strong
from deliberate.window.theme import Look

if TYPE_CHECKING:
    from deliberate.rehearsal.doubt_results import FindingOdds


@dataclass(frozen=True)
class Before:
    """What the shown variant gave before a change was tried."""

    variant: str
    rehearsal: Rehearsal
    change: str


def effect_lines(before: Rehearsal, after: Rehearsal, question: Question) -> list[tuple[str, str, str]]:
    """What a tried change does to the result: (figure, before, after) in words, whichever way it goes."""
    rows = [
        (comparing.AGREE, comparing.agree(before), comparing.agree(after)),
        (comparing.SPREAD, comparing.spread(before, question), comparing.spread(after, question)),
        (comparing.VOICES, comparing.voices(before), comparing.voices(after)),
    ]
    if before.ballot is not None and after.ballot is not None:
        rows.append((comparing.VOTE, comparing.vote(before), comparing.vote(after)))
    return rows


class EffectNote(QFrame):
    """What the change that was tried does to the result, until another variant is shown."""

    def __init__(self, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self._look = look
        self.title = plain_label(self)
        strong(self.title)
        self.lines = plain_label(self)
        column = QVBoxLayout(self)
        column.setContentsMargins(12, 8, 12, 8)
        column.setSpacing(4)
        column.addWidget(self.title)
        column.addWidget(self.lines)
        self.hide()

    def show_effect(self, before: Before, after: Rehearsal, question: Question) -> None:
        """Lay the figures before and after side by side."""
        self.title.setText(f"What this change does, beside “{before.variant}”")
        rows = effect_lines(before.rehearsal, after, question)
        self.lines.setText("\n".join(f"{name}: {was} → {now}" for name, was, now in rows))
        self.setAccessibleName(self.title.text())
        self.setAccessibleDescription(self.lines.text())
        self.show()

    def forget(self) -> None:
        """Show nothing."""
        self.hide()
        for part in (self.title, self.lines):
            part.clear()
        self.setAccessibleName("")
        self.setAccessibleDescription("")

    def paintEvent(self, event: QPaintEvent) -> None:
        with QPainter(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(QColor(self._look.theme.line))
            painter.setBrush(QColor(self._look.theme.raised))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(0.5, 0.5, -0.5, -0.5), 6, 6)


class FindingsPanel(QWidget):
    """What stands out of the shown variant and question, and what a change that was tried did."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._before: Before | None = None
        self._awaited = ""
        self.waiting = QLabel("Working it out …", self)
        self.effect = EffectNote(look, self)
        self.list = Cards(look, self, above=(self.effect, self.waiting))
        self.list.pointed.connect(session.light)
        self.list.tried.connect(self.try_change)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.list)
        session.findings_changed.connect(self.refresh)
        session.doubting.changed.connect(self.refresh)
        session.rehearsal_changed.connect(self._show_effect)
        session.scenario_changed.connect(self._forget_effect)
        session.codes_changed.connect(self._forget_everything)
        look.changed.connect(self.update)
        self.refresh()

    @property
    def cards(self) -> list[Card]:
        """The cards on show, the most important first."""
        return self.list.shown

    def sizeHint(self) -> QSize:
        return QSize(340, 300)

    def refresh(self) -> None:
        """Read the findings again, and in how many draws they hold where that is known."""
        session = self._session
        self.waiting.setVisible(session.rehearsal is None and bool(session.variant.people))
        doubt = session.doubting.doubt
        odds = {one.finding.says: one for one in doubt.findings} if doubt is not None else {}
        self.list.tell([self._told(finding, odds.get(finding.says)) for finding in session.findings])

    def _told(self, finding: Finding, odds: FindingOdds | None) -> Told:
        return Told(
            key=finding.kind,
            says=finding.says,
            why=finding.why,
            lights=finding,
            change=words(finding.suggestion, self._session.variant) if finding.suggestion else "",
            suggestion=finding.suggestion,
            note=self._session.doubting.in_words(odds) if odds is not None else "",
        )

    def try_change(self, suggestion: Suggestion) -> None:
        """Make a variant with the change, show it, and say what it does to the result."""
        session = self._session
        if session.rehearsal is None:
            return
        variant = session.variant
        change = words(suggestion, variant)
        names = {other.name for other in session.scenario.variants}
        try_it = apply(session.scenario, variant.name, suggestion)
        added = next(other.name for other in try_it.variants if other.name not in names)
        self._before = Before(variant.name, session.rehearsal, change)
        self._awaited = added
        session.edit(f"Try: {change}", lambda _: try_it, show=added)

    def _show_effect(self) -> None:
        rehearsal = self._session.rehearsal
        if self._before is not None and rehearsal is not None and rehearsal.variant == self._awaited:
            self.effect.show_effect(self._before, rehearsal, self._session.question)

    def _forget_effect(self) -> None:
        if self._session.variant.name != self._awaited:
            self._forget_everything()

    def _forget_everything(self) -> None:
        self._before, self._awaited = None, ""
        self.effect.forget()
