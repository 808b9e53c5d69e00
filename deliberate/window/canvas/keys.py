"""The keyboard on the picture: going round people and arrows, moving, typing, and drawing an arrow."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QKeyEvent, QKeySequence

from deliberate.window.canvas.accessible import tell_focus
from deliberate.window.canvas.picture import Hit

if TYPE_CHECKING:
    from deliberate.window.canvas.canvas import Canvas

Key, Modifier = Qt.Key, Qt.KeyboardModifier
Standard = QKeySequence.StandardKey
STEP, BIG_STEP = 6.0, 36.0  # of moved people, in scene units at the usual size
PAN_PX, BIG_PAN_PX = 40.0, 200.0
_ARROWS = {Key.Key_Left: (-1, 0), Key.Key_Right: (1, 0), Key.Key_Up: (0, -1), Key.Key_Down: (0, 1)}


class Keys:
    """What has the focus inside the canvas, and what each key does."""

    def __init__(self, canvas: Canvas) -> None:
        self._canvas = canvas
        self._focus: Hit | None = None
        self._around: int | None = None  # the person whose arrows are gone through
        self.shows_focus = False
        self.listener: int | None = None  # who listens in an arrow that is being drawn by keyboard

    # Focus

    def focus_on(self, hit: Hit | None, *, shown: bool = True) -> None:
        """Put the focus on a person or an arrow; `shown` only where keys are used."""
        self._focus = hit
        self._canvas.picture.emphasis.focus = hit if shown else None
        if hit is None:
            self._around = None
        elif hit.kind == "person":
            self._around = hit.index
        elif self._around is None or self._around not in self._ends(hit.index):
            self._around = self._ends(hit.index)[0]
        if shown:
            tell_focus(self._canvas)

    def focus_person(self, person: str) -> None:
        """Select a person and continue from her."""
        index = self._canvas.picture.scene.index.get(person)
        if index is not None:
            self._canvas.session.select([person])
            self.focus_on(Hit("person", index), shown=False)

    def focused(self) -> Hit | None:
        """The person or arrow that keys act on."""
        return self._focus

    def check_focus(self) -> None:
        """People or arrows may have gone."""
        scene, marks = self._canvas.picture.scene, self._canvas.picture.emphasis
        people, arrows = len(scene.ids), len(scene.share)
        if self._focus is not None and self._focus.index >= (arrows if self._focus.kind == "arrow" else people):
            self._focus = marks.focus = None
        if self._around is not None and self._around >= people:
            self._around = None
        if self.listener is not None and self.listener >= people:
            self.listener = None

    def tab(self, forward: bool) -> bool:
        """The next or previous person; False at either end, where the focus leaves the canvas.

        Back from an arrow is the person it was reached from.
        """
        canvas = self._canvas
        people = len(canvas.picture.scene.ids)
        if canvas.editors.open or people == 0:
            return False
        before = (-1 if forward else people) if self._around is None else self._around
        on_arrow = self._focus is not None and self._focus.kind == "arrow"
        place = before if on_arrow and not forward else before + (1 if forward else -1)
        if self.listener is not None:
            place %= people
        if not 0 <= place < people:
            self._focus = self._around = canvas.picture.emphasis.focus = None
            return False
        self._go_to(Hit("person", place))
        return True

    def next_arrow(self, forward: bool) -> None:
        """Through the arrows of the person in focus, the strongest of those she listens to first, then of those who
        listen to her; then the person again. So a crowd's arrows are a few keys away instead of thousands."""
        person = self._around
        if person is None or self.listener is not None:
            return
        scene = self._canvas.picture.scene
        stops = [Hit("person", person)]
        for ends in (scene.listener, scene.source):
            hers = np.flatnonzero(ends == person)
            stops += [Hit("arrow", int(arrow)) for arrow in hers[np.argsort(-scene.strength[hers], kind="stable")]]
        here = stops.index(self._focus) if self._focus in stops else 0
        self._go_to(stops[(here + (1 if forward else -1)) % len(stops)])

    def _go_to(self, hit: Hit) -> None:
        canvas, scene = self._canvas, self._canvas.picture.scene
        self.shows_focus = True
        if self.listener is None:
            if hit.kind == "person":
                canvas.session.select([scene.ids[hit.index]])
            else:
                canvas.session.select(arrows=[scene.pair(hit.index)])
        self.focus_on(hit)
        canvas.refresh_hint()
        canvas.update()

    def _ends(self, arrow: int) -> tuple[int, int]:
        scene = self._canvas.picture.scene
        return int(scene.listener[arrow]), int(scene.source[arrow])

    def focus_in(self, reason: Qt.FocusReason) -> None:
        """The canvas gets the focus: by Tab it begins at the first or the last."""
        self.shows_focus = reason in (Qt.FocusReason.TabFocusReason, Qt.FocusReason.BacktabFocusReason)
        if self.shows_focus:
            self._focus = self._around = None
            self.tab(reason == Qt.FocusReason.TabFocusReason)
        self._canvas.update()

    def focus_out(self) -> None:
        """The canvas loses the focus."""
        self.shows_focus = False
        self._canvas.picture.emphasis.focus = None
        self._canvas.refresh_hint()
        self._canvas.update()

    def hint(self) -> str:
        """What the keys would do while an arrow is drawn."""
        if self.listener is None:
            return ""
        scene, focus = self._canvas.picture.scene, self.focused()
        here = scene.told_apart[self.listener]
        if focus is None or focus.kind != "person" or focus.index == self.listener:
            return f"{here} listens to …: Tab to somebody, then Return; Escape leaves it"
        return f"{here} listens to {scene.told_apart[focus.index]}: Return draws the arrow, Escape leaves it"

    def menu_place(self) -> QPoint:
        """Where the context menu opens when asked for by key."""
        canvas, picture, focus = self._canvas, self._canvas.picture, self.focused()
        if focus is None or focus.kind != "person":
            return canvas.mapToGlobal(canvas.rect().center())
        x, y = picture.points[focus.index]
        return canvas.mapToGlobal(QPoint(round(x), round(y)))

    # Keys

    def press(self, event: QKeyEvent) -> bool:
        """Do what a key says; False where it says nothing here."""
        if self._canvas.choosing.key(event) or self._arrow_key(event) or self._drawing(event):
            return True
        return self._standard(event) or self._typing(event) or self._letter(event)

    def begin_arrow(self) -> None:
        """Draw an arrow from the focused person by keyboard; between two selected people at once."""
        canvas = self._canvas
        scene, selected = canvas.picture.scene, canvas.picture.emphasis.people
        focus = self.focused()
        first = focus.index if focus is not None and focus.kind == "person" else None
        if first is None or (selected and first not in selected):
            first = min(selected) if selected else None
        if first is None:
            return
        if len(selected) == 2:
            other = next(index for index in selected if index != first)
            canvas.commands.draw_arrow(scene.ids[first], scene.ids[other])
            return
        self.listener = first
        self.focus_on(Hit("person", first))
        canvas.refresh_hint()
        canvas.update()

    def _drawing(self, event: QKeyEvent) -> bool:
        if self.listener is None:
            return False
        canvas, focus = self._canvas, self.focused()
        if event.key() in (Key.Key_Return, Key.Key_Enter):
            scene, listener = canvas.picture.scene, self.listener
            self.listener = None
            if focus is not None and focus.kind == "person" and focus.index != listener:
                canvas.commands.draw_arrow(scene.ids[listener], scene.ids[focus.index])
                self._follow_selection()
        elif event.key() == Key.Key_Escape:
            self.listener = None
        else:
            return False
        canvas.refresh_hint()
        canvas.update()
        return True

    def _follow_selection(self) -> None:
        """Put the focus on the selected arrow, so that a number typed next means what has the focus."""
        selected = self._canvas.picture.emphasis.arrows
        if len(selected) == 1:
            self.focus_on(Hit("arrow", min(selected)))

    def _arrow_key(self, event: QKeyEvent) -> bool:
        if event.key() not in _ARROWS or event.modifiers() & ~(Modifier.ShiftModifier | Modifier.KeypadModifier):
            return False
        canvas = self._canvas
        dx, dy = _ARROWS[Key(event.key())]
        big = bool(event.modifiers() & Modifier.ShiftModifier)
        if canvas.picture.emphasis.people:
            step = (BIG_STEP if big else STEP) * canvas.picture.scene.radius / 36.0
            canvas.commands.nudge(dx * step, dy * step)
        else:
            pan = BIG_PAN_PX if big else PAN_PX
            canvas.pan(-dx * pan, -dy * pan)
        return True

    def _standard(self, event: QKeyEvent) -> bool:
        canvas = self._canvas
        for keys, act in (
            (Standard.SelectAll, canvas.select_all),
            (Standard.Copy, canvas.copy),
            (Standard.Cut, canvas.cut),
            (Standard.Paste, canvas.paste),
            (Standard.ZoomIn, canvas.zoom_in),
            (Standard.ZoomOut, canvas.zoom_out),
        ):
            if event.matches(keys):
                act()
                return True
        if event.modifiers() == Modifier.ControlModifier and event.key() == Key.Key_D:
            canvas.duplicate()
            return True
        if event.modifiers() == Modifier.ControlModifier and event.key() == Key.Key_0:
            canvas.fit()
            return True
        return False

    def _typing(self, event: QKeyEvent) -> bool:
        """The first digit of a belief or of points."""
        if event.modifiers() & (Modifier.ControlModifier | Modifier.AltModifier | Modifier.MetaModifier):
            return False
        canvas, text, selection = self._canvas, event.text(), self._canvas.session.selection
        negative = canvas.session.question.low < 0 and not selection.arrows
        if not text or not (text.isdecimal() or text in ".," or (text == "-" and negative)):
            return False
        scene = canvas.picture.scene
        if selection.people:
            people = sorted(selection.people, key=scene.index.__getitem__)
            canvas.editors.type_belief(people, text)
            return True
        if selection.arrows:
            canvas.editors.type_points(sorted(selection.arrows), text)
            return True
        return False

    def _letter(self, event: QKeyEvent) -> bool:
        canvas = self._canvas
        if event.modifiers() & (Modifier.ControlModifier | Modifier.AltModifier | Modifier.MetaModifier):
            return False
        match event.key():
            case Key.Key_Delete | Key.Key_Backspace:
                canvas.delete_selected()
            case Key.Key_F2:
                canvas.rename_selected()
            case Key.Key_Return | Key.Key_Enter if len(canvas.session.selection.people) == 1:
                canvas.rename_selected()
            case Key.Key_Escape:
                canvas.session.select()
                self.focus_on(None)
            case Key.Key_A | Key.Key_L:
                self.begin_arrow()
            case Key.Key_W:
                self.next_arrow(not event.modifiers() & Modifier.ShiftModifier)
            case Key.Key_R:
                canvas.turn_round()
            case Key.Key_Plus | Key.Key_Equal:
                canvas.zoom_in()
            case Key.Key_Minus:
                canvas.zoom_out()
            case Key.Key_0:
                canvas.fit()
            case _:
                return False
        canvas.refresh_hint()
        return True
