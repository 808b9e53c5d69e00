"""The fewest arrows that join closed groups, against all smaller sets tried out."""

from __future__ import annotations

from itertools import combinations

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st
from meetings import IDS, meeting

from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.remedies import aims_here, remedies
from deliberate.rehearsal.remedies.candidates import joining
from deliberate.rehearsal.remedies.figures import sketch_for
from deliberate.rehearsal.remedies.grounds import Grounds
from deliberate.rehearsal.results import Introduce, Introductions
from deliberate.rehearsal.suggestions import apply
from deliberate.scenario.values import Scenario

NOW = "As it stands"


def reach(arrows: np.ndarray) -> np.ndarray:
    """(n, n) who hears whom, directly or through others, the own view included."""
    together = arrows | np.eye(len(arrows), dtype=bool)
    for _ in range(len(arrows)):
        together = together | (together.astype(int) @ together.astype(int) > 0)
    return together


def closed_groups(arrows: np.ndarray) -> set[frozenset[int]]:
    """Sets of people who hear only each other, by the definition: whom a member hears also hears her."""
    hears = reach(arrows)
    people = range(len(arrows))
    return {
        frozenset(other for other in people if hears[one, other])
        for one in people
        if all(hears[other, one] for other in people if hears[one, other])
    }


@st.composite
def split_networks(draw: st.DrawFn) -> tuple[np.ndarray, Scenario]:
    """Up to five people who fall into several closed groups; everybody hears herself and hears or is heard."""
    size = draw(st.integers(3, 5))
    picked = draw(st.lists(st.booleans(), min_size=size * size, max_size=size * size))
    thinned = draw(st.lists(st.booleans(), min_size=size * size, max_size=size * size))
    arrows = np.array(picked).reshape(size, size) & np.array(thinned).reshape(size, size)
    np.fill_diagonal(arrows, False)
    for one in np.flatnonzero(~(arrows.any(axis=0) | arrows.any(axis=1))):
        arrows[one, one - 1] = True
    points = np.where(arrows, 10, 0) + 40 * np.eye(size)
    return arrows, meeting(points.tolist(), list(range(0, 100, 20))[:size])


def with_arrows(arrows: np.ndarray, more: tuple[tuple[int, int], ...]) -> np.ndarray:
    after = arrows.copy()
    for listener, source in more:
        after[listener, source] = True
    return after


def added(suggestion: Introduce | Introductions) -> tuple[tuple[int, int], ...]:
    pairs = (
        suggestion.arrows if isinstance(suggestion, Introductions) else ((suggestion.listener, suggestion.source),)
    )
    return tuple((IDS.index(listener), IDS.index(source)) for listener, source in pairs)


@settings(max_examples=60)
@given(split_networks())
def test_minimal_repairs_are_minimal(network):
    """k closed groups take k - 1 arrows to one, and k where every group's start shall count; fewer never do."""
    arrows, scenario = network
    groups = closed_groups(arrows)
    found = list(joining(Grounds(sketch_for(scenario, NOW, "q"))))
    if len(groups) == 1:
        assert found == []
        return
    star, ring = found
    assert len(added(star)) == len(groups) - 1
    assert len(added(ring)) == len(groups)
    assert len(closed_groups(with_arrows(arrows, added(star)))) == 1
    everybody = frozenset().union(*groups)
    assert next(iter(closed_groups(with_arrows(arrows, added(ring))))) >= everybody
    free = [(a, b) for a in range(len(arrows)) for b in range(len(arrows)) if a != b and not arrows[a, b]]
    for fewer in range(len(groups) - 1):
        for more in combinations(free, fewer):
            assert len(closed_groups(with_arrows(arrows, more))) > 1
    for fewer in range(len(groups)):
        for more in combinations(free, fewer):
            after = closed_groups(with_arrows(arrows, more))
            assert len(after) > 1 or not next(iter(after)) >= everybody


@settings(max_examples=30)
@given(split_networks())
def test_a_minimal_repair_brings_a_common_view(network):
    _, scenario = network
    if "common-view" not in aims_here(scenario):
        return
    kinds = {}
    for remedy in remedies(scenario, None, None, "common-view"):
        kinds.setdefault(type(remedy.suggestion), remedy)
        tried = apply(scenario, NOW, remedy.suggestion)
        assert rehearse(tried, tried.variants[1].name).consensus_from_any_start
    assert Introduce in kinds or Introductions in kinds
