"""The picture as a whole: what is shown, which layers are up to date, and the order of painting.

Knows no session and no mouse; the canvas tells it what has changed.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter

from deliberate.rehearsal.words import amount
from deliberate.window.canvas import geometry, overlays
from deliberate.window.canvas.geometry import Curves
from deliberate.window.canvas.hulls import Ground, paint_grounds
from deliberate.window.canvas.layers import (
    MARKED,
    PLAIN,
    WEAK,
    ArrowLook,
    GroundLayer,
    manners,
    paint_arrows,
    screen_curves,
    widths,
)
from deliberate.window.canvas.names import Names, has_room
from deliberate.window.canvas.people import PeoplePainter
from deliberate.window.canvas.scene import STRONG, Scene
from deliberate.window.canvas.viewport import Viewport, fitted
from deliberate.window.theme import Theme

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]
Flags = NDArray[np.bool_]

FINE_AT_ONCE = 160  # so many arrows are painted fine even while something moves
FINE_ALIVE = 60
HALO_ALIVE = 60  # so many names get a halo while something moves
LEAST_NAME, MOST_NAME = 6.0, 13.5  # width of a line of somebody's name, in heights of the line
FIT_MARGINS = (58.0, 88.0, 58.0, 72.0)  # room for legend, names and the sentence at the foot


@dataclass
class Hit:
    """What is under the pointer: a "person" (on the disc), the "ring" of one, an "arrow", or "ground"."""

    kind: str
    index: int = -1


@dataclass
class Emphasis:
    """What is selected, pointed at and focused, by index."""

    people: set[int] = field(default_factory=set)
    arrows: set[int] = field(default_factory=set)
    hover: Hit | None = None
    focus: Hit | None = None
    lit_people: set[int] | None = None
    lit_arrows: set[int] | None = None


class Picture:
    """Everything that is needed to paint one frame."""

    def __init__(self, scene: Scene, theme: Theme) -> None:
        self.scene, self.theme = scene, theme
        self.view = Viewport()
        self.width, self.height, self.ratio = 1, 1, 1.0
        self.stage = 0
        self.flow = False
        self.moves_note = ""  # why arrows are not drawn by what they move, though that is wanted
        self.starts = np.zeros(len(scene.ids))
        self.emphasis = Emphasis()
        self.grounds: list[Ground] = []
        self.moving: Flags | None = None  # people that are being moved, with their arrows painted live
        self.live = scene.places
        self.font = QFont()
        self.margins = FIT_MARGINS
        self.people, self.names = PeoplePainter(), Names()
        self._ground = GroundLayer()
        self._ground_stale = self._names_stale = True
        self._names_baked = False
        self._baked = np.zeros(0, dtype=bool)  # whose names the ground layer has
        self._look: ArrowLook | None = None

    # What has changed

    def show(self, scene: Scene) -> None:
        """Show another scene."""
        self.scene, self.live, self.moving = scene, scene.places, None
        self.touch(names=True)

    def touch(self, *, names: bool = False) -> None:
        """The ground layer is out of date, and with `names` where the names go too."""
        self._ground_stale, self._look = True, None
        self._names_stale = self._names_stale or names

    def weigh_arrows(self, moves: Floats | None, note: str = "") -> None:
        """Draw arrows as thick as what ten points more would move; with None as their shares, and say why."""
        self.scene, self.moves_note = self.scene.drawn_by(moves), note
        self.touch()

    def look_at(self, view: Viewport) -> None:
        """Zoom or pan."""
        if view != self.view:
            self._names_stale = self._names_stale or view.zoom != self.view.zoom
            self.view = view
            self._ground_stale = True

    def resize(self, width: int, height: int, ratio: float) -> None:
        """The widget has another size."""
        self.width, self.height, self.ratio = width, height, ratio
        self._ground_stale = True

    def fit(self) -> None:
        """Show everybody."""
        self.look_at(fitted(self.scene.places, self.scene.radius, self.width, self.height, self.margins))

    def move(self, which: Flags | None, live: Floats | None = None) -> None:
        """People `which` are on their way, at `live`; None ends it."""
        before = self.moving
        self.moving = which
        self.live = self.scene.places if live is None else live
        if (before is None) != (which is None) or (
            which is not None and before is not None and (before != which).any()
        ):
            self._ground_stale = True

    @property
    def settled(self) -> bool:
        """Whether everything on screen is as fine as it gets."""
        return not self._ground_stale and not self._names_stale and self._ground.fine

    # Where things are

    @property
    def radius(self) -> float:
        """Of a person, in pixels."""
        return self.scene.radius * self.view.zoom

    @property
    def points(self) -> Floats:
        """Middles of all people in pixels, at whole device pixels so that sprites stay sharp."""
        return np.round(self.view.to_screen(self.live) * self.ratio) / self.ratio

    def look(self) -> ArrowLook:
        """How arrows are drawn at present."""
        if self._look is None:
            scene, marks = self.scene, self.emphasis
            selected, arrows = self._flags(marks.people, len(scene.ids)), self._flags(marks.arrows, len(scene.share))
            counting = scene.counting(self.stage)
            lit = None if marks.lit_arrows is None else self._flags(marks.lit_arrows, len(scene.share))
            marked = arrows | (selected[scene.listener] & (lit is None))
            shown = scene.shown(counting, selected, arrows | (lit if lit is not None else False))
            self._look = ArrowLook(shown, manners(scene, counting, marked, lit), ~counting, self.flow)
        return self._look

    def curves(self, which: Indices) -> Curves:
        """The curves of some arrows in pixels."""
        return screen_curves(self.scene, self.view, which)

    def hit(self, x: float, y: float) -> Hit:
        """What is at a pixel. People are at least 24 pixels wide to the pointer."""
        point, radius = np.array([x, y]), self.radius
        points = self.view.to_screen(self.live)
        inner = max(radius * self.people.disc_part(self.scene, radius), min(radius, 9.0))
        person = geometry.nearest_person(points, point, max(radius + 5, 12.0))
        if person is not None:
            away = float(np.hypot(*(points[person] - point)))
            return Hit("person" if away <= inner else "ring", person)
        shown = np.flatnonzero(self.look().shown)
        arrow = geometry.nearest_arrow(self.curves(shown), point, 7.0)
        if arrow is not None:
            return Hit("arrow", int(shown[arrow]))
        name = self._name_at(x, y)
        return Hit("ground") if name is None else Hit("person", name)

    def _name_at(self, x: float, y: float) -> int | None:
        if self._names_stale or len(self.names.sizes) != len(self.scene.ids):
            return None
        areas = self.names.areas(self.points, self.radius)
        inside = (
            (areas[:, 0] <= x)
            & (x <= areas[:, 0] + areas[:, 2])
            & (areas[:, 1] <= y)
            & (y <= areas[:, 1] + areas[:, 3])
        )
        found = np.flatnonzero(inside & self._named())
        return int(found[0]) if len(found) else None

    # Painting

    def paint(self, painter: QPainter, beliefs: Floats, *, gliding: bool, at_start: bool, resting: bool) -> None:
        """Ground, arrows, people, names and marks. `resting`: nothing has moved for a while."""
        scene, theme, radius = self.scene, self.theme, self.radius
        self._refresh(resting)
        self._ground.blit(painter, self.view, theme, self.width, self.height)
        if self.moving is not None:
            self._paint_moving(painter)
        points = self.points
        self._paint_selection(painter, points)
        self.people.prepare(scene, self.stage, radius, self.ratio, theme, self.starts, sharp=resting)
        self.people.paint(
            painter, scene, points, radius, beliefs, theme, gliding=gliding, at_start=at_start, sharp=resting
        )
        self._paint_names(painter, points, baked=self._names_baked and self.moving is None)
        self._paint_focus(painter, points)

    def legend(self) -> list[str]:
        """What has to be said about the arrows."""
        total, look = len(self.scene.share), self.look()
        lines = [overlays.TRAVEL if self.flow else overlays.LISTENED] if total else []
        if total and self.scene.moves is not None:
            lines += [overlays.MOVES, overlays.UP_OR_DOWN]
        elif total and self.moves_note:
            lines.append(self.moves_note)
        if self.scene.weighted:
            lines.append(overlays.TIMES)
        if total <= STRONG:
            return lines
        idle, weak = int((~look.shown & look.dashed).sum()), int((~look.shown & ~look.dashed).sum())
        if idle:
            lines.append(f"{amount(idle)} arrows that do not count in this stage are not shown")
        if weak:
            lines.append(f"{amount(weak)} weak arrows are not shown: select somebody to see theirs")
        elif int((look.shown & (look.manner == WEAK)).sum()):
            lines.append("The weaker arrows are drawn thin")
        return lines

    def _refresh(self, resting: bool) -> None:
        light = int(self.look().shown.sum()) <= FINE_AT_ONCE
        if (self._names_stale and resting) or len(self.names.sizes) != len(self.scene.ids):
            self._place_names()
            self._names_stale, self._ground_stale = False, True
        if self._ground_stale or (resting and not self._names_baked):
            fine = resting or light
            self._names_baked = resting
            self._ground.paint(
                self.width, self.height, self.ratio, self.view, self.theme, fine,
                lambda painter: self._paint_ground(painter, fine),
            )  # fmt: skip
            self._ground_stale = False

    def _paint_ground(self, painter: QPainter, fine: bool) -> None:
        painter.setFont(self.font)
        if self.grounds:
            paint_grounds(painter, self.grounds, self.points, self.radius, self._name_height(), self.theme)
        look = self.look()
        if self.moving is not None:
            moving = self.moving[self.scene.listener] | self.moving[self.scene.source]
            look = ArrowLook(look.shown & ~moving, look.manner, look.dashed, look.flow)
        paint_arrows(painter, self.scene, self.view, look, self.theme, fine=fine)
        if self._names_baked:
            self._baked = self._named() & self.names.clear()
            everybody = np.flatnonzero(self._baked)
            self.names.paint(painter, self.points, self.radius, everybody, self.theme, ~self.scene.present, halo=True)

    def _paint_names(self, painter: QPainter, points: Floats, *, baked: bool) -> None:
        """Names over the people: all, or where the ground layer has them only those that came up since."""
        named = self._named()
        if baked:
            named &= ~self._baked
        which = np.flatnonzero(named)
        halo = len(which) <= HALO_ALIVE
        self.names.paint(painter, points, self.radius, which, self.theme, ~self.scene.present, halo=halo)

    def _paint_moving(self, painter: QPainter) -> None:
        assert self.moving is not None
        look = self.look()
        moving = self.moving[self.scene.listener] | self.moving[self.scene.source]
        shown = look.shown & moving
        alive = ArrowLook(shown, look.manner, look.dashed, look.flow)
        paint_arrows(
            painter, self.scene.moved_to(self.live), self.view, alive, self.theme, fine=int(shown.sum()) <= FINE_ALIVE
        )

    def _paint_selection(self, painter: QPainter, points: Floats) -> None:
        marks, radius = self.emphasis, self.radius
        if marks.lit_people is not None:
            overlays.circle_people(painter, points, marks.lit_people, radius, self.theme, gap=2.0, width=1.6)
        overlays.circle_people(painter, points, marks.people, radius, self.theme, gap=2.6, width=3.2)
        hover = marks.hover
        if hover is not None and hover.kind == "arrow":
            self._paint_over(painter, hover.index, PLAIN)

    def _paint_focus(self, painter: QPainter, points: Floats) -> None:
        marks, radius, focus = self.emphasis, self.radius, self.emphasis.focus
        hover = marks.hover
        if hover is not None and hover.kind in ("person", "ring"):
            wide = 2.4 if hover.kind == "ring" else 1.4
            overlays.circle_people(painter, points, [hover.index], radius, self.theme, gap=1.5, width=wide)
        if focus is None:
            return
        if focus.kind == "person":
            overlays.circle_people(painter, points, [focus.index], radius, self.theme, gap=7.0, width=1.5)
        elif focus.kind == "arrow":
            self._paint_over(painter, focus.index, MARKED)

    def _paint_over(self, painter: QPainter, arrow: int, manner: int) -> None:
        which = np.array([arrow])
        curve = self.curves(which)
        if self.flow:
            curve = geometry.turned(curve)
        wide = float(widths(self.scene, self.view, which, self.look().manner)[0])
        ink = QColor(self.theme.accent if manner == MARKED or arrow in self.emphasis.arrows else self.theme.ink)
        halo = QColor(self.theme.tint if manner == MARKED else self.theme.canvas)
        dashed = bool(self.look().dashed[arrow])
        head = QColor(self.theme.canvas) if self.scene.lowering[arrow] else None
        overlays.paint_arrow(painter, curve, ink, max(wide, 2.0), halo=halo, dashed=dashed, head=head)

    # Names

    def _place_names(self) -> None:
        scene, radius = self.scene, self.radius
        font = QFont(self.font)
        scale = min(max(radius / 26, 0.8), 1.12)
        if font.pixelSize() > 0:
            font.setPixelSize(max(7, round(font.pixelSize() * scale)))
        else:
            font.setPointSizeF(max(5.0, round(font.pointSizeF() * scale * 2) / 2))
        shown = np.flatnonzero(self.look().shown)
        lines = np.zeros((0, 4))
        if has_room(len(scene.ids), radius):
            lines, _ = geometry.strokes(self.curves(shown), np.full(len(shown), 6))
        line = QFontMetricsF(font).height()
        room = min(max(radius * 4.4, line * LEAST_NAME), line * MOST_NAME)
        points, paper = self.view.to_screen(scene.places), (self.width, self.height)
        self.names.place(scene.names, points, radius, lines, font, room, paper)

    def _named(self) -> Flags:
        """Whose names are painted."""
        count = len(self.scene.ids)
        if len(self.names.sizes) != count:
            return np.zeros(count, dtype=bool)
        return self.names.readable(self.radius) | self._special()

    def _special(self) -> Flags:
        """Whose names are painted whatever lies below: those pointed at, focused, and the few selected."""
        marks = self.emphasis
        special = {
            hit.index for hit in (marks.hover, marks.focus) if hit is not None and hit.kind in ("person", "ring")
        }
        return self._flags(special | marks.people if len(marks.people) <= 30 else special, len(self.scene.ids))

    def _name_height(self) -> float:
        return QFontMetricsF(self.font).height() if has_room(len(self.scene.ids), self.radius) else 0.0

    @staticmethod
    def _flags(which: set[int], count: int) -> Flags:
        flags = np.zeros(count, dtype=bool)
        flags[list(which)] = True
        return flags
