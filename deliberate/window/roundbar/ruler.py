"""The plan as one ruler: stages as labelled spans, rounds as ticks, straw polls as marks, the round as a handle."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import (
    QColor,
    QContextMenuEvent,
    QFocusEvent,
    QFontMetricsF,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QPolygonF,
    QWheelEvent,
)
from PySide6.QtWidgets import QAbstractSlider, QWidget

from deliberate.scenario import edits
from deliberate.scenario.values import Plan
from deliberate.window.rounds_ruler import tick_step
from deliberate.window.session import Session
from deliberate.window.text import elided, tooltip
from deliberate.window.theme import Look, mix

SETTING_WORDS = {
    "plenary": "everybody hears as drawn",
    "tables": "at tables",
    "panel": "only the speakers are heard",
    "pairs": "in pairs",
    "silence": "nobody is heard",
}
KNOB = 7.0
GRIP = 6.0  # pixels around the end of a stage that take hold of it


@dataclass(frozen=True)
class Span:
    """One stage on the ruler, in rounds."""

    index: int
    start: int
    end: int


def spans(plan: Plan) -> tuple[Span, ...]:
    """The stages of `plan` one after the other."""
    found, end = [], 0
    for index, stage in enumerate(plan.stages):
        found.append(Span(index, end, end + stage.rounds))
        end += stage.rounds
    return tuple(found)


class Ruler(QAbstractSlider):
    """The plan from round 0 to the last one. It is a slider, so keyboard and screen reader know it as one."""

    stage_chosen = Signal(int)  # index of the stage to edit; -1 for none
    menu_wanted = Signal(int, QPointF)  # stage index, global position

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session, self._look = session, look
        self._player = session.player
        self.chosen = -1
        self.scale = 1.0  # pixels of the widget to one of the ruler
        self._dragged_end: int | None = None  # index of the stage whose end is held
        self._proposed: int | None = None  # its rounds while it is held
        self._scrubbing = False
        self._hover = -1
        self.setOrientation(Qt.Orientation.Horizontal)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.setAccessibleName("Round")
        session.scenario_changed.connect(self.refresh)
        session.player.moved.connect(self._follow)
        session.player.settings_changed.connect(self.refresh)
        look.changed.connect(self.update)
        self.actionTriggered.connect(self._obey)
        self.refresh()

    # What it shows

    def refresh(self) -> None:
        """Read the plan again."""
        plan = self._session.variant.plan
        self.setRange(0, self._player.last)
        self.setPageStep(max(1, self._player.last // 10))
        self.setAccessibleDescription(
            "; ".join(f"{stage.name}, {stage.rounds} rounds, {SETTING_WORDS[stage.setting]}" for stage in plan.stages)
        )
        if self.chosen >= len(plan.stages):
            self.choose(-1)
        self._follow(self._player.position)
        self.update()

    def choose(self, index: int) -> None:
        """Mark the stage that is being edited; -1 for none."""
        if index != self.chosen:
            self.chosen = index
            self.stage_chosen.emit(index)
            self.update()

    def sizeHint(self) -> QSize:
        height = self.fontMetrics().height()
        return QSize(400, round(height * 2.9 + 24))

    def minimumSizeHint(self) -> QSize:
        return QSize(120, self.sizeHint().height())

    def _follow(self, position: float) -> None:
        blocked = self.blockSignals(True)
        self.setValue(round(position))
        self.blockSignals(blocked)
        self.update()

    # Where things are

    def _track(self) -> QRectF:
        """The row of the stages."""
        side = KNOB + 6
        return QRectF(side, 15.0, max(self.width() - 2 * side, 1.0), self.fontMetrics().height() + 9.0)

    def _x(self, position: float) -> float:
        track = self._track()
        return track.left() + track.width() * position / max(self._player.last, 1)

    def position_at(self, x: float) -> float:
        """The round, with its part, under the horizontal place `x`."""
        track = self._track()
        return min(max((x - track.left()) / track.width(), 0.0), 1.0) * self._player.last

    def stage_under(self, point: QPointF) -> int:
        """Index of the stage whose span is under `point`, or -1."""
        track = self._track()
        if not track.top() - 2 <= point.y() <= track.bottom() + 2:
            return -1
        position = self.position_at(point.x())
        return next((span.index for span in spans(self._session.variant.plan) if position < span.end), -1)

    def span_rect(self, index: int) -> QRectF:
        """The rectangle of one stage, in widget coordinates."""
        span, track = spans(self._session.variant.plan)[index], self._track()
        return QRectF(self._x(span.start), track.top(), self._x(span.end) - self._x(span.start), track.height())

    def _end_under(self, point: QPointF) -> int | None:
        track = self._track()
        if not track.top() <= point.y() <= track.bottom():
            return None
        near = [span for span in spans(self._session.variant.plan) if abs(self._x(span.end) - point.x()) <= GRIP]
        return near[-1].index if near else None

    # Mouse and keys

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() != Qt.MouseButton.LeftButton:
            return
        point = event.position()
        on_knob = abs(self._x(self._player.position) - point.x()) <= KNOB + 3 and point.y() < self._track().top() + 2
        self._dragged_end = None if on_knob else self._end_under(point)
        if self._dragged_end is None and (on_knob or self.stage_under(point) < 0):
            self._scrubbing = True
            self._scrub(point.x())

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        point = event.position()
        if self._scrubbing:
            self._scrub(point.x())
        elif self._dragged_end is not None:
            self._propose(point.x())
        elif event.buttons() & Qt.MouseButton.LeftButton:
            self._scrubbing = True  # a drag that began on a stage moves the round, a click edits the stage
            self._scrub(point.x())
        else:
            over_end = self._end_under(point) is not None
            self.setCursor(Qt.CursorShape.SplitHCursor if over_end else Qt.CursorShape.ArrowCursor)
            hover = self.stage_under(point)
            if hover != self._hover:
                self._hover = hover
                self.setToolTip(self._hint(hover))
                self.update()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if event.button() != Qt.MouseButton.LeftButton:
            return
        if self._dragged_end is not None:
            self._lengthen()
        elif self._scrubbing:
            self._player.seek(round(self._player.position))
        else:
            under = self.stage_under(event.position())
            self.choose(-1 if under == self.chosen else under)
        self._scrubbing, self._dragged_end, self._proposed = False, None, None
        self.update()

    def wheelEvent(self, event: QWheelEvent) -> None:
        steps = event.angleDelta().y() // 120
        if steps:
            self._player.step(-steps)
        event.accept()

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        at = QPointF(event.pos())
        index = self.stage_under(at) if event.reason() == QContextMenuEvent.Reason.Mouse else self.chosen
        self.menu_wanted.emit(index, QPointF(event.globalPos()))

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.choose(self._session.stage_at(self._player.position) if self.chosen < 0 else -1)
        elif event.key() == Qt.Key.Key_Space:
            self._player.toggle()
        else:
            super().keyPressEvent(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self.update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.update()

    def _obey(self, _action: int) -> None:
        """Arrow keys, Page Up and Down, Home and End, as a slider has them."""
        self._player.seek(self.sliderPosition())

    def _scrub(self, x: float) -> None:
        self._player.pause()
        self._player.seek(self.position_at(x))

    def _propose(self, x: float) -> None:
        index = self._dragged_end
        assert index is not None
        span = spans(self._session.variant.plan)[index]
        # The ruler's scale stays as it is while an end is held, so the hand and the end stay together.
        track = self._track()
        per_round = track.width() / max(self._player.last, 1)
        self._proposed = min(max(round((x - self._x(span.start)) / per_round), 1), 10_000)
        self.setToolTip("")
        self.update()

    def _lengthen(self) -> None:
        index, rounds = self._dragged_end, self._proposed
        stage = self._session.variant.plan.stages[index] if index is not None else None
        if stage is None or index is None or rounds is None or rounds == stage.rounds:
            return
        variant = self._session.variant.name
        self._session.edit(
            f"Change the rounds of {stage.name}",
            lambda scenario: edits.change_stage(scenario, index, variant=variant, rounds=rounds),
        )

    def _hint(self, index: int) -> str:
        if index < 0:
            return ""
        stage = self._session.variant.plan.stages[index]
        rounds = "1 round" if stage.rounds == 1 else f"{stage.rounds} rounds"
        return tooltip(f"{stage.name}: {rounds}, {SETTING_WORDS[stage.setting]}. Click to change.")

    # Painting

    def paintEvent(self, event: QPaintEvent) -> None:
        with QPainter(self) as painter:
            painter.scale(self.scale, self.scale)
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            self._paint_spans(painter)
            self._paint_ticks(painter)
            self._paint_polls(painter)
            self._paint_handle(painter)

    def _paint_spans(self, painter: QPainter) -> None:
        theme, plan = self._look.theme, self._session.variant.plan
        now = self._session.stage_at(self._player.position)
        played = mix(theme.raised, theme.accent, 0.13)
        for span in spans(plan):
            stage = plan.stages[span.index]
            rect = self.span_rect(span.index).adjusted(1, 0.5, -1, -0.5)
            if span.index == self._dragged_end and self._proposed is not None:
                per_round = self._track().width() / max(self._player.last, 1)
                rect.setWidth(max(self._proposed * per_round - 2, 2))
            painter.setPen(Qt.PenStyle.NoPen)
            painter.setBrush(QColor(theme.raised))
            painter.drawRoundedRect(rect, 5, 5)
            done = min(self._x(self._player.position), rect.right()) - rect.left()
            if done > 0:
                painter.setBrush(played)
                painter.drawRoundedRect(QRectF(rect.left(), rect.top(), done, rect.height()), 5, 5)
            chosen = span.index == self.chosen
            edge = (
                theme.accent
                if chosen or span.index == self._hover
                else theme.mark
                if span.index == now
                else theme.line
            )
            painter.setPen(QColor(edge))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRoundedRect(rect, 5, 5)
            self._paint_span_text(painter, rect, stage.name, SETTING_WORDS[stage.setting], stage.setting)

    def _paint_span_text(self, painter: QPainter, rect: QRectF, name: str, words: str, setting: str) -> None:
        theme, room = self._look.theme, rect.width() - 18
        if room < 14:
            return
        if self._proposed is not None and self._dragged_end is not None and rect.width() > 0:
            dragged = self.span_rect(self._dragged_end)
            if abs(dragged.left() - rect.left()) < 2:
                words = "1 round" if self._proposed == 1 else f"{self._proposed} rounds"
                setting = ""
        metrics = QFontMetricsF(self.font())
        text = elided(name, self.font(), room)
        at = rect.adjusted(9, 0, -9, 0)
        painter.setPen(QColor(theme.ink))
        painter.drawText(at, Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft, text)
        left = room - metrics.horizontalAdvance(text) - 12
        if setting != "plenary" and left > metrics.horizontalAdvance(words):
            painter.setPen(QColor(theme.muted))
            at.setLeft(at.left() + metrics.horizontalAdvance(text) + 12)
            painter.drawText(at, Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft, words)

    def _paint_ticks(self, painter: QPainter) -> None:
        theme, last = self._look.theme, self._player.last
        metrics = QFontMetricsF(self.font())
        track = self._track()
        top = track.bottom() + 4
        step = tick_step(last, track.width(), metrics.horizontalAdvance(str(last)) + 14)
        small = tick_step(last, track.width(), 6)
        painter.setPen(QColor(theme.mark))
        for at in range(0, last + 1, small):
            painter.drawLine(QPointF(self._x(at), top), QPointF(self._x(at), top + (6 if at % step == 0 else 3)))
        painter.setPen(QColor(theme.muted))
        labels = [at for at in range(0, last + 1, step) if at == 0 or last - at >= step * 0.6] + [last] * (last > 0)
        for at in labels:
            box = QRectF(self._x(at) - 40, top + 7, 80, metrics.height())
            painter.drawText(box, Qt.AlignmentFlag.AlignHCenter, str(at))

    def _paint_polls(self, painter: QPainter) -> None:
        theme, bottom = self._look.theme, self._track().bottom() + 7
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(theme.ink))
        for poll in self._session.scenario.polls:
            if poll.question == self._session.question.id and poll.after_round <= self._player.last:
                x = self._x(poll.after_round)
                mark = [
                    QPointF(x, bottom - 5),
                    QPointF(x + 5, bottom),
                    QPointF(x, bottom + 5),
                    QPointF(x - 5, bottom),
                ]
                painter.drawPolygon(QPolygonF(mark))

    def _paint_handle(self, painter: QPainter) -> None:
        theme, track = self._look.theme, self._track()
        x = self._x(self._player.position)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(theme.accent))
        painter.drawRect(QRectF(x - 1, 8, 2, track.bottom() + 3 - 8))
        painter.drawEllipse(QPointF(x, 8.0), KNOB, KNOB)
        if self.hasFocus():
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.setPen(QColor(theme.accent))
            painter.drawEllipse(QPointF(x, 8.0), KNOB + 2.5, KNOB + 2.5)
