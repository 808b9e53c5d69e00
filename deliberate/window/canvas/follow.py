"""Keeps the picture true to the session: meeting, selection, lit finding and position."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject

from deliberate.window.canvas import grounds
from deliberate.window.canvas.scene import Scene, scene_of

if TYPE_CHECKING:
    from deliberate.window.canvas.canvas import Canvas
    from deliberate.window.canvas.picture import Floats
    from deliberate.window.session import Session


class Follower(QObject):
    """Listens to the session for one canvas."""

    def __init__(self, canvas: Canvas, session: Session) -> None:
        super().__init__(canvas)
        self._canvas, self._session = canvas, session
        self._remembered: dict[str, tuple[float, float]] = {}
        self._opened = session.opened
        self.first_scene = scene_of(session.variant, session.question, self._remembered, None)

    def begin(self) -> None:
        """Listen from now on."""
        session = self._session
        session.scenario_changed.connect(self.take_scenario)
        session.rehearsal_changed.connect(self._canvas.update)
        session.selection_changed.connect(self.take_selection)
        session.lit_changed.connect(self.take_lit)
        session.player.moved.connect(self.take_position)
        self._canvas.picture.starts = session.starts()
        self.take_position()
        self.take_selection()
        self.take_lit()

    def beliefs(self) -> Floats:
        """What people believe at the present position."""
        beliefs = self._session.beliefs_at(self._session.player.position)
        # While an edit is under way the rehearsal may still be one of other people.
        return beliefs if len(beliefs) == len(self._canvas.picture.scene.ids) else self._session.starts()

    def stage(self) -> int:
        """The stage whose voices and grounds are shown."""
        choosing = self._canvas.choosing.stage
        return self._session.stage_at(self._session.player.position) if choosing is None else choosing

    def take_scenario(self) -> None:
        """The meeting, the variant or the question is another value."""
        canvas, session, picture = self._canvas, self._session, self._canvas.picture
        before = picture.scene
        opened = session.opened != self._opened
        if opened:
            self._remembered.clear()
        self._opened = session.opened
        radius = None if opened else before.radius
        scene = scene_of(session.variant, session.question, self._remembered, radius, None if opened else before)
        canvas.stop_moving()
        picture.show(scene)
        picture.starts = session.starts()
        if opened or (before.variant.name != scene.variant.name and canvas.follows_size):
            canvas.fit()
        canvas.choosing.check()
        self.take_selection()
        self.take_position()
        self.take_lit()
        if not _same_items(before, scene):
            canvas.forget_items()

    def take_selection(self) -> None:
        """Other people or arrows are selected."""
        canvas, scene, selection = self._canvas, self._canvas.picture.scene, self._session.selection
        marks = canvas.picture.emphasis
        marks.people = {scene.index[one] for one in selection.people if one in scene.index}
        marks.arrows = {scene.arrow_index[pair] for pair in selection.arrows if pair in scene.arrow_index}
        canvas.keys.check_focus()
        canvas.picture.touch()
        canvas.refresh_hint()
        canvas.stir()

    def take_lit(self) -> None:
        """Another finding is pointed at, or none."""
        picture, finding = self._canvas.picture, self._session.lit
        marks, scene = picture.emphasis, picture.scene
        marks.lit_people = marks.lit_arrows = None
        if finding is not None:
            marks.lit_people = {scene.index[one] for one in finding.people if one in scene.index}
            marks.lit_arrows = grounds.lit_arrows(finding, scene)
        self._refresh_grounds()
        picture.touch()
        self._canvas.stir()

    def take_position(self) -> None:
        """The talk is at another position; with another stage, other arrows count."""
        picture, stage = self._canvas.picture, self.stage()
        if stage != picture.stage:
            picture.stage = stage
            self.take_stage()
        self._canvas.update()

    def take_stage(self) -> None:
        """The stage shown is another one, or other people sit together in it."""
        self._canvas.picture.stage = self.stage()
        self._refresh_grounds()
        self._canvas.picture.touch()
        self._canvas.stir()

    def _refresh_grounds(self) -> None:
        scene, finding = self._canvas.picture.scene, self._session.lit
        if finding is not None:
            self._canvas.picture.grounds = grounds.of_finding(finding, scene)
        else:
            stage = self._session.variant.plan.stages[self.stage()]
            self._canvas.picture.grounds = grounds.of_stage(stage, scene)


def _same_items(one: Scene, other: Scene) -> bool:
    """Whether people and arrows have kept their numbers."""
    if one.variant.arrows is other.variant.arrows and one.ids == other.ids:
        return True
    return one.ids == other.ids and list(one.arrow_index) == list(other.arrow_index)
