"""What stands out: findings as short sentences, the most important first.

A pointer or the keyboard focus on a finding lights up its people and arrows; a click or Return opens the reason
and, where there is one, a change to try as a variant.
"""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QEvent, QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QEnterEvent, QFocusEvent, QKeyEvent, QMouseEvent, QPainter, QPaintEvent
from PySide6.QtWidgets import QFrame, QLabel, QScrollArea, QVBoxLayout, QWidget

from deliberate.rehearsal.results import Finding, Rehearsal, Suggestion
from deliberate.rehearsal.suggestions import apply, words
from deliberate.rehearsal.words import with_unit
from deliberate.scenario.values import Question
from deliberate.window.session import Session
from deliberate.window.text import WrappingButton, plain_label, strong
from deliberate.window.theme import Look

MARK_WIDTH = 4


class FindingCard(QWidget):
    """One finding. `pointed` says that pointer or focus came or went, `tried` asks for the change."""

    pointed = Signal(object)  # Finding, or None
    tried = Signal(object)  # Suggestion
    opened = Signal(object)  # this card

    def __init__(self, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self._look = look
        self.finding: Finding | None = None
        self.open = False
        self._hot = False
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.says = plain_label(self)
        strong(self.says)
        self.why = plain_label(self, muted=True)
        self.button = WrappingButton(look, self)
        self.button.clicked.connect(self._try)
        column = QVBoxLayout(self)
        column.setContentsMargins(16, 7, 10, 7)
        column.setSpacing(4)
        for part in (self.says, self.why, self.button):
            column.addWidget(part)

    def show_finding(self, finding: Finding, change: str) -> None:
        """Show `finding`; `change` is the suggestion in words, or empty."""
        self.finding = finding
        self.says.setText(finding.says)
        self.why.setText(finding.why)
        self.button.setText(f"Try: {change}" if change else "")
        self.button.setAccessibleName(f"Try as a variant: {change}" if change else "")
        self.setAccessibleName(finding.says)
        self.setAccessibleDescription(finding.why)
        self.set_open(self.open)

    def set_open(self, is_open: bool) -> None:
        """Show or hide the reason and the change to try."""
        self.open = is_open
        self.why.setVisible(is_open)
        self.button.setVisible(is_open and bool(self.button.text()))
        self.updateGeometry()
        self.update()

    def _try(self) -> None:
        if self.finding is not None and self.finding.suggestion is not None:
            self.tried.emit(self.finding.suggestion)

    def _set_hot(self, hot: bool) -> None:
        # Said again also when nothing changes here: another card may have been pointed at meanwhile.
        self._hot = hot
        self.pointed.emit(self.finding if hot else None)
        self.update()

    def enterEvent(self, event: QEnterEvent) -> None:
        self._set_hot(True)
        super().enterEvent(event)

    def leaveEvent(self, event: QEvent) -> None:
        self._set_hot(self.hasFocus())
        super().leaveEvent(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        self._set_hot(True)
        super().focusInEvent(event)

    def focusOutEvent(self, event: QFocusEvent) -> None:
        self._set_hot(self.underMouse())
        super().focusOutEvent(event)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self.opened.emit(self)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space):
            self.opened.emit(self)
        else:
            super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        theme = self._look.theme
        with QPainter(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(Qt.PenStyle.NoPen)
            if self._hot:
                painter.setBrush(QColor(theme.tint))
                painter.drawRoundedRect(QRectF(self.rect()), 6, 6)
            painter.setBrush(QColor(theme.accent if self._hot or self.open else theme.mark))
            height = self.says.height() - 4
            painter.drawRoundedRect(QRectF(5, self.says.y() + 2, MARK_WIDTH, height), 2, 2)
            if self.hasFocus():
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.setPen(QColor(theme.accent))
                painter.drawRoundedRect(QRectF(self.rect()).adjusted(0.5, 0.5, -0.5, -0.5), 6, 6)


@dataclass(frozen=True)
class Before:
    """What the shown variant gave before a change was tried."""

    variant: str
    rehearsal: Rehearsal
    change: str


def effect_lines(before: Rehearsal, after: Rehearsal, question: Question) -> list[tuple[str, str, str]]:
    """What a tried change does to the result: (figure, before, after) in words, whichever way it goes."""

    def settles(rehearsal: Rehearsal) -> str:
        if not rehearsal.settles:
            return "keeps swinging"
        if rehearsal.rounds_to_agree is None:
            return "no common view"
        return f"round {rehearsal.rounds_to_agree}"

    def vote(rehearsal: Rehearsal) -> str:
        tally = rehearsal.ballot[-1] if rehearsal.ballot else None
        if tally is None:
            return "no vote"
        return f"{tally.in_favour:g} for, {tally.against:g} against"

    def spread(rehearsal: Rehearsal) -> str:
        return with_unit(float(rehearsal.spread[-1]), question)

    rows = [
        ("Agree within 1 % of the scale", settles(before), settles(after)),
        ("Spread at the plan's end", spread(before), spread(after)),
        ("Effective voices", f"{before.effective_voices:.1f}", f"{after.effective_voices:.1f}"),
    ]
    if before.ballot is not None and after.ballot is not None:
        rows.append(("Vote at the plan's end", vote(before), vote(after)))
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

    def paintEvent(self, event: QPaintEvent) -> None:
        with QPainter(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(QColor(self._look.theme.line))
            painter.setBrush(QColor(self._look.theme.raised))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(0.5, 0.5, -0.5, -0.5), 6, 6)


class FindingsPanel(QWidget):
    """The list of findings of the shown variant and question."""

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session, self._look = session, look
        self._cards: list[FindingCard] = []
        self._before: Before | None = None
        self._awaited = ""
        heading = plain_label(self, muted=True)
        strong(heading)
        heading.setText("What stands out")
        self.waiting = QLabel("Working it out …", self)
        self.effect = EffectNote(look, self)

        self._list = QWidget(self)
        self._column = QVBoxLayout(self._list)
        self._column.setContentsMargins(0, 0, 4, 4)
        self._column.setSpacing(2)
        self._column.addWidget(self.effect)
        self._column.addWidget(self.waiting)
        self._column.addStretch(1)
        self.scroll = QScrollArea(self)
        self.scroll.setWidgetResizable(True)
        self.scroll.setFrameShape(QFrame.Shape.NoFrame)
        self.scroll.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.scroll.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.scroll.setWidget(self._list)

        column = QVBoxLayout(self)
        column.setContentsMargins(14, 8, 6, 4)
        column.setSpacing(6)
        column.addWidget(heading)
        column.addWidget(self.scroll, 1)
        session.findings_changed.connect(self.refresh)
        session.rehearsal_changed.connect(self._show_effect)
        session.scenario_changed.connect(self._forget_effect)
        look.changed.connect(self.update)
        self.refresh()

    @property
    def cards(self) -> list[FindingCard]:
        """The cards on show, the most important first."""
        return [card for card in self._cards if card.finding is not None]

    def sizeHint(self) -> QSize:
        return QSize(340, 300)

    def refresh(self) -> None:
        """Read the findings again."""
        session = self._session
        findings = session.findings
        self.waiting.setVisible(session.rehearsal is None and bool(session.variant.people))
        while len(self._cards) < len(findings):
            self._add_card()
        opened = next((card.finding.kind for card in self._cards if card.finding and card.open), None)
        kinds = [finding.kind for finding in findings]
        if opened not in kinds:
            opened = kinds[0] if kinds else None
        for card, finding in zip(self._cards, findings, strict=False):
            change = words(finding.suggestion, session.variant) if finding.suggestion else ""
            card.open = finding.kind == opened
            card.show_finding(finding, change)
            card.show()
        for card in self._cards[len(findings) :]:
            card.finding = None
            card.open = False
            card.hide()

    def _add_card(self) -> None:
        card = FindingCard(self._look, self._list)
        card.pointed.connect(self._session.light)
        card.tried.connect(self.try_change)
        card.opened.connect(self._open)
        self._column.insertWidget(self._column.count() - 1, card)
        self._cards.append(card)

    def _open(self, opened: FindingCard) -> None:
        is_open = opened.open
        for card in self._cards:
            card.set_open(card is opened and not is_open)

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
            self._before, self._awaited = None, ""
            self.effect.hide()
