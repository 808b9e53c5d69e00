"""Changes of process that facilitators use, as candidates for one aim; each is recomputed before it is told."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from itertools import islice, permutations

import numpy as np

from deliberate.rehearsal.findings.sketch import Indices
from deliberate.rehearsal.remedies.aims import Aim
from deliberate.rehearsal.remedies.grounds import POINTS, Grounds
from deliberate.rehearsal.results import (
    EndInPlenary,
    GoBetween,
    GoRounds,
    Introduce,
    Introductions,
    JointRound,
    KeepOwnView,
    MixedTables,
    PairTalks,
    ReorderStages,
    SpeakFirst,
    Suggestion,
)
from deliberate.scenario.edits import dealt
from deliberate.scenario.edits.points import HUNDRED

KEPT_POINTS = 20.0  # of 100, for the own view
ALL_TALK_PEOPLE = 40  # beyond, nobody lets each one speak to all
TABLE_FOR = 5  # people at a mixed table, about
FEWEST_AT_TABLES = 6
MOST_NEW_POINTS = 40.0  # of 100, for all new voices of one listener together
SHARED_POINTS = 20.0  # of 100, for all those outside together
MOST_ORDERS = 12
GO_BETWEEN_HEARS = 12
OWN_IN_GO_ROUND = 60.0  # of 100 at most
CARRYING = 1.5  # times an equal share of influence
LITTLE_HEARD = 0.5  # times the points that others are given on average


def candidates(aim: Aim, grounds: Grounds) -> tuple[Suggestion, ...]:
    """What is worth trying for the aim, without repetition."""
    match aim:
        case "common-view":
            own = [*joining(grounds), *_pulled(grounds, grounds.pull_on_spread())]
        case "end-swing":
            own = _against_swings(grounds)
        case "sooner":
            own = [*_pulled(grounds, grounds.pull_on_pace()), *_pulled(grounds, grounds.pull_on_spread())]
        case "more-voices":
            own = [*_pulled(grounds, grounds.pull_on_influence()), *_hearing_outside(grounds)]
        case "outside-heard":
            own = _hearing_outside(grounds)
        case "less-spread":
            own = [*joining(grounds), *_pulled(grounds, grounds.pull_on_spread())]
    return tuple(dict.fromkeys([*own, *_arranged(grounds)]))


# Arrows


def joining(grounds: Grounds) -> Iterator[Suggestion]:
    """The fewest arrows that leave one closed group, k - 1 for k groups; and the fewest that leave everybody's start
    in it, a ring of k (Eswaran and Tarjan 1976). Both between the most influential who would hear each other."""
    groups = [group for group in grounds.sketch.closed if (grounds.sketch.firmness[group] < 1).all()]
    if len(groups) < 2:
        return
    root = max(range(len(groups)), key=lambda at: (_settles(grounds, groups[at]), len(groups[at]), -at))
    others = [group for at, group in enumerate(groups) if at != root]
    star = [_link(grounds, group, groups[root]) for group in others]
    ring = [_link(grounds, group, groups[at - 1]) for at, group in enumerate(groups)]
    for links in (star, ring):
        if None not in links:
            yield introduced(grounds.sketch.ids(link) for link in links)


def introduced(arrows: Iterable[tuple[str, ...]]) -> Introduce | Introductions:
    """One introduction, or several together."""
    pairs = tuple((listener, source) for listener, source in arrows)
    return Introduce(*pairs[0], POINTS) if len(pairs) == 1 else Introductions(pairs, POINTS)


def _settles(grounds: Grounds, group: Indices) -> bool:
    first = grounds.sketch.ids(group[:1])[0]
    return all(one.period == 1 for one in grounds.sketch.rehearsal.closed_groups if first in one.people)


def _link(grounds: Grounds, listeners: Indices, sources: Indices) -> tuple[int, int] | None:
    """An arrow from one to the other group that would be heard for ever, between the most influential."""
    for listener in grounds.leading(listeners):
        for source in grounds.leading(sources):
            if grounds.audible_for_ever[listener, source]:
                return listener, source
    return None


def _pulled(grounds: Grounds, pull: np.ndarray | None) -> Iterator[Suggestion]:
    """Changes within rows that closed forms point to: an introduction, the same both ways, several, points moved."""
    arrows = list(grounds.introductions(pull))
    yield from arrows
    if arrows:
        first = arrows[0]
        yield Introductions(((first.listener, first.source), (first.source, first.listener)), POINTS)
    if len(arrows) > 1:
        yield Introductions(tuple((one.listener, one.source) for one in arrows), POINTS)
    yield from grounds.moves(pull)


def _hearing_outside(grounds: Grounds) -> Iterator[Suggestion]:
    """Those in the closed groups hear those outside: one hears one, one hears all, all hear all."""
    sketch = grounds.sketch
    inside = grounds.leading(np.concatenate(sketch.closed)) if sketch.closed else []
    inside = [one for one in inside if sketch.firmness[one] < 1]
    outside = grounds.leading(np.setdiff1d(sketch.here, inside))
    if not inside or not outside or sketch.question.hearing_range is not None:
        return
    for listener in inside[:2]:
        yield from (Introduce(*sketch.ids([listener, source]), POINTS) for source in outside[:2])
    each = round(SHARED_POINTS / len(outside), 2)
    for listeners in (inside[:1], inside):
        arrows = tuple(sketch.ids([one, other]) for one in listeners for other in outside)
        yield Introductions(arrows, max(each, 0.01))


def _against_swings(grounds: Grounds) -> Iterator[Suggestion]:
    """Any own view in a group ends its swing, and so does somebody who also hears a colleague of the own part."""
    sketch = grounds.sketch
    place = sketch.assembly.place
    swinging = [group for group in sketch.rehearsal.closed_groups if group.period > 1]
    led = [grounds.leading([place[person] for person in group.people]) for group in swinging]
    if not swinging or not all(led):
        return
    everybody = [one for people in led for one in people]
    for people in ([people[0] for people in led], everybody):
        yield KeepOwnView(sketch.ids(sorted(people)), KEPT_POINTS)
    arrows = []
    for group, people in zip(swinging, led, strict=True):
        phase = {place[person]: at for person, at in zip(group.people, group.phases, strict=True)}
        mates = ((a, b) for a in people for b in people if a != b and phase[a] == phase[b])
        arrows.append(next((pair for pair in mates if grounds.audible_for_ever[pair]), None))
    if None not in arrows:
        yield introduced(sketch.ids(pair) for pair in arrows)


# Stages and rooms


def _arranged(grounds: Grounds) -> Iterator[Suggestion]:
    """What is arranged for all: pairs, tables, a go-between, go-rounds, who speaks first, the order of stages."""
    sketch = grounds.sketch
    if len(sketch.here) < 2:
        return
    yield from _pairs(grounds)
    yield from _tables(grounds)
    yield from _go_between(grounds)
    yield from _heard_first(grounds)
    if len(sketch.here) <= ALL_TALK_PEOPLE:
        yield JointRound(1)
        yield GoRounds(_usual_own_points(grounds))
    stages = sketch.variant.plan.stages
    if any(stage.setting != "plenary" for stage in stages[-1:]):
        yield EndInPlenary(1)
    orders = islice(permutations(range(len(stages))), 1, MOST_ORDERS + 1) if len(stages) > 1 else ()
    yield from (ReorderStages(order) for order in orders)


def _pairs(grounds: Grounds) -> Iterator[PairTalks]:
    """Everybody with somebody from another side; and the one who carries most with each of the others."""
    sketch = grounds.sketch
    rounds = max(1, min(2, sketch.plan_rounds // 3))
    in_turn = np.concatenate(grounds.sides).tolist()
    half = len(in_turn) // 2
    yield PairTalks(_named(grounds, zip(in_turn[:half], in_turn[-half:], strict=True)), rounds, POINTS)
    top = _carrying(grounds)
    if top is not None and len(sketch.here) <= ALL_TALK_PEOPLE:
        others = [one for one in sketch.here.tolist() if one != top]
        points = min(POINTS, round(MOST_NEW_POINTS / len(others), 1))
        yield PairTalks(_named(grounds, ((top, one) for one in others)), rounds, points)


def _named(grounds: Grounds, pairs: Iterable[tuple[int, int]]) -> tuple[tuple[str, str], ...]:
    return tuple(grounds.sketch.ids(pair) for pair in pairs)


def _carrying(grounds: Grounds) -> int | None:
    """The one whose start counts for much more than an equal share; None where nobody's does."""
    sketch = grounds.sketch
    top = int(grounds.by_influence[0])
    return top if sketch.influence[top] > CARRYING / len(sketch.here) else None


