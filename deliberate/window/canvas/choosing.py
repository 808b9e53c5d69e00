"""Choosing tables, speakers or pairs of a stage on the picture. Every change is an edit of the stage at once."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QKeyEvent, QPainter, QPen
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QWidget

from deliberate.rehearsal.words import names
from deliberate.scenario.edits import stages as stage_edits
from deliberate.scenario.values import Stage
from deliberate.window.canvas.picture import Hit
from deliberate.window.text import plain_label

if TYPE_CHECKING:
    from deliberate.window.canvas.canvas import Canvas

_TELLS = {
    "tables": "Click somebody to seat them at the next table; with people selected, type a table's number (0: none)",
    "panel": "Click the people who speak; everybody hears only them",
    "pairs": "Click two people who talk with each other; click them again to part them",
}


class Banner(QWidget):
    """What is being chosen, what to do, and a button to end it."""

    def __init__(self, canvas: Canvas) -> None:
        super().__init__(canvas)
        self.setAutoFillBackground(True)
        self.text = plain_label(self)
        self.done = QPushButton("Done", self)
        self.done.setToolTip("Return or Escape")
        row = QHBoxLayout(self)
        row.setContentsMargins(16, 6, 12, 6)
        row.addWidget(self.text, 1)
        row.addWidget(self.done)
        self.hide()

    def paintEvent(self, event: object) -> None:
        del event
        theme = self.parentWidget().look.theme
        with QPainter(self) as painter:
            painter.fillRect(self.rect(), QColor(theme.tint))
            painter.fillRect(QRectF(0, self.height() - 1, self.width(), 1), QColor(theme.accent))


class Choosing:
    """The mode of the canvas in which a stage's people are chosen; `stage` is None outside it."""

    def __init__(self, canvas: Canvas) -> None:
        self._canvas = canvas
        self.stage: int | None = None
        self._first: str | None = None  # of a pair
        self.banner = Banner(canvas)
        self.banner.done.clicked.connect(canvas.end_choosing)

    @property
    def takes_clicks(self) -> bool:
        """Whether a click chooses instead of selecting."""
        return self.stage is not None

    def begin(self, stage: int) -> None:
        """Choose for a stage of the shown variant."""
        canvas = self._canvas
        plan = canvas.session.variant.plan.stages
        if not 0 <= stage < len(plan) or plan[stage].setting not in _TELLS:
            canvas.session.refused.emit("There is nothing to choose here: pick tables, panel or pairs first")
            return
        self.stage, self._first = stage, None
        canvas.session.player.pause()
        canvas.session.select()
        self._show()
        canvas.setFocus(Qt.FocusReason.OtherFocusReason)
        canvas.choosing_changed.emit(True)

    def end(self) -> None:
        """Back to drawing."""
        if self.stage is None:
            return
        self.stage = self._first = None
        self.banner.hide()
        self._canvas.follow.take_stage()
        self._canvas.choosing_changed.emit(False)
        self._canvas.setFocus(Qt.FocusReason.OtherFocusReason)

    def check(self) -> None:
        """The meeting has changed: the stage may be another one, or gone."""
        if self.stage is None:
            return
        plan = self._canvas.session.variant.plan.stages
        if self.stage >= len(plan) or plan[self.stage].setting not in _TELLS:
            self.end()
        else:
            self._show()

    def click(self, hit: Hit) -> None:
        """A click on the picture."""
        if hit.kind in ("person", "ring"):
            self._choose(self._canvas.picture.scene.ids[hit.index])

    def key(self, event: QKeyEvent) -> bool:
        """Return and Escape end it; Space and Return on the focus choose; digits seat the selected people."""
        if self.stage is None:
            return False
        canvas, focus = self._canvas, self._canvas.keys.focused()
        key, setting = event.key(), self._stage().setting
        if key == Qt.Key.Key_Escape or (key in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and not self._on_person(focus)):
            self.end()
        elif key in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space) and self._on_person(focus):
            assert focus is not None
            self._choose(canvas.picture.scene.ids[focus.index])
        elif setting == "tables" and event.text().isdecimal() and canvas.session.selection.people:
            self._seat(sorted(canvas.session.selection.people), int(event.text()) - 1)
        else:
            # What would change the sketch behind the choice waits until it is done.
            return key not in (
                Qt.Key.Key_Left, Qt.Key.Key_Right, Qt.Key.Key_Up, Qt.Key.Key_Down, Qt.Key.Key_Plus, Qt.Key.Key_Minus,
            ) and not event.modifiers() & Qt.KeyboardModifier.ControlModifier  # fmt: skip
        return True

    def lay_out(self) -> None:
        """Keep the banner across the top."""
        wide = self._canvas.width()
        self.banner.setGeometry(0, 0, wide, max(self.banner.heightForWidth(wide), self.banner.sizeHint().height()))

    def paint(self, painter: QPainter) -> None:
        """Marks that say who is chosen: table numbers, speakers, lines between two."""
        if self.stage is None:
            return
        picture, stage = self._canvas.picture, self._stage()
        index, points = picture.scene.index, picture.points
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        chips: dict[int, str] = {}
        if stage.setting == "tables":
            chips = {index[one]: str(number) for number, table in enumerate(stage.tables, 1) for one in table}
            chips = {person: chips.get(person, "–") for person in range(len(points))}
        elif stage.setting == "panel":
            chips = {index[one]: "speaks" for one in stage.speakers}
        else:
            self._paint_pairs(painter, stage, points)
            if self._first in index:
                chips = {index[self._first]: "with …"}
        for person, text in chips.items():
            self._chip(painter, points[person], text)

    def _paint_pairs(self, painter: QPainter, stage: Stage, points: np.ndarray) -> None:
        picture, theme = self._canvas.picture, self._canvas.look.theme
        pen = QPen(QColor(theme.accent), 3)
        pen.setDashPattern([2.0, 2.0])
        painter.setPen(pen)
        for one, other in stage.pairs:
            here, there = points[picture.scene.index[one]], points[picture.scene.index[other]]
            along = (there - here) / max(float(np.hypot(*(there - here))), 1e-9) * (picture.radius + 4)
            painter.drawLine(QPointF(*(here + along)), QPointF(*(there - along)))

    def _chip(self, painter: QPainter, point: np.ndarray, text: str) -> None:
        theme, radius = self._canvas.look.theme, self._canvas.picture.radius
        font = painter.font()
        font.setBold(True)
        painter.setFont(font)
        metrics = QFontMetricsF(font)
        high = metrics.height() + 2
        area = QRectF(0, 0, max(metrics.horizontalAdvance(text) + 12, high), high)
        area.moveCenter(QPointF(point[0] - radius * 0.74, point[1] - radius * 0.74))
        painter.setPen(QPen(QColor(theme.canvas), 2))
        painter.setBrush(QColor(theme.accent))
        painter.drawRoundedRect(area, high / 2, high / 2)
        painter.setPen(QColor(theme.on_accent))
        painter.drawText(area, Qt.AlignmentFlag.AlignCenter, text)

    def _show(self) -> None:
        stage = self._stage()
        self.banner.text.setText(f"{stage.name}. {_TELLS[stage.setting]}.")
        self.lay_out()
        self.banner.show()
        self.banner.raise_()
        self._canvas.follow.take_stage()

    def _stage(self) -> Stage:
        assert self.stage is not None
        return self._canvas.session.variant.plan.stages[self.stage]

    def _on_person(self, focus: Hit | None) -> bool:
        return focus is not None and focus.kind == "person" and self._canvas.picture.emphasis.focus is not None

    def _choose(self, person: str) -> None:
        stage, variant = self._stage(), self._canvas.session.variant
        place, who = self.stage, names([person], variant)
        assert place is not None
        if stage.setting == "tables":
            at = next((number for number, table in enumerate(stage.tables) if person in table), len(stage.tables))
            alone = at < len(stage.tables) and len(stage.tables[at]) == 1
            following = at + 1
            if following > len(stage.tables) or (following == len(stage.tables) and alone):
                following = -1 if at < len(stage.tables) else 0
            self._seat([person], following)
        elif stage.setting == "panel":
            speakers = stage.speakers
            speaks = person in speakers
            after = tuple(one for one in speakers if one != person) if speaks else (*speakers, person)
            self._edit(
                f"{who} does not speak" if speaks else f"{who} speaks",
                lambda s: stage_edits.set_speakers(s, place, after, variant=variant.name),
            )
        else:
            self._pair(person)

    def _seat(self, people: list[str], table: int) -> None:
        stage, variant, place = self._stage(), self._canvas.session.variant, self.stage
        assert place is not None
        at = None if table < 0 else min(table, len(stage.tables))
        words = "no table" if at is None else f"table {at + 1}"
        self._edit(
            f"{names(people, variant)} at {words}",
            lambda s: stage_edits.seat_people(s, place, people, at, variant=variant.name),
        )

    def _pair(self, person: str) -> None:
        stage, variant, place = self._stage(), self._canvas.session.variant, self.stage
        assert place is not None
        first, self._first = self._first, None
        if first is None:
            self._first = person
        elif first != person:
            couple = {first, person}
            kept = tuple(pair for pair in stage.pairs if set(pair) != couple)
            joined = len(kept) == len(stage.pairs)
            after = (*kept, (first, person)) if joined else kept
            self._edit(
                f"{names([first, person], variant)} {'talk' if joined else 'part'}",
                lambda s: stage_edits.set_pairs(s, place, after, variant=variant.name),
            )
        self._canvas.update()

    def _edit(self, step: str, change: object) -> None:
        self._canvas.session.edit(step, change)  # type: ignore[arg-type]
