"""The mouse on the picture. One gesture at a time: moving people, drawing an arrow, a rubber band, panning."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QMouseEvent, QPainter, QPen, QWheelEvent
from PySide6.QtWidgets import QApplication

from deliberate.rehearsal.words import names
from deliberate.scenario.edits import points as point_edits
from deliberate.window.canvas import geometry, overlays
from deliberate.window.canvas.picture import Hit

if TYPE_CHECKING:
    from deliberate.window.canvas.canvas import Canvas
    from deliberate.window.canvas.picture import Floats

Button, Modifier = Qt.MouseButton, Qt.KeyboardModifier
EXTEND = Modifier.ControlModifier | Modifier.ShiftModifier
SNAP_PX = 16.0  # beyond a person's ring an arrow that is being drawn still snaps to her
NOTCH = 120  # of a wheel, in eighths of a degree


class Mouse:
    """What the pointer is doing."""

    def __init__(self, canvas: Canvas) -> None:
        self._canvas = canvas
        self._press: QPointF | None = None
        self._button = Button.NoButton
        self._hit = Hit("ground")
        self._gesture = ""  # "", "move", "arrow", "band", "pan"
        self._at = QPointF()
        self._extend = False
        self._wheel = 0

    def forget(self) -> None:
        """The picture has changed below the pointer: whatever was under way ends."""
        self._canvas.picture.emphasis.hover = None
        if self._gesture == "move":
            self._canvas.picture.move(None)
        self._gesture, self._press = "", None

    # Events

    def press(self, event: QMouseEvent) -> None:
        """A button goes down."""
        canvas = self._canvas
        canvas.editors.accept()
        canvas.setFocus(Qt.FocusReason.MouseFocusReason)
        self._press, self._button, self._at = event.position(), event.button(), event.position()
        self._gesture = ""
        self._extend = bool(event.modifiers() & EXTEND)
        self._hit = canvas.hit(event.position())
        if self._button == Button.LeftButton and not canvas.choosing.takes_clicks:
            self._select_at_press()

    def move(self, event: QMouseEvent) -> None:
        """The pointer moves, with or without a button."""
        self._at = event.position()
        if self._press is None:
            self._hover(self._canvas.hit(self._at))
            return
        if not self._gesture:
            if (self._at - self._press).manhattanLength() < QApplication.startDragDistance():
                return
            self._begin()
        self._go_on()

    def release(self, event: QMouseEvent) -> None:
        """A button goes up."""
        canvas = self._canvas
        if self._press is None or event.button() != self._button:
            return
        self._at = event.position()
        gesture, self._gesture, self._press = self._gesture, "", None
        if gesture == "move":
            self._drop_people()
        elif gesture == "arrow":
            self._drop_arrow()
        elif gesture == "band":
            self._take_band()
        elif gesture == "":
            self._click(event)
        if gesture == "pan":
            canvas.unsetCursor()
        self._hover(canvas.hit(self._at))
        canvas.refresh_hint()
        canvas.stir()

    def double_click(self, event: QMouseEvent) -> None:
        """Rename a person, or add one on free ground."""
        canvas = self._canvas
        if event.button() != Button.LeftButton or canvas.choosing.takes_clicks:
            self.press(event)
            return
        self._press = None
        hit = canvas.hit(event.position())
        if hit.kind in ("person", "ring"):
            canvas.editors.rename(canvas.picture.scene.ids[hit.index])
        elif hit.kind == "ground":
            canvas.commands.add_person(event.position())

    def wheel(self, event: QWheelEvent) -> None:
        """Points of a selected arrow, else zoom; two fingers on a touchpad pan."""
        canvas = self._canvas
        event.accept()
        zooming = bool(event.modifiers() & Modifier.ControlModifier)
        if not zooming and event.phase() != Qt.ScrollPhase.NoScrollPhase and not event.pixelDelta().isNull():
            canvas.pan(event.pixelDelta().x(), event.pixelDelta().y())
            return
        turn = event.angleDelta().y() or event.angleDelta().x()
        hit = canvas.hit(event.position())
        if not zooming and hit.kind == "arrow" and hit.index in canvas.picture.emphasis.arrows:
            self._turn_points(hit.index, turn, by=5 if event.modifiers() & Modifier.ShiftModifier else 1)
            return
        canvas.zoom_around(1.0015**turn, event.position())

    def leave(self) -> None:
        """The pointer leaves the canvas."""
        self._hover(None)

    # While a gesture goes on

    def hint(self) -> str:
        """What the gesture would do."""
        canvas = self._canvas
        scene = canvas.picture.scene
        if self._gesture == "arrow":
            here = scene.told_apart[self._hit.index]
            target = self._target()
            if target is None:
                return f"{here} listens to …: let go over a person, or on free ground for a new one"
            return f"{here} listens to {scene.told_apart[target]}"
        hover = canvas.picture.emphasis.hover
        if self._gesture == "" and hover is not None and hover.kind == "ring" and not canvas.choosing.takes_clicks:
            return f"{canvas.sentence(hover)}. Drag from the ring to whom {scene.told_apart[hover.index]} listens"
        return ""

    def paint(self, painter: QPainter) -> None:
        """The rubber band, or the arrow that is being drawn."""
        canvas, theme = self._canvas, self._canvas.look.theme
        if self._gesture == "band" and self._press is not None:
            overlays.paint_band(painter, QRectF(self._press, self._at).normalized(), theme)
        if self._gesture == "arrow":
            target = self._target()
            self.paint_preview(painter, self._hit.index, target, np.array([self._at.x(), self._at.y()]))
        if canvas.editors.place is not None:
            point = canvas.view().to_screen(canvas.editors.place)
            pen = QPen(QColor(theme.accent), 1.6)
            pen.setDashPattern([4.0, 3.0])
            painter.setPen(pen)
            painter.setBrush(QColor(theme.tint))
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.drawEllipse(QPointF(*point), canvas.picture.radius, canvas.picture.radius)

    def paint_preview(self, painter: QPainter, listener: int, source: int | None, loose: Floats) -> None:
        """The arrow that would be drawn from a person to another, or to where the pointer is."""
        picture, theme = self._canvas.picture, self._canvas.look.theme
        here = picture.points[listener]
        there = loose if source is None else picture.points[source]
        places = np.stack([here, there])
        if np.hypot(*(there - here)) < 1:
            return
        bend = 0.0
        if source is not None:
            scene = picture.scene
            if (scene.ids[source], scene.ids[listener]) in scene.arrow_index:
                bend = geometry.PART * picture.radius / float(np.hypot(*(there - here)))
            overlays.circle_people(painter, picture.points, [source], picture.radius, theme, gap=2.0, width=2.6)
        reach = picture.radius if source is not None else min(picture.radius, float(np.hypot(*(there - here))) * 0.4)
        curve = geometry.curves(places, np.array([0]), np.array([1]), np.array([bend]), reach)
        if source is None:
            curve = geometry.Curves(curve.start, (curve.start + there[None]) / 2, there[None])
        if picture.flow:
            curve = geometry.turned(curve)
        overlays.paint_arrow(painter, curve, QColor(theme.accent), 2.4, halo=QColor(theme.canvas))

    def _begin(self) -> None:
        canvas = self._canvas
        if self._button in (Button.MiddleButton, Button.RightButton):
            self._gesture = "pan"
            canvas.setCursor(Qt.CursorShape.ClosedHandCursor)
        elif self._button != Button.LeftButton:
            self._press = None
        elif self._hit.kind == "person" and not canvas.choosing.takes_clicks:
            self._gesture = "move"
        elif self._hit.kind == "ring" and not canvas.choosing.takes_clicks:
            self._gesture = "arrow"
        else:
            self._gesture = "band"
        self._hover(None)
        self._last = self._press or self._at

    def _go_on(self) -> None:
        canvas = self._canvas
        if self._gesture == "pan":
            step = self._at - self._last
            self._last = self._at
            canvas.pan(step.x(), step.y())
            return
        if self._gesture == "move":
            moving = np.zeros(len(canvas.picture.scene.ids), dtype=bool)
            moving[list(canvas.picture.emphasis.people)] = True
            canvas.picture.move(moving, self._moved_places(moving))
        canvas.refresh_hint()
        canvas.stir()

    def _moved_places(self, moving: np.ndarray) -> Floats:
        assert self._press is not None or self._gesture == ""
        places = self._canvas.picture.scene.places.copy()
        start = self._press or self._last
        places[moving] += np.array([self._at.x() - start.x(), self._at.y() - start.y()]) / self._canvas.view().zoom
        return places

    def _target(self) -> int | None:
        """The person that an arrow being drawn snaps to."""
        picture = self._canvas.picture
        points = picture.view.to_screen(picture.live)
        at = np.array([self._at.x(), self._at.y()])
        person = geometry.nearest_person(points, at, picture.radius + SNAP_PX)
        return None if person == self._hit.index else person

    # What a gesture leaves behind

    def _select_at_press(self) -> None:
        session, scene, hit = self._canvas.session, self._canvas.picture.scene, self._hit
        people, arrows = session.selection.people, session.selection.arrows
        if hit.kind in ("person", "ring"):
            one = scene.ids[hit.index]
            self._canvas.keys.focus_on(Hit("person", hit.index), shown=False)
            if self._extend:
                session.select(people ^ {one}, arrows)
            elif one not in people:
                session.select([one])
        elif hit.kind == "arrow":
            pair = scene.pair(hit.index)
            self._canvas.keys.focus_on(hit, shown=False)
            if self._extend:
                session.select(people, arrows ^ {pair})
            elif pair not in arrows:
                session.select(arrows=[pair])

    def _click(self, event: QMouseEvent) -> None:
        canvas, hit = self._canvas, self._hit
        session, scene = canvas.session, canvas.picture.scene
        if self._button == Button.RightButton:
            self._select_for_menu()
            canvas.commands.show_menu(event.globalPosition().toPoint())
            return
        if self._button != Button.LeftButton:
            return
        if canvas.choosing.takes_clicks:
            canvas.choosing.click(hit)
            return
        if self._extend:
            return
        if hit.kind == "ground":
            session.select()
            canvas.keys.focus_on(None)
        elif hit.kind == "arrow":
            session.select(arrows=[scene.pair(hit.index)])
        else:
            session.select([scene.ids[hit.index]])

    def _select_for_menu(self) -> None:
        session, scene, hit = self._canvas.session, self._canvas.picture.scene, self._hit
        if hit.kind == "ground":
            session.select()
        elif hit.kind == "arrow" and scene.pair(hit.index) not in session.selection.arrows:
            session.select(arrows=[scene.pair(hit.index)])
        elif hit.kind in ("person", "ring") and scene.ids[hit.index] not in session.selection.people:
            session.select([scene.ids[hit.index]])

    def _drop_people(self) -> None:
        canvas = self._canvas
        picture, moving = canvas.picture, canvas.picture.moving
        places = picture.live
        picture.move(None)
        if moving is None:
            return
        scene = picture.scene
        people = [scene.ids[index] for index in np.flatnonzero(moving).tolist()]
        spots = {
            one: (round(float(x), 2), round(float(y), 2)) for one, (x, y) in zip(people, places[moving], strict=True)
        }
        canvas.commands.move(spots, f"Move {names(people, canvas.session.variant)}")

    def _drop_arrow(self) -> None:
        canvas, target = self._canvas, self._target()
        listener = canvas.picture.scene.ids[self._hit.index]
        if target is not None:
            canvas.commands.draw_arrow(listener, canvas.picture.scene.ids[target])
        elif canvas.hit(self._at).index != self._hit.index and canvas.rect().contains(self._at.toPoint()):
            canvas.commands.add_person(self._at, listener)

    def _take_band(self) -> None:
        canvas = self._canvas
        scene, session = canvas.picture.scene, canvas.session
        points = canvas.picture.points
        corner = np.array([self._last.x(), self._last.y()])
        inside = geometry.within(points, corner, np.array([self._at.x(), self._at.y()]))
        caught = {scene.ids[index] for index in inside.tolist()}
        if self._extend:
            session.select(session.selection.people | caught, session.selection.arrows)
        else:
            session.select(caught)

    def _turn_points(self, arrow: int, turn: int, by: float) -> None:
        """One point a notch; slow wheels and touchpads add up to notches."""
        self._wheel += turn
        notches = int(self._wheel / NOTCH)
        self._wheel -= notches * NOTCH
        if notches == 0:
            return
        session, scene = self._canvas.session, self._canvas.picture.scene
        listener, source = scene.pair(arrow)
        before = float(scene.share[arrow]) * 100
        # The wheel never takes an arrow away, nor everything from everybody else.
        least, most = min(1.0, before), max(99.0, before)
        points = min(max(round(before) + notches * by, least), most)
        session.edit(
            f"Points: {scene.sentence(arrow).rsplit(':', 1)[0]}",
            lambda s: point_edits.set_points(s, listener, source, points, variant=session.variant.name),
            merge=f"points {listener} {source}",
        )

    def _hover(self, hit: Hit | None) -> None:
        canvas = self._canvas
        marks = canvas.picture.emphasis
        hit = None if hit is None or hit.kind == "ground" else hit
        if hit == marks.hover:
            return
        marks.hover = hit
        if hit is not None and hit.kind == "ring" and not canvas.choosing.takes_clicks:
            canvas.setCursor(Qt.CursorShape.CrossCursor)
        elif hit is not None and (hit.kind == "arrow" or canvas.choosing.takes_clicks):
            canvas.setCursor(Qt.CursorShape.PointingHandCursor)
        else:
            canvas.unsetCursor()
        canvas.refresh_hint()
        canvas.update()
