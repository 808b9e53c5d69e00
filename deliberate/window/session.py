"""The one place that holds the open meeting: its value, its history, what is shown, selected and lit up.

Widgets read from here, hand edits back through `edit`, and listen. No widget changes another. Signals state facts;
each says which part of the picture to read again.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QObject, Signal

from deliberate.errors import DeliberateError
from deliberate.rehearsal.results import Finding, Rehearsal
from deliberate.scenario.codes import NO_CODES, Coding, coded, decoded
from deliberate.scenario.values import Question, Scenario, Variant
from deliberate.window.doubting import Doubting
from deliberate.window.engine import Ask, Engine
from deliberate.window.history import History, Moment
from deliberate.window.player import Player

Pair = tuple[str, str]  # (listener, source)
WITH_NAMES = "a step taken with names"  # what a step is called whose words may hold names while codes are shown


@dataclass(frozen=True)
class Selection:
    """Ids of the selected people and (listener, source) of the selected arrows."""

    people: frozenset[str] = frozenset()
    arrows: frozenset[Pair] = frozenset()

    def __bool__(self) -> bool:
        return bool(self.people or self.arrows)


@dataclass(frozen=True)
class Light:
    """People and (listener, source) arrows to light up where there is no finding that has them."""

    people: tuple[str, ...] = ()
    arrows: tuple[Pair, ...] = ()
    groups: tuple[tuple[str, ...], ...] = ()
    kind: str = ""  # a finding's says what is written on its groups


class Session(QObject):
    """The open meeting as the window sees it."""

    scenario_changed = Signal()  # the meeting, the shown variant or the shown question is another value
    rehearsal_changed = Signal()  # `rehearsal` is new, or None while a crowd is being computed
    findings_changed = Signal()
    selection_changed = Signal()
    lit_changed = Signal()
    file_changed = Signal()  # path, modified mark, undo and redo names
    codes_changed = Signal()  # codes stand for names from now on, or no longer
    said = Signal(str)  # a sentence for the status line
    refused = Signal(str)  # why an edit could not be done

    def __init__(self, scenario: Scenario, path: Path | None = None, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.player = Player(self)
        self.engine = Engine(self)
        self.engine.rehearsed.connect(self._take_rehearsal)
        self.engine.found.connect(self._take_findings)
        self.engine.failed.connect(self._take_failure)
        self.path = path
        self.opened = 0  # how many meetings have been opened in the place of the first one
        self.selection = Selection()
        self.lit: Finding | Light | None = None
        self._codes_shown = False
        self._codes: Mapping[str, str] = NO_CODES  # by person id; kept as long as the meeting is open
        self._coding: Coding | None = None  # of the meeting as it is now
        self._history = History(scenario, scenario.variants[0].name)
        self._question = scenario.questions[0].id
        self._asked: Ask | None = None
        self.rehearsal: Rehearsal | None = None
        self.findings: tuple[Finding, ...] = ()
        self.player.set_last(self.variant.plan.rounds)
        self.doubting = Doubting(self)

    # What is shown

    @property
    def meeting(self) -> Scenario:
        """The meeting as it is saved, with names whatever is shown. Only for files: what is shown is `scenario`."""
        return self._history.now.scenario

    @property
    def scenario(self) -> Scenario:
        """The meeting on screen, with codes in place of names while codes are shown."""
        return self._present_coding().shown if self._codes_shown else self.meeting

    @property
    def variant(self) -> Variant:
        """The variant on screen."""
        return self.scenario.variants[self.place]

    @property
    def place(self) -> int:
        """Which of the meeting's variants is on screen, from 0."""
        name = self._history.now.variant
        return next((place for place, one in enumerate(self.meeting.variants) if one.name == name), 0)

    @property
    def codes_shown(self) -> bool:
        """Whether codes stand for names."""
        return self._codes_shown

    @property
    def question(self) -> Question:
        """The question on screen."""
        return next((q for q in self.scenario.questions if q.id == self._question), self.scenario.questions[0])

    @property
    def modified(self) -> bool:
        """Whether there is something to save."""
        return self._history.modified

    @property
    def undo_step(self) -> str | None:
        """What undo would take back."""
        return self._named(self._history.undo_moment)

    @property
    def redo_step(self) -> str | None:
        """What redo would do again."""
        return self._named(self._history.redo_moment)

    def starts(self) -> NDArray[np.float64]:
        """Starting beliefs of the shown variant on the shown question, shape (people,)."""
        question = self.question
        return np.array([person.beliefs.get(question.id, question.middle) for person in self.variant.people])

    def beliefs_at(self, position: float) -> NDArray[np.float64]:
        """Beliefs at `position` rounds, mixed between the round left and the one approached, shape (people,)."""
        if self.rehearsal is None:
            return self.starts()
        rounds = self.rehearsal.rounds
        before = min(int(position + 1e-9), len(rounds) - 1)
        after = min(before + 1, len(rounds) - 1)
        share = max(0.0, position - before)
        return rounds[before] + (rounds[after] - rounds[before]) * share

    def stage_at(self, position: float) -> int:
        """Index of the stage that the round after `position` belongs to (the last one at the end)."""
        end = 0
        for index, stage in enumerate(self.variant.plan.stages):
            end += stage.rounds
            if position < end - 1e-9:
                return index
        return len(self.variant.plan.stages) - 1

    # Edits

    def edit(self, step: str, change: Callable[[Scenario], Scenario], *, merge: str = "", show: str = "") -> bool:
        """Replace the meeting by `change(meeting)`, as one undoable `step` named in words ("Move Amina").

        Consecutive edits with the same non-empty `merge` are one step. `show` names the variant to show then.
        Returns False, and says why through `refused`, where the edit cannot be done.
        """
        try:
            changed = change(self.scenario)
            meeting = decoded(self._present_coding(), changed) if self._codes_shown else changed
        except DeliberateError as error:
            self.refused.emit(self._present_coding().message(str(error)) if self._codes_shown else str(error))
            return False
        variant = show or self._still_there(changed)
        if meeting is self.meeting and variant == self.variant.name:
            return True
        place = next(place for place, one in enumerate(changed.variants) if one.name == variant)
        self._push(step, meeting, meeting.variants[place].name, merge)
        return True

    def replace(self, step: str, meeting: Scenario) -> None:
        """Put another state of the same meeting, with names, in place of this one, as an undoable step."""
        names = [variant.name for variant in meeting.variants]
        shown = self._history.now.variant
        self._push(step, meeting, shown if shown in names else names[0])

    def undo(self) -> None:
        """Take the last step back."""
        step = self.undo_step
        if self._history.undo():
            self._show_again()
            self.said.emit(f"Undone: {step}")

    def redo(self) -> None:
        """Do the step again that was taken back."""
        step = self.redo_step
        if self._history.redo():
            self._show_again()
            self.said.emit(f"Done again: {step}")

    def seal_step(self) -> None:
        """End a run of merged edits: the next one is a step of its own."""
        self._history.seal()

    # What to show

    def open(self, scenario: Scenario, path: Path | None, *, saved: bool = True) -> None:
        """Put another meeting in place of this one, with a fresh history."""
        self.player.pause()
        self.select()
        self.light(None)
        self._history = History(scenario, scenario.variants[0].name)
        if not saved:
            self._history.mark_saved(None)
        self._question = scenario.questions[0].id
        self.path = path
        self.opened += 1
        self._codes, self._coding = NO_CODES, None
        self._show_again()
        self.player.seek(0)

    def mark_saved(self, path: Path) -> None:
        """The meeting on screen is what `path` holds now."""
        self.path = path
        self._history.mark_saved(self.meeting)
        self.file_changed.emit()

    def mark_unsaved(self) -> None:
        """The meeting on screen is nowhere on disk any more: its file was changed or removed by others."""
        self._history.mark_saved(None)
        self.file_changed.emit()

    def show_variant(self, name: str) -> None:
        """Show another variant of the meeting; not an edit."""
        if name != self.variant.name:
            place = next(place for place, variant in enumerate(self.scenario.variants) if variant.name == name)
            self._history.show(self.meeting.variants[place].name)
            self._show_again()

    def show_question(self, question: str) -> None:
        """Show another question of the meeting; not an edit."""
        if question != self.question.id:
            self._question = question
            self._show_again()

    def show_codes(self, shown: bool) -> None:
        """Let codes stand for names in everything that is shown, copied or exported, or names again; not an edit."""
        if shown == self._codes_shown:
            return
        self._codes_shown = shown
        self.rehearsal, self.findings = None, ()  # a crowd's would stay until the next ones are there
        self.codes_changed.emit()
        self.findings_changed.emit()
        self._show_again()

    def select(self, people: Iterable[str] = (), arrows: Iterable[Pair] = ()) -> None:
        """Select these people and arrows, and nothing else."""
        selection = Selection(frozenset(people), frozenset(arrows))
        if selection != self.selection:
            self.selection = selection
            self._history.seal()
            self.selection_changed.emit()

    def light(self, finding: Finding | Light | None) -> None:
        """Light up the people and arrows of a finding on the canvas and the chart, or nothing."""
        if finding is not self.lit:
            self.lit = finding
            self.lit_changed.emit()

    def rehearse(self) -> None:
        """Have the shown variant and question computed."""
        self._asked = Ask(self.scenario, self.variant, self.question.id)
        self.engine.ask(self._asked)

    def close(self) -> None:
        """Stop clock and worker."""
        self.player.seek(0)
        self.player.pause()
        self.engine.stop()
        self.doubting.close()

    def _push(self, step: str, meeting: Scenario, variant: str, merge: str = "") -> None:
        known = len(self._codes)
        if self._codes_shown:
            step = self._present_coding().text(step)
        self._history.push(step, meeting, variant, merge, coded=self._codes_shown)
        if self._codes_shown:
            # Whoever is new was typed with a name, and the step is told with it.
            self._history.call(self._present_coding().text(step))
        self._show_again()
        if self._codes_shown and len(self._codes) > known:
            self.said.emit("The name is kept with the meeting and not shown while codes are")

    def _present_coding(self) -> Coding:
        if self._coding is None or self._coding.real is not self.meeting:
            self._coding = coded(self.meeting, self._codes)
            self._codes = self._coding.codes
        return self._coding

    def _named(self, moment: Moment | None) -> str | None:
        if moment is None:
            return None
        return moment.step if moment.coded or not self._codes_shown else WITH_NAMES

    def _still_there(self, scenario: Scenario) -> str:
        """The shown variant's name in `scenario`; by its place when it was renamed or removed."""
        shown, before = self.variant.name, self.scenario.variants
        names = [variant.name for variant in scenario.variants]
        if shown in names:
            return shown
        place = next(i for i, variant in enumerate(before) if variant.name == shown)
        return names[min(place, len(names) - 1)]

    def _show_again(self) -> None:
        variant = self.variant
        people = {person.id for person in variant.people}
        pairs = {(arrow.listener, arrow.source) for arrow in variant.arrows} if self.selection.arrows else set()
        kept = Selection(self.selection.people & people, self.selection.arrows & pairs)
        lost_selection, self.selection = kept != self.selection, kept
        if self.rehearsal is not None and not self._fits(self.rehearsal):
            self.rehearsal = None
            self.findings = ()
        self.player.set_last(variant.plan.rounds)
        self.light(None)
        self.scenario_changed.emit()
        if lost_selection:
            self.selection_changed.emit()
        self.rehearse()
        self.file_changed.emit()

    def _fits(self, rehearsal: Rehearsal) -> bool:
        """Whether an older rehearsal may stay on screen until the new one is there: same people and question."""
        ids = tuple(person.id for person in self.variant.people)
        return (rehearsal.variant, rehearsal.question, rehearsal.people) == (self.variant.name, self.question.id, ids)

    def _take_rehearsal(self, ask: Ask, rehearsal: Rehearsal) -> None:
        if ask is self._asked:
            self.rehearsal = rehearsal
            self.rehearsal_changed.emit()

    def _take_findings(self, ask: Ask, findings: tuple[Finding, ...]) -> None:
        if ask is self._asked:
            self.findings = findings
            self.findings_changed.emit()

    def _take_failure(self, ask: Ask, reason: str) -> None:
        if ask is self._asked:
            self.rehearsal, self.findings = None, ()
            self.rehearsal_changed.emit()
            self.findings_changed.emit()
            self.refused.emit(reason)
