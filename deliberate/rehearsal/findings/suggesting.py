"""Simple changes of process that would help, where there is one."""

from __future__ import annotations

from collections.abc import Callable, Iterable

import numpy as np
from msgspec.structs import replace

from deliberate.rehearsal.findings.sketch import Indices, Sketch, sketch_of
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import Introduce, Introductions, JointRound, KeepOwnView, Suggestion
from deliberate.rehearsal.suggestions import change_in_place
from deliberate.scenario.settings import lets_through
from deliberate.scenario.values import Ballot

INTRODUCED_POINTS = 10.0
KEPT_POINTS = 20.0
CANDIDATES = 8  # of the most influential on either side
# A joint round gives 2 of 100 points to each new voice, so there must be room for all of them.
JOINT_PEOPLE = 40


def introduction(sketch: Sketch, listeners: Indices, sources: Indices) -> Introduce | None:
    """An arrow from one of `listeners` to one of `sources`, the most influential first, that is not drawn yet and
    would count for ever; None where there is none or a hearing range decides who is heard."""
    if sketch.question.hearing_range is not None:
        return None
    network = sketch.assembly.process.network
    hearing = listeners[sketch.firmness[listeners] < 1]
    for listener in _by_weight(sketch, hearing)[:CANDIDATES].tolist():
        known = set(network.source[network.listener == listener].tolist())
        for source in _by_weight(sketch, sources)[:CANDIDATES].tolist():
            if source not in known and source != listener and _would_count(sketch, listener, source):
                return Introduce(*sketch.ids([listener, source]), INTRODUCED_POINTS)
    return None


def acquaintance(sketch: Sketch, one_side: Indices, other_side: Indices) -> Introduce | Introductions | None:
    """Somebody of either side who hear each other, so that the starts of both count; one way where only that can be,
    None where nothing can."""
    first = introduction(sketch, one_side, other_side)
    if first is None:
        return None
    hears, heard = (np.array([sketch.assembly.place[one]]) for one in (first.listener, first.source))
    back = introduction(sketch, heard, hears)
    if back is None:
        return first
    return Introductions(((first.listener, first.source), (back.listener, back.source)), INTRODUCED_POINTS)


def own_views(sketch: Sketch, people: Iterable[int]) -> KeepOwnView:
    """A part of the own view kept by all of these."""
    return KeepOwnView(sketch.ids(people), KEPT_POINTS)


def joint_round(sketch: Sketch, better: Callable[[Sketch], bool]) -> JointRound | None:
    """A round in which everybody hears everybody, where that brings together some who do not hear each other and,
    tried out, makes the sketch `better`."""
    many = int(sketch.present.sum())
    if many > JOINT_PEOPLE or sketch.question.hearing_range is not None:
        return None
    process = sketch.assembly.process
    plenary = any(block.heard is None for block in process.blocks)
    everybody_heard = int(sketch.counts.sum()) == many * (many - 1)
    if plenary and everybody_heard:
        return None
    return JointRound(1) if better(tried(sketch, JointRound(1))) else None


def tried(sketch: Sketch, suggestion: Suggestion) -> Sketch:
    """The sketch after the change, which costs a rehearsal."""
    # By itself, because every edit checks the whole scenario.
    alone = replace(sketch.scenario, variants=(sketch.variant,), ballot=Ballot(), polls=())
    changed = change_in_place(alone, sketch.variant.name, suggestion)
    return sketch_of(changed, rehearse(changed, sketch.variant.name, sketch.question.id))


def _by_weight(sketch: Sketch, people: Indices) -> Indices:
    """The people, those first whose start counts most, then those who are given most points."""
    given = np.asarray(sketch.drawn.matrix.sum(axis=0)).ravel()
    return people[np.lexsort((-given[people], -sketch.influence[people]))]


def _would_count(sketch: Sketch, listener: int, source: int) -> bool:
    """Whether an arrow between the two would be heard in a stage that goes on for ever."""
    plan = sketch.variant.plan
    lasting = plan.stages if plan.afterwards == "repeat" else plan.stages[-1:]
    return any(lets_through(stage)(*sketch.ids([listener, source])) for stage in lasting)
