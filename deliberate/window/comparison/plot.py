"""The chart of the comparison: one ruler of rounds, one scale, a line for each variant."""

from __future__ import annotations

import pyqtgraph as pg
from PySide6.QtCore import Qt
from PySide6.QtGui import QKeyEvent, QPainter
from PySide6.QtWidgets import QWidget

from deliberate.rehearsal.comparing import course
from deliberate.rehearsal.words import number
from deliberate.window.chart.frame import Frame
from deliberate.window.chart.items import RoundAxis, StillItem
from deliberate.window.comparison.picture import Figure, Line, paint_lines
from deliberate.window.comparison.run import Comparison
from deliberate.window.comparison.table import letter
from deliberate.window.session import Session
from deliberate.window.theme import Look, Theme

LABEL_PART = 0.3  # of the chart's width that names take


class PlanAxis(RoundAxis):
    """Ticks up to the last round of the longest plan: right of it stand the names."""

    last = 0

    def tickValues(self, low: float, high: float, size: float) -> list[tuple[float, list[float]]]:
        ticks = super().tickValues(low, high, size)
        return [(step, [at for at in values if at <= self.last]) for step, values in ticks]


class ComparisonPlot(pg.PlotWidget):
    """Highest, mean and lowest belief, or the spread, or the votes in favour, of all compared variants by round."""

    def __init__(self, session: Session, comparison: Comparison, look: Look, parent: QWidget) -> None:
        self._axis = PlanAxis("bottom")
        super().__init__(parent, axisItems={"bottom": self._axis})
        self._session, self._comparison, self._look = session, comparison, look
        self.figure: Figure = "beliefs"
        self.forward = -1
        self.lines: tuple[Line, ...] = ()
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setFrameShape(self.Shape.NoFrame)
        self.setAccessibleName("Chart of the compared variants")
        self.setMenuEnabled(False)
        plot = self.getPlotItem()
        for menu in (plot.ctrlMenu, *filter(None, [action.menu() for action in plot.ctrlMenu.actions()])):
            menu.setParent(self, menu.windowFlags())  # never shown; ours, so that they go when the chart goes
        plot.hideButtons()
        plot.getAxis("left").setStyle(tickLength=-4)
        self._axis.setStyle(tickLength=-4)
        box = plot.getViewBox()
        box.setDefaultPadding(0)
        box.setBorder(None)
        box.setMouseEnabled(x=False, y=False)
        self._item = StillItem(self._paint, look)
        plot.addItem(self._item, ignoreBounds=True)
        comparison.changed.connect(self.refresh)
        look.changed.connect(self._dress)
        self._dress()

    def show_figure(self, figure: Figure) -> None:
        """Show another figure by round."""
        self.figure = figure
        self.refresh()

    def bring_forward(self, place: int) -> None:
        """Bring the variant at `place` forward; -1 for none."""
        if place != self.forward:
            self.forward = place
            self._item.forget()

    def refresh(self) -> None:
        """Read variants and rehearsals again."""
        comparison = self._comparison
        self.lines = tuple(
            Line(place, letter(place), variant.name, course(rehearsal, variant))
            for place, variant in enumerate(comparison.variants)
            if (rehearsal := comparison.rehearsal(place)) is not None
        )
        last = max((len(line.course.mean) - 1 for line in self.lines), default=1)
        self._axis.last = last
        low, high = self._scale()
        room = (high - low) * 0.04
        self.getPlotItem().getViewBox().setRange(
            xRange=(-0.03 * last - 0.1, last / (1 - LABEL_PART)), yRange=(low - room, high + room), padding=0
        )
        self.setAccessibleDescription(self._spoken())
        self._item.forget()

    def _scale(self) -> tuple[float, float]:
        question = self._session.question
        if self.figure == "beliefs":
            return question.low, question.high
        values = [values for line in self.lines if (values := line.of(self.figure)) is not None]
        return 0.0, max((float(one.max()) for one in values), default=1.0) or 1.0

    def _spoken(self) -> str:
        question = self._session.question

        def ends(line: Line) -> str:
            values = line.of(self.figure)
            if values is None:
                return "no vote"
            first, last = (
                f"{value:g}" if self.figure == "votes" else number(float(value), question)
                for value in (values[0], values[-1])
            )
            return f"from {first} to {last}"

        return "; ".join(f"{line.letter}, {line.name}: {ends(line)}" for line in self.lines)

    def _dress(self) -> None:
        theme = self._look.theme
        self.setBackground(theme.panel)
        for side in ("left", "bottom"):
            axis = self.getPlotItem().getAxis(side)
            axis.setPen(theme.line)
            axis.setTextPen(theme.muted)
            axis.setTickFont(self.font())
        self.refresh()

    def _paint(self, painter: QPainter, frame: Frame, theme: Theme) -> None:
        paint_lines(
            painter, frame, self.lines, self.figure, self.forward, self._session.question.pass_mark,
            self._axis.last, theme, self.font(),
        )  # fmt: skip

    def keyPressEvent(self, event: QKeyEvent) -> None:
        steps = {Qt.Key.Key_Down: 1, Qt.Key.Key_Up: -1}
        places = [line.place for line in self.lines]
        if event.key() in steps and places:
            here = places.index(self.forward) if self.forward in places else -1
            self.bring_forward(places[(here + steps[event.key()]) % len(places)])
        else:
            super().keyPressEvent(event)
