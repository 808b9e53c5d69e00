"""The chart in pyqtgraph: what does not move lies in pixmaps, only the cursor is painted while it plays."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import QEvent, QPointF, QRectF, Qt, Signal
from PySide6.QtGui import QColor, QFocusEvent, QImage, QKeyEvent, QMouseEvent, QPainter, QPaintEvent
from PySide6.QtWidgets import QWidget

from deliberate.rehearsal.doubt_results import Doubt
from deliberate.rehearsal.words import number, shown_names
from deliberate.window.chart import doubt_bands
from deliberate.window.chart.endings import endings
from deliberate.window.chart.frame import Frame
from deliberate.window.chart.items import RoundAxis, StillItem, StripAxis
from deliberate.window.chart.picture import Content, paint_chart
from deliberate.window.chart.strips import paint_ballot, paint_spread
from deliberate.window.session import Session
from deliberate.window.theme import Look, Theme

AXIS_WIDTH = 46  # at least
SPREAD_HEIGHT = 34
BALLOT_HEIGHT = 40
LEAST_CURVES = 110  # pixels: in a low window the strips give way to the curves, the spread's first
NEAR = 14.0  # pixels within which the pointer means a curve
LARGEST_PICTURE = 16_000_000  # pixels


class BeliefChart(pg.GraphicsLayoutWidget):
    """Three plots on one ruler of rounds: beliefs, spread, ballot. `zoomed` says whether less than all is shown."""

    zoomed = Signal(bool)

    def __init__(self, session: Session, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self._session, self._look = session, look
        self._content: Content | None = None
        self._range: tuple[float, ...] = ()
        self._ballot_wanted = True
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setFrameShape(self.Shape.NoFrame)
        self.setAccessibleName("Chart of beliefs by round")
        self.ci.layout.setContentsMargins(0, 2, 8, 0)
        self.ci.layout.setVerticalSpacing(4)

        self._curves = StillItem(self._paint_curves, look)
        self._spread = StillItem(self._paint_spread, look)
        self._ballot = StillItem(self._paint_ballot, look)
        self.beliefs = self._plot(0, self._curves)
        self.beliefs.showAxis("bottom")
        self.spread = self._plot(1, self._spread, "spread")
        self.spread.setFixedHeight(SPREAD_HEIGHT)
        self.ballot = self._plot(2, self._ballot, "ballot")
        self.ballot.setFixedHeight(BALLOT_HEIGHT)
        self.cursors = [self._cursor(plot) for plot in (self.beliefs, self.spread, self.ballot)]
        self.hint = pg.TextItem(anchor=(0, 1))
        self.hint.setZValue(20)
        self.hint.hide()
        self.beliefs.addItem(self.hint, ignoreBounds=True)
        self.hinted = ""

        self.sigDeviceRangeChanged.connect(self._share_height)
        self.scene().sigMouseClicked.connect(self._click)
        self.beliefs.getViewBox().sigRangeChanged.connect(self._tell_zoom)
        for signal in (
            session.rehearsal_changed,
            session.scenario_changed,
            session.selection_changed,
            session.lit_changed,
            session.doubting.changed,
        ):
            signal.connect(self.refresh)
        session.player.moved.connect(self._follow)
        session.codes_changed.connect(self._hide_hint)
        look.changed.connect(self._dress)
        self._dress()

    # Building

    def _plot(self, row: int, item: StillItem, words: str = "") -> pg.PlotItem:
        axes = {"bottom": RoundAxis("bottom")}
        if words:
            axes["left"] = StripAxis(words)
        plot = self.addPlot(row=row, col=0, axisItems=axes)
        plot.setMenuEnabled(False)
        entries = [action.menu() for action in plot.ctrlMenu.actions()]
        for menu in (plot.ctrlMenu, *filter(None, entries)):
            menu.setParent(self, menu.windowFlags())  # never shown; ours, so that they go when the chart goes
        plot.hideButtons()
        plot.hideAxis("bottom")
        plot.getAxis("left").setStyle(tickLength=0 if words else -4)
        plot.getAxis("bottom").setStyle(tickLength=-4)
        box = plot.getViewBox()
        box.setDefaultPadding(0)
        box.setBorder(None)
        if words:
            plot.setXLink(self.beliefs)
            box.setMouseEnabled(x=False, y=False)
            box.setYRange(0, 1, padding=0)
        plot.addItem(item, ignoreBounds=True)
        return plot

    def _cursor(self, plot: pg.PlotItem) -> pg.InfiniteLine:
        cursor = pg.InfiniteLine(0, angle=90, movable=plot is self.beliefs)
        cursor.setZValue(10)
        cursor.sigDragged.connect(self._scrub)
        cursor.sigPositionChangeFinished.connect(self._settle)
        plot.addItem(cursor, ignoreBounds=True)
        return cursor

    def _dress(self) -> None:
        theme = self._look.theme
        self.setBackground(theme.panel)
        for plot in (self.beliefs, self.spread, self.ballot):
            for side in ("left", "bottom"):
                plot.getAxis(side).setPen(theme.line)
                plot.getAxis(side).setTextPen(theme.muted)
                plot.getAxis(side).setTickFont(self.font())
            words = self.fontMetrics().horizontalAdvance("spread") + 6
            plot.getAxis("left").setWidth(max(AXIS_WIDTH, words))
            plot.getAxis("bottom").setHeight(self.fontMetrics().height() + 8)
        for cursor in self.cursors:
            cursor.setPen(pg.mkPen(theme.ink, width=1.5))
            cursor.setHoverPen(pg.mkPen(theme.accent, width=2.5))
        self.hint.setColor(QColor(theme.ink))
        self.hint.fill = pg.mkBrush(theme.raised)
        self.hint.border = pg.mkPen(theme.line)
        self.refresh()

    # Content

    def refresh(self) -> None:
        """Read rehearsal, question, selection and what is lit again."""
        session, rehearsal = self._session, self._session.rehearsal
        if rehearsal is None:
            self._content = None
        else:
            variant, question = session.variant, session.question
            place = {one: index for index, one in enumerate(rehearsal.people)}
            present = np.array([person.present for person in variant.people], dtype=bool)
            lit = session.lit.people if session.lit is not None else ()
            named = shown_names(variant)
            self._content = Content(
                rehearsal=rehearsal,
                question=question,
                names=tuple(named[one] for one in rehearsal.people),
                present=present,
                stage_ends=tuple(np.cumsum([stage.rounds for stage in variant.plan.stages]).tolist()),
                endings=endings(rehearsal, question, present),
                selected=frozenset(place[one] for one in session.selection.people if one in place),
                lit=frozenset(place[one] for one in lit if one in place),
                doubt=self._doubt(),
            )
            self._keep_range(len(rehearsal.rounds) - 1, question.low, question.high)
            self.setAccessibleDescription(self._spoken())
        self._ballot_wanted = rehearsal is not None and rehearsal.ballot is not None
        self._share_height()
        for item in (self._curves, self._spread, self._ballot):
            item.forget()
        self._follow(session.player.position)

    def _doubt(self) -> Doubt | None:
        """What was drawn of the rehearsal on the chart."""
        doubt, rehearsal = self._session.doubting.doubt, self._session.rehearsal
        if doubt is None or rehearsal is None or doubt.beliefs.shape[1:] != rehearsal.rounds.shape:
            return None
        return doubt

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        if self.hasFocus():
            with QPainter(self.viewport()) as painter:
                painter.setPen(QColor(self._look.theme.accent))
                painter.drawRect(self.viewport().rect().adjusted(0, 0, -1, -1))

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self.viewport().update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.viewport().update()

    def _share_height(self) -> None:
        """Give the strips their rows, or leave the room to the curves."""
        left = self.height() - LEAST_CURVES
        with_ballot = self._ballot_wanted and left >= BALLOT_HEIGHT
        with_spread = left >= SPREAD_HEIGHT + (BALLOT_HEIGHT if with_ballot else 0)
        for plot, shown, height in (
            (self.spread, with_spread, SPREAD_HEIGHT),
            (self.ballot, with_ballot, BALLOT_HEIGHT),
        ):
            if shown != plot.isVisible():
                plot.setFixedHeight(height if shown else 0)
                plot.setVisible(shown)

    def _spoken(self) -> str:
        content = self._content
        if content is None:
            return ""
        first, last = content.rehearsal.spread[0], content.rehearsal.spread[-1]
        question = content.question
        parts = [f"spread {number(first, question)} at the start, {number(last, question)} at the plan's end"]
        parts += [words for _, words in content.endings.lines]
        parts += [content.endings.warning] if content.endings.warning else []
        return "; ".join(parts)

    def _keep_range(self, last: int, low: float, high: float) -> None:
        """Show all again when rounds or scale are others than before; keep a zoom otherwise."""
        room = (high - low) * 0.03
        whole = (-0.02 * max(last, 1) - 0.15, max(last, 1) * 1.02 + 0.15, low - room, high + room)
        if whole != self._range:
            self._range = whole
            self.beliefs.getViewBox().setLimits(xMin=whole[0], xMax=whole[1], yMin=whole[2], yMax=whole[3])
            for plot in (self.spread, self.ballot):
                plot.getViewBox().setYRange(0, 1, padding=0)
                self.show_all()

    def show_all(self) -> None:
        """All rounds and the whole scale."""
        left, right, low, high = self._range
        self.beliefs.getViewBox().setRange(xRange=(left, right), yRange=(low, high), padding=0)

    def picture(self, scale: float) -> QImage:
        """The chart as a picture, `scale` times its size on screen, within a limit of pixels."""
        size = self.size()
        most = (LARGEST_PICTURE / max(size.width() * size.height(), 1)) ** 0.5
        factor = min(scale, most)
        image = QImage(size * factor, QImage.Format.Format_RGB32)
        image.fill(QColor(self._look.theme.panel))
        with QPainter(image) as painter:
            self.render(painter, QRectF(image.rect()), self.viewport().rect())
        return image

    def _paint_curves(self, painter: QPainter, frame: Frame, theme: Theme) -> None:
        if self._content is not None:
            paint_chart(painter, frame, self._content, theme, self.font())

    def _paint_spread(self, painter: QPainter, frame: Frame, theme: Theme) -> None:
        if self._content is not None:
            spread, doubt = self._content.rehearsal.spread, self._content.doubt
            widest = float(spread.max(initial=0.0))
            if doubt is not None:
                widest = max(widest, float(doubt.spread.max(initial=0.0)))
            paint_spread(painter, frame, spread, widest, theme)
            if doubt is not None:
                doubt_bands.paint_spread_whiskers(painter, frame, doubt, widest, theme)

    def _paint_ballot(self, painter: QPainter, frame: Frame, theme: Theme) -> None:
        if self._content is None or self._content.rehearsal.ballot is None:
            return
        doubt = self._content.doubt
        if doubt is not None and doubt.vote is not None:
            doubt_bands.paint_odds(painter, frame, doubt.vote.passes, theme)
        else:
            paint_ballot(painter, frame, self._content.rehearsal.ballot, theme)

    # The round

    def _follow(self, position: float) -> None:
        for cursor in self.cursors:
            blocked = cursor.blockSignals(True)
            cursor.setValue(position)
            cursor.blockSignals(blocked)

    def _scrub(self, cursor: pg.InfiniteLine) -> None:
        self._session.player.pause()
        self._session.player.seek(cursor.value())

    def _settle(self, cursor: pg.InfiniteLine) -> None:
        self._session.player.seek(round(cursor.value()))

    # Pointer

    def near(self, at: QPointF) -> tuple[int, int] | None:
        """(person, round) of the curve point nearest to the scene position `at`, or None when none is near."""
        content, box = self._content, self.beliefs.getViewBox()
        if content is None or not box.sceneBoundingRect().contains(at) or not content.names:
            return None
        place = box.mapSceneToView(at)
        round_ = int(min(max(round(place.x()), 0), len(content.rehearsal.rounds) - 1))
        size = box.viewPixelSize()
        away_x = abs(place.x() - round_) / size[0]
        away = np.abs(content.rehearsal.rounds[round_] - place.y()) / size[1]
        person = int(np.argmin(away))
        per_round = 1 / size[0]
        return (person, round_) if away[person] <= NEAR and away_x <= max(NEAR, per_round / 2) else None

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        super().mouseMoveEvent(event)
        # Not the scene's own signal: it drops the last of moves that come close together.
        self._hover(self.mapToScene(event.position().toPoint()))

    def _hover(self, at: QPointF) -> None:
        found = self.near(at)
        if found is None or self._content is None:
            self._hide_hint()
            return
        person, round_ = found
        content = self._content
        belief = content.rehearsal.rounds[round_][person]
        text = f"{content.names[person]}, round {round_}: {number(belief, content.question)}"
        if text != self.hinted:
            self.hinted = text
            self.hint.setText(text)
        right = round_ > sum(self.beliefs.getViewBox().viewRange()[0]) / 2
        top = belief > sum(self.beliefs.getViewBox().viewRange()[1]) / 2
        self.hint.setAnchor((1 if right else 0, 0 if top else 1))
        self.hint.setPos(round_, belief)
        self.hint.show()

    def _hide_hint(self) -> None:
        if self.hinted:
            self.hinted = ""
            self.hint.setText("")
            self.hint.hide()

    def leaveEvent(self, event: QEvent) -> None:
        self._hide_hint()
        super().leaveEvent(event)

    def _click(self, event: object) -> None:
        if event.button() != Qt.MouseButton.LeftButton:
            return
        if event.double():
            self.show_all()
            return
        found = self.near(event.scenePos())
        people = self._session.selection.people
        if found is None:
            return
        one = self._session.rehearsal.people[found[0]]
        adding = event.modifiers() & (Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier)
        self._session.select(people ^ {one} if adding else {one})

    def keyPressEvent(self, event: QKeyEvent) -> None:
        moves = {Qt.Key.Key_Right: 1, Qt.Key.Key_Left: -1}
        if event.key() in moves:
            self._session.player.step(moves[event.key()])
        elif event.key() == Qt.Key.Key_0:
            self.show_all()
        else:
            super().keyPressEvent(event)

    def _tell_zoom(self) -> None:
        (left, right), (low, high) = self.beliefs.getViewBox().viewRange()
        if self._range:
            whole = self._range
            near = 1e-6 * (whole[1] - whole[0]), 1e-6 * (whole[3] - whole[2])
            shown = (
                left - whole[0] < near[0],
                whole[1] - right < near[0],
                low - whole[2] < near[1],
                whole[3] - high < near[1],
            )
            self.zoomed.emit(not all(shown))