def _tables(grounds: Grounds) -> Iterator[MixedTables]:
    """Tables to which the people of each side are dealt out in turn."""
    sketch = grounds.sketch
    if len(sketch.here) < FEWEST_AT_TABLES:
        return
    in_turn = np.concatenate(grounds.sides).tolist()
    count = max(2, round(len(in_turn) / TABLE_FOR))
    place = sketch.assembly.place
    tables = dealt(sketch.ids(in_turn), count)
    seated = [tuple(place[person] for person in table) for table in tables]
    rounds = max(1, min(3, sketch.plan_rounds // 2))
    yield MixedTables(tables, rounds, _new_points(grounds, seated))


def _new_points(grounds: Grounds, circles: Iterable[tuple[int, ...]]) -> float:
    """Points for each new voice, so that nobody gives new voices more than MOST_NEW_POINTS in all; 0 for none new."""
    new = np.zeros(len(grounds.weights), dtype=int)
    for circle in circles:
        for one in circle:
            new[one] += sum(other != one and grounds.weights[one, other] == 0 for other in circle)
    most = int(new.max(initial=0))
    return min(POINTS, round(MOST_NEW_POINTS / most, 1)) if most else 0.0


def _go_between(grounds: Grounds) -> Iterator[GoBetween]:
    """Somebody who hears all, or in large groups the most influential of each side."""
    sketch = grounds.sketch
    here = sketch.here
    if len(here) > GO_BETWEEN_HEARS:
        each = max(1, GO_BETWEEN_HEARS // len(grounds.sides))
        chosen = [one for side in grounds.sides for one in grounds.leading(side)[:each]]
        here = np.sort(np.array(chosen))
    yield GoBetween(sketch.ids(here), POINTS)


def _heard_first(grounds: Grounds) -> Iterator[SpeakFirst]:
    """All but the one who carries most; and first of all those outside, or who are given much less than others."""
    sketch = grounds.sketch
    here = sketch.here
    rounds = max(1, min(3, sketch.plan_rounds // 2))
    top = _carrying(grounds)
    if top is not None:
        yield SpeakFirst(sketch.ids(here[here != top]), rounds, 0.0)
    given = (grounds.weights.sum(axis=0) - grounds.weights.diagonal())[here]
    outside = np.setdiff1d(here, np.concatenate(sketch.closed)) if sketch.closed else here[:0]
    first = outside if len(outside) else here[given < given.mean() * LITTLE_HEARD]
    if 0 < len(first) < len(here):
        points = min(POINTS, round(SHARED_POINTS / len(first), 1))
        yield SpeakFirst(sketch.ids(np.sort(first)), rounds, max(points, 0.1))


def _usual_own_points(grounds: Grounds) -> float:
    """What people keep for the own view on average, to the next five, and no less than an equal share."""
    here = grounds.sketch.here
    usual = 5.0 * round(HUNDRED * float(grounds.weights.diagonal()[here].mean()) / 5)
    return max(min(usual, OWN_IN_GO_ROUND), float(math.ceil(HUNDRED / len(here))))
