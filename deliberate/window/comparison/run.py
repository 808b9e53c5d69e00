"""Rehearses the variants that are compared: at once where they are few and small, otherwise on another thread."""

from __future__ import annotations

import importlib
from dataclasses import dataclass

from PySide6.QtCore import QObject, Signal

from deliberate.rehearsal.results import Rehearsal
from deliberate.scenario.values import Ballot, Question, Scenario, Variant
from deliberate.window.engine import AT_ONCE_PEOPLE
from deliberate.window.errand import Errand, Progress, Stopped
from deliberate.window.session import Session


@dataclass(frozen=True, eq=False)
class Known:
    """A rehearsal, and what it is one of. These are values: another object is another question."""

    variant: Variant
    question: Question
    ballot: Ballot
    rehearsal: Rehearsal


class Comparison(QObject):
    """Keeps rehearsals of the chosen variants of the session's meeting, on the question shown."""

    changed = Signal()  # variants, choice or rehearsals are others
    refused = Signal(str)

    def __init__(self, session: Session, parent: QObject) -> None:
        super().__init__(parent)
        self._session = session
        self._left_out: set[int] = set()  # places of variants that were taken off
        self._known: tuple[Known, ...] = ()
        self._count = len(session.scenario.variants)
        self._closed = False
        self._errand = Errand(self)
        self._errand.done.connect(self._take)
        self._errand.failed.connect(self.refused)
        session.scenario_changed.connect(self._follow)
        self._work()

    @property
    def variants(self) -> tuple[Variant, ...]:
        """All of the meeting's, in their order."""
        return self._session.scenario.variants

    def chosen(self, place: int) -> bool:
        """Whether the variant at `place` is compared."""
        return place not in self._left_out

    def choose(self, place: int, chosen: bool) -> None:
        """Compare the variant at `place`, or leave it out."""
        if chosen == self.chosen(place):
            return
        self._left_out ^= {place}
        self._work()

    def rehearsal(self, place: int) -> Rehearsal | None:
        """Of the variant at `place`; None while it is worked out, or where it is left out."""
        return self._rehearsal_of(self.variants[place]) if self.chosen(place) else None

    def close(self) -> None:
        """Follow the meeting no longer; stop and wait for the worker."""
        self._closed = True
        self._errand.close()

    def _follow(self) -> None:
        if self._closed:
            return
        if len(self.variants) != self._count:  # places mean others now
            self._count = len(self.variants)
            self._left_out.clear()
        self._work()

    def _rehearsal_of(self, variant: Variant) -> Rehearsal | None:
        scenario, question = self._session.scenario, self._session.question
        for known in self._known:
            if known.variant is variant and known.question is question and known.ballot is scenario.ballot:
                return known.rehearsal
        return None

    def _work(self) -> None:
        scenario, question = self._session.scenario, self._session.question
        chosen = [variant for place, variant in enumerate(scenario.variants) if self.chosen(place)]
        missing = [variant for variant in chosen if self._rehearsal_of(variant) is None]
        people = sum(len(variant.people) for variant in missing)
        if not missing:
            self._errand.stop()
        elif self._session.engine.ready and people <= AT_ONCE_PEOPLE:
            self._errand.stop()
            self._keep(_rehearsed(scenario, question, missing))
        else:
            self._errand.start(lambda progress, stopped: _in_turn(scenario, question, missing, progress, stopped))
        self.changed.emit()

    def _take(self, known: tuple[Known, ...]) -> None:
        self._keep(known)
        self.changed.emit()

    def _keep(self, known: tuple[Known, ...]) -> None:
        variants = self.variants
        here = tuple(one for one in self._known if any(one.variant is variant for variant in variants))
        self._known = here + known


def _rehearsed(scenario: Scenario, question: Question, variants: list[Variant]) -> tuple[Known, ...]:
    return _in_turn(scenario, question, variants, lambda _: None, lambda: False)


def _in_turn(
    scenario: Scenario, question: Question, variants: list[Variant], progress: Progress, stopped: Stopped
) -> tuple[Known, ...]:
    rehearse = importlib.import_module("deliberate.rehearsal.rehearse").rehearse
    found = []
    for place, variant in enumerate(variants):
        if stopped():
            break
        found.append(Known(variant, question, scenario.ballot, rehearse(scenario, variant.name, question.id)))
        progress((place + 1) / len(variants))
    return tuple(found)
