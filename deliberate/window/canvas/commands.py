"""What can be done with the picture by menu or key: each is one undoable step of the session."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from msgspec.structs import replace
from PySide6.QtCore import QPoint, QPointF
from PySide6.QtGui import QAction, QCursor, QGuiApplication
from PySide6.QtWidgets import QMenu

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import count, names
from deliberate.scenario.edits import arrows as arrow_edits
from deliberate.scenario.edits import clips
from deliberate.scenario.edits import people as people_edits
from deliberate.scenario.edits.go_rounds import linked_groups
from deliberate.scenario.values import Scenario
from deliberate.window.canvas import arrange, clipboard
from deliberate.window.canvas.places import free_place

if TYPE_CHECKING:
    from deliberate.window.canvas.canvas import Canvas
    from deliberate.window.canvas.picture import Floats

SHIFT = 48.0  # of pasted people from where they were copied, in scene units
ARRANGED = {
    "circle": "Arrange in a circle",
    "groups": "Arrange by closed group",
    "hearing": "Arrange by who hears whom",
    "grid": "Arrange in a tidy grid",
    "tables": "Arrange by table",
}


class Commands:
    """The commands of one canvas."""

    def __init__(self, canvas: Canvas) -> None:
        self._canvas = canvas
        self._session = canvas.session

    # People

    def add_person(self, at: QPointF | None = None, listener: str | None = None) -> None:
        """Ask for the name of a new person, where `at` says or on free ground near the middle."""
        canvas = self._canvas
        scene = canvas.picture.scene
        if at is None:
            middle = canvas.to_scene(QPointF(canvas.width() / 2, canvas.height() / 2))
            place = free_place(scene.places, middle, scene.radius * 3.2)
        else:
            place = canvas.to_scene(at)
        canvas.editors.name_new(place, listener)

    def rename_selected(self) -> None:
        """Edit the name of the one who is selected."""
        selected = self._session.selection.people
        if len(selected) == 1:
            self._canvas.editors.rename(next(iter(selected)))

    def delete_selected(self) -> None:
        """Remove selected people and arrows in one step."""
        people, pairs, variant = *self._selected(), self._session.variant.name
        if self._canvas.choosing.takes_clicks or not (people or pairs):
            return  # while tables or speakers are chosen, selecting is for seating

        def change(scenario: Scenario) -> Scenario:
            left = [pair for pair in pairs if pair[0] not in people and pair[1] not in people]
            if left:
                scenario = arrow_edits.remove_arrows(scenario, left, variant=variant)
            return people_edits.remove_people(scenario, people, variant=variant) if people else scenario

        if people:
            step = f"Remove {names(people, self._session.variant)}"
        else:
            step = f"Remove {count(len(pairs), 'arrow', 'arrows')}"
        self._session.edit(step, change)

    def select_all(self) -> None:
        """Select everybody."""
        self._session.select(self._canvas.picture.scene.ids)

    def move(self, places: dict[str, tuple[float, float]], step: str, merge: str = "") -> bool:
        """Put people at other places."""
        variant = self._session.variant.name
        return self._session.edit(step, lambda s: people_edits.move_people(s, places, variant=variant), merge=merge)

    def nudge(self, dx: float, dy: float) -> None:
        """Move the selected people by scene units; a run of it is one step."""
        people, _ = self._selected()
        scene = self._canvas.picture.scene
        if people:
            spots = {one: tuple(scene.places[scene.index[one]] + (dx, dy)) for one in people}
            self.move(spots, f"Move {names(people, self._session.variant)}", merge="nudge " + " ".join(people))

    # Arrows

    def draw_arrow(self, listener: str, source: str) -> bool:
        """Let `listener` hear `source`."""
        variant = self._session.variant
        if listener == source:
            return False
        if (listener, source) in self._canvas.picture.scene.arrow_index:
            self._session.select(arrows=[(listener, source)])
            self._session.said.emit("This arrow is there already: type its points")
            return True
        done = self._session.edit(
            f"{names([listener], variant)} listens to {names([source], variant)}",
            lambda s: arrow_edits.add_arrow(s, listener, source, variant=variant.name),
        )
        if done:
            self._session.select(arrows=[(listener, source)])
        return done

    def turn_round(self) -> None:
        """Turn the selected arrows round."""
        _, pairs = self._selected()
        if not pairs:
            return
        variant = self._session.variant.name
        step = "Turn an arrow round" if len(pairs) == 1 else f"Turn {len(pairs)} arrows round"
        if self._session.edit(step, lambda s: arrow_edits.turn_arrows(s, pairs, variant=variant)):
            self._session.select(arrows=[(source, listener) for listener, source in pairs])

    # Clipboard

    def copy(self) -> bool:
        """Put the selected people and the arrows among them on the clipboard."""
        people, _ = self._selected()
        if not people:
            return False
        QGuiApplication.clipboard().setMimeData(clipboard.to_mime(self._clip(people)))
        return True

    def cut(self) -> None:
        """Copy, then remove."""
        people, _ = self._selected()
        if not self._canvas.choosing.takes_clicks and self.copy():
            variant = self._session.variant
            step = f"Cut {names(people, variant)}"
            self._session.edit(step, lambda s: people_edits.remove_people(s, people, variant=variant.name))

    def paste(self) -> None:
        """Add the people on the clipboard, a little beside where they were copied or on free ground."""
        data = QGuiApplication.clipboard().mimeData()
        try:
            clip = clipboard.from_mime(data)
        except DeliberateError as error:
            self._session.refused.emit(str(error))
            return
        self._insert(clip, f"Paste {count(len(clip.people), 'person', 'people')}")

    def duplicate(self) -> None:
        """Add copies of the selected people."""
        people, _ = self._selected()
        if people:
            self._insert(self._clip(people), f"Duplicate {names(people, self._session.variant)}")

    def _clip(self, people: list[str]) -> clips.Clip:
        """The selected people with the places they have on screen, also those that the program gave."""
        scene = self._canvas.picture.scene
        clip = clips.extract(self._session.variant, people)
        places = {person.id: scene.places[scene.index[person.id]] for person in clip.people}
        placed = tuple(
            replace(person, x=float(places[person.id][0]), y=float(places[person.id][1])) for person in clip.people
        )
        clip = replace(clip, people=placed)
        # Ids are made from names, and what is on the clipboard can be pasted anywhere.
        return clips.with_ids(clip, {one.id: one.shown_name for one in placed}) if self._session.codes_shown else clip

    def _insert(self, clip: clips.Clip, step: str) -> None:
        session, before = self._session, self._canvas.picture.scene
        offset = self._free_offset(clip, before.places)
        if session.edit(step, lambda s: clips.paste(s, clip, offset, variant=session.variant.name)):
            newcomers = self._canvas.picture.scene.ids[len(before.ids) :]
            session.select(newcomers)

    def _free_offset(self, clip: clips.Clip, taken: Floats) -> tuple[float, float]:
        """The first step down to the right at which nobody pasted would stand on somebody."""
        own = np.array([(p.x, p.y) for p in clip.people if p.x is not None and p.y is not None]).reshape(-1, 2)
        step = SHIFT * self._canvas.picture.scene.radius / 36.0
        shift = step
        while len(own) and len(taken) and shift < 40 * step:
            between = own[:, None] + shift - taken[None]
            if np.hypot(between[..., 0], between[..., 1]).min() > step:
                break
            shift += step
        return shift, shift

    # Arranging

    def arrange(self, kind: str) -> bool:
        """Place everybody anew in one step."""
        scene, variant = self._canvas.picture.scene, self._session.variant
        total = len(scene.ids)
        if total == 0:
            return False
        spacing = arrange.SPACING * scene.radius / 36.0
        tables = self._tables()
        if kind == "tables" and not tables:
            self._session.refused.emit("Nobody sits at tables in this round: go to a stage at tables first")
            return False
        match kind:
            case "circle":
                places = arrange.circle(total, spacing)
            case "groups":
                places = arrange.by_group(self._groups(), total, spacing)
            case "hearing":
                places = arrange.by_hearing(scene.listener, scene.source, total, spacing)
            case "grid":
                places = arrange.grid(total, spacing)
            case "tables":
                places = arrange.by_group(tables, total, spacing, largest_first=False)
            case _:
                raise ValueError(kind)
        spots = {one: (round(float(x), 1), round(float(y), 1)) for one, (x, y) in zip(scene.ids, places, strict=True)}
        return self._session.edit(ARRANGED[kind], lambda s: people_edits.move_people(s, spots, variant=variant.name))

    def _groups(self) -> list[list[int]]:
        """Closed groups by index; until they are computed, those between whom there is no arrow."""
        index, rehearsal = self._canvas.picture.scene.index, self._session.rehearsal
        if rehearsal is None:
            return [[index[one] for one in group] for group in linked_groups(self._session.variant)]
        return [[index[one] for one in group.people] for group in rehearsal.closed_groups if not group.anchored]

    def _tables(self) -> list[list[int]]:
        """The tables of the stage that is shown, by index; none where it is not at tables."""
        index = self._canvas.picture.scene.index
        stage = self._session.variant.plan.stages[self._canvas.follow.stage()]
        return [[index[one] for one in table] for table in stage.tables] if stage.setting == "tables" else []

    # The context menu

    def show_menu(self, at: QPoint | None = None) -> None:
        """The actions for what is selected."""
        menu = self.menu()
        menu.popup(QCursor.pos() if at is None else at)

    def menu(self) -> QMenu:
        """The context menu for the present selection."""
        canvas = self._canvas
        people, pairs = self._selected()
        menu = QMenu(canvas)
        menu.aboutToHide.connect(menu.deleteLater)
        if len(people) == 1:
            self._entry(menu, "Rename", canvas.rename_selected, "F2")
            self._entry(menu, "Draw an arrow from here", canvas.keys.begin_arrow, "A")
        if pairs:
            self._entry(menu, "Turn round", canvas.turn_round, "R")
        if people:
            self._entry(menu, "Cut", canvas.cut, "Ctrl+X")
            self._entry(menu, "Copy", canvas.copy, "Ctrl+C")
            self._entry(menu, "Duplicate", canvas.duplicate, "Ctrl+D")
        if people or pairs:
            self._entry(menu, "Remove", canvas.delete_selected, "Del")
            menu.addSeparator()
        else:
            self._entry(menu, "Add a person", canvas.add_person)
        self._entry(menu, "Paste", canvas.paste, "Ctrl+V")
        self._entry(menu, "Select all", canvas.select_all, "Ctrl+A")
        self._entry(menu, "Fit everybody in", canvas.fit)
        return menu

    def _entry(self, menu: QMenu, text: str, act: object, keys: str = "") -> None:
        action = QAction(f"{text}\t{keys}" if keys else text, menu)
        action.triggered.connect(act)
        menu.addAction(action)

    def _selected(self) -> tuple[list[str], list[tuple[str, str]]]:
        """Selected people in the order of the variant, and selected arrows."""
        selection, scene = self._session.selection, self._canvas.picture.scene
        people = sorted((one for one in selection.people if one in scene.index), key=scene.index.__getitem__)
        return people, sorted(pair for pair in selection.arrows if pair in scene.arrow_index)
