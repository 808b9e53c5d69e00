"""Playback buttons, the present round in words, the ruler, and the row that edits a stage."""

from __future__ import annotations

from PySide6.QtCore import QPointF, Qt, Signal
from PySide6.QtGui import QFontMetricsF
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QMenu, QPushButton, QVBoxLayout, QWidget

from deliberate.window.player import SPEEDS
from deliberate.window.roundbar.ruler import Ruler
from deliberate.window.roundbar.stage_strip import StageStrip
from deliberate.window.roundbar.transport import TransportButton
from deliberate.window.session import Session
from deliberate.window.text import elided, plain_label, strong
from deliberate.window.theme import Look


class RoundBar(QWidget):
    """Plays the talk and edits the plan. `choose_on_canvas` asks to choose the people of a stage on the canvas."""

    choose_on_canvas = Signal(int)

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session, self._player = session, session.player
        self.play = TransportButton("play", "Play or pause (Space on the picture)", look, self, size=44)
        self.play.setCheckable(True)
        self.start = TransportButton("start", "To the start", look, self)
        self.back = TransportButton("back", "One step back", look, self)
        self.on = TransportButton("on", "One step on", look, self)
        self.loop = TransportButton("loop", "Begin again at the end", look, self)
        self.loop.setCheckable(True)
        self.now = plain_label(self)
        strong(self.now)
        font = self.now.font()
        font.setPointSizeF(font.pointSizeF() * 1.2)
        self.now.setFont(font)
        self.now.setWordWrap(False)
        self.stage = plain_label(self, muted=True)
        self.stage.setWordWrap(False)
        width = round(QFontMetricsF(font).horizontalAdvance("Round 00 of 000"))
        for label in (self.now, self.stage):
            label.setFixedWidth(width)
        self.ruler = Ruler(session, look, self)
        self.strip = StageStrip(session, self)
        self.speed = QComboBox(self)
        self.speed.setAccessibleName("Seconds a round takes")
        self.speed.setToolTip("How long a round takes")
        for speed in SPEEDS:
            self.speed.addItem(f"{1 / speed:g} s a round", speed)
        self.plan = QPushButton("Edit the plan", self)
        self.plan.setCheckable(True)
        self.plan.setToolTip("Stages, rounds and who hears whom; a click on a stage does the same")
        self._lay_out()
        self._connect()
        self.refresh()

    def _lay_out(self) -> None:
        words = QVBoxLayout()
        words.setSpacing(0)
        words.addWidget(self.now)
        words.addWidget(self.stage)
        right = QVBoxLayout()
        right.setSpacing(4)
        right.addWidget(self.speed)
        right.addWidget(self.plan)
        row = QHBoxLayout()
        row.setContentsMargins(16, 6, 12, 6)
        row.setSpacing(6)
        for button in (self.play, self.start, self.back, self.on, self.loop):
            row.addWidget(button, 0, Qt.AlignmentFlag.AlignVCenter)
        row.addSpacing(6)
        row.addLayout(words)
        row.addWidget(self.ruler, 1)
        row.addLayout(right)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.strip)
        column.addLayout(row)

    def _connect(self) -> None:
        player = self._player
        self.play.clicked.connect(player.toggle)
        self.start.clicked.connect(self._to_start)
        self.back.clicked.connect(self._back)
        self.on.clicked.connect(self._on)
        self.loop.toggled.connect(player.set_loop)
        self.speed.activated.connect(self._change_speed)
        self.plan.clicked.connect(self._toggle_plan)
        self.ruler.stage_chosen.connect(self._show_stage)
        self.ruler.menu_wanted.connect(self._menu)
        self.strip.closed.connect(self._close_strip)
        self.strip.moved_to.connect(self.ruler.choose)
        self.strip.choose_on_canvas.connect(self.choose_on_canvas)
        player.moved.connect(self.refresh)
        player.playing_changed.connect(self.play.setChecked)
        player.settings_changed.connect(self.refresh)
        self._session.scenario_changed.connect(self.refresh)

    def refresh(self) -> None:
        """Read round, stage and playback again."""
        player = self._player
        now = f"Round {player.round} of {player.last}"
        if now != self.now.text():
            self.now.setText(now)
        stage = self._session.variant.plan.stages[self._session.stage_at(player.position)]
        text = elided(stage.name, self.stage.font(), self.stage.width())
        if text != self.stage.text():
            self.stage.setText(text)
        self.loop.setChecked(player.loop)
        place = self.speed.findData(player.speed)
        if place != self.speed.currentIndex():
            self.speed.setCurrentIndex(place)

    def _to_start(self) -> None:
        self._player.pause()
        self._player.seek(0)

    def _back(self) -> None:
        self._player.step(-1)

    def _on(self) -> None:
        self._player.step(1)

    def _change_speed(self, place: int) -> None:
        self._player.set_speed(self.speed.itemData(place))

    def _toggle_plan(self, wanted: bool) -> None:
        self.ruler.choose(self._session.stage_at(self._player.position) if wanted else -1)

    def _show_stage(self, index: int) -> None:
        self.plan.setChecked(index >= 0)
        self.strip.show_stage(index)

    def _close_strip(self) -> None:
        self.ruler.choose(-1)
        self.ruler.setFocus()

    def _menu(self, index: int, at: QPointF) -> None:
        menu = QMenu(self)
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        if index >= 0:
            self.ruler.choose(index)
            menu.addAction("Rename the stage", self.strip.name.setFocus)
            menu.addAction("Remove the stage", self.strip.remove.click).setEnabled(self.strip.remove.isEnabled())
        menu.addAction("Add a stage", self.strip.add_behind)
        menu.popup(at.toPoint())
