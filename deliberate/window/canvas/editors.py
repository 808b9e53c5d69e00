"""Typing on the picture: a name below a person, a belief or points where they belong."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, QRectF, Qt, Signal
from PySide6.QtGui import QFocusEvent, QFontMetricsF, QKeyEvent
from PySide6.QtWidgets import QLineEdit, QWidget

from deliberate.rehearsal.words import names, number
from deliberate.scenario.edits import arrows as arrow_edits
from deliberate.scenario.edits import people as people_edits
from deliberate.scenario.edits import points as point_edits
from deliberate.scenario.values import Scenario

if TYPE_CHECKING:
    from deliberate.window.canvas.canvas import Canvas
    from deliberate.window.canvas.picture import Floats

Pair = tuple[str, str]
LONGEST_NAME = 200


class InlineEditor(QLineEdit):
    """One line on the picture. Return accepts, Escape leaves everything as it was, going elsewhere accepts."""

    accepted = Signal()
    cancelled = Signal()

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.hide()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.accepted.emit()
        elif event.key() == Qt.Key.Key_Escape:
            self.cancelled.emit()
        elif event.key() in (Qt.Key.Key_Tab, Qt.Key.Key_Backtab):
            self.accepted.emit()
        else:
            super().keyPressEvent(event)

    def focusNextPrevChild(self, forward: bool) -> bool:
        del forward
        self.accepted.emit()
        return True

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        if event.reason() not in (Qt.FocusReason.PopupFocusReason, Qt.FocusReason.ActiveWindowFocusReason):
            self.accepted.emit()


class Editors:
    """The inline editor of the canvas and what is being edited with it."""

    def __init__(self, canvas: Canvas) -> None:
        self._canvas = canvas
        self.line = InlineEditor(canvas)
        self.line.accepted.connect(canvas.accept_typing)
        self.line.cancelled.connect(canvas.cancel_typing)
        self._take: Callable[[str], bool] | None = None
        self._where: Callable[[], QPointF] | None = None
        self._hint = ""
        self._wide = 0.0
        self.place: Floats | None = None  # of a person who is being added
        self.open_for_name = False

    @property
    def open(self) -> bool:
        """Whether something is being typed."""
        return self._take is not None

    def hint(self) -> str:
        """What is being typed, for the foot of the picture."""
        return self._hint if self.open else ""

    def name_new(self, place: Floats, listener: str | None = None) -> None:
        """Ask for the name of a new person at a scene place; with `listener` she is listened to by that one."""
        self.place = place
        self._begin_name("", "Name of the new person", lambda name: self._add(name, place, listener), place)

    def rename(self, person: str) -> None:
        """Edit a name in place."""
        scene = self._canvas.picture.scene
        index = scene.index[person]
        before = scene.names[index]

        def take(name: str) -> bool:
            if name == before or not name.strip():
                return True
            return self._canvas.session.edit(
                f"Rename {before}", lambda s: people_edits.rename_person(s, person, name)
            )

        self._begin_name(before, f"Name of {before}", take, scene.places[index])

    def type_belief(self, people: list[str], first: str) -> None:
        """Set the starting belief of people, beginning with the first digit."""
        session, scene = self._canvas.session, self._canvas.picture.scene
        question, variant = session.question, session.variant
        who = names(people, variant)

        def take(text: str) -> bool:
            value = parse_number(text)
            if value is None:
                session.refused.emit(f"“{text}” is not a number")
                return False
            return session.edit(
                f"Starting belief of {who}",
                lambda s: people_edits.set_belief(s, people, question.id, value, variant=variant.name),
            )

        low, high = number(question.low, question), number(question.high, question)
        hint = f"Starting belief of {who}, {low} to {high}. Return sets it, Escape leaves it."
        anchor = scene.places[scene.index[people[0]]]
        self._begin(first, hint, take, anchor, LONGEST_NUMBER, below=False)

    def type_points(self, pairs: list[Pair], first: str) -> None:
        """Set the points of 100 of arrows, beginning with the first digit."""
        session, scene = self._canvas.session, self._canvas.picture.scene
        variant = session.variant.name
        what = scene.sentence(scene.arrow_index[pairs[0]]).rsplit(":", 1)[0] if len(pairs) == 1 else "Arrows"

        def change(scenario: Scenario, value: float) -> Scenario:
            for listener, source in pairs:
                scenario = point_edits.set_points(scenario, listener, source, value, variant=variant)
            return scenario

        def take(text: str) -> bool:
            value = parse_number(text)
            if value is None:
                session.refused.emit(f"“{text}” is not a number")
                return False
            return session.edit(f"Points: {what}", lambda s: change(s, value))

        curve = self._canvas.picture.curves(np.array([scene.arrow_index[pairs[0]]]))
        anchor = self._canvas.view().to_scene(curve.at(np.array([0.5]))[0, 0])
        self._begin(
            first,
            f"{what}: points of 100. Return sets them, Escape leaves them.",
            take,
            anchor,
            LONGEST_NUMBER,
            below=False,
        )

    def accept(self) -> None:
        """Take what was typed; where it does not fit the editor stays open."""
        take, self._take = self._take, None
        if take is None:
            return
        if take(self.line.text()):
            self._close()
        else:
            self._take = take
            self.line.selectAll()
            if not self.line.hasFocus():  # she has gone elsewhere: do not pull her back
                self._take = None
                self._close()

    def cancel(self) -> None:
        """Leave everything as it was."""
        if self.open:
            self._take = None
            self._close()

    def follow(self) -> None:
        """Keep the editor where it belongs when the picture moves."""
        if not self.open or self._where is None:
            return
        at = self._where()
        metrics = QFontMetricsF(self.line.font())
        high = max(metrics.height() + 12, 26.0)
        wide = min(max(self._wide, metrics.horizontalAdvance(self.line.text()) + 36), self._canvas.width() - 8.0)
        area = QRectF(at.x() - wide / 2, at.y() - high / 2, wide, high)
        area.moveLeft(min(max(area.left(), 4.0), max(self._canvas.width() - wide - 4, 4.0)))
        area.moveTop(min(max(area.top(), 4.0), max(self._canvas.height() - high - 4, 4.0)))
        self.line.setGeometry(area.toRect())

    def _add(self, name: str, place: Floats, listener: str | None) -> bool:
        if not name.strip():
            return True
        session = self._canvas.session
        variant = session.variant.name
        try_id: list[str] = []

        def change(scenario: Scenario) -> Scenario:
            person = people_edits.fresh_person_id(scenario, name)
            try_id.append(person)
            spot = (float(place[0]), float(place[1]))
            added = people_edits.add_person(scenario, name, variant=variant, person_id=person, place=spot)
            return arrow_edits.add_arrow(added, listener, person, variant=variant) if listener else added

        done = session.edit(f"Add {name.strip()}", change)
        if done:
            self._canvas.keys.focus_person(try_id[-1])
        return done

    def _begin_name(self, text: str, hint: str, take: Callable[[str], bool], place: Floats) -> None:
        self._begin(text, f"{hint}. Return accepts, Escape leaves it.", take, place, LONGEST_NAME, below=True)
        self.open_for_name = True
        self.line.selectAll()

    def _begin(
        self, text: str, hint: str, take: Callable[[str], bool], place: Floats, longest: int, *, below: bool
    ) -> None:
        self.accept()
        canvas = self._canvas

        def where() -> QPointF:
            x, y = canvas.view().to_screen(place)
            return QPointF(
                x, y + (canvas.picture.radius + 5 + QFontMetricsF(self.line.font()).height() / 2 if below else 0)
            )

        self._take, self._where, self._hint = take, where, hint
        self._wide = 150.0 if below else 84.0
        self.line.setMaxLength(longest)
        self.line.setText(text)
        self.line.setAccessibleName(hint)
        self.follow()
        self.line.show()
        self.line.raise_()
        self.line.setFocus(Qt.FocusReason.OtherFocusReason)
        canvas.refresh_hint()
        canvas.update()

    def _close(self) -> None:
        self.place, self.open_for_name, self._where = None, False, None
        focused = self.line.hasFocus()
        self.line.hide()
        self.line.clear()
        self.line.setAccessibleName("")
        if focused:
            self._canvas.setFocus(Qt.FocusReason.OtherFocusReason)
        self._canvas.refresh_hint()
        self._canvas.update()


LONGEST_NUMBER = 24


def parse_number(text: str) -> float | None:
    """A typed number, with a comma or a point for the decimals; None where it is none."""
    plain = text.strip().replace("\u2212", "-").replace(" ", "").replace("%", "")
    if "," in plain and "." not in plain:
        plain = plain.replace(",", ".")
    try:
        value = float(plain.replace(",", ""))
    except ValueError:
        return None
    return value if math.isfinite(value) and "_" not in plain else None
