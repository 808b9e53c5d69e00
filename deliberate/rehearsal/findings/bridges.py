"""The few arrows on which the meeting of two or more parts hangs: bridge."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from deliberate.dynamics.process import course
from deliberate.dynamics.turns import turn_of
from deliberate.rehearsal.findings.cuts import FULL_PEOPLE, Matrix, parting
from deliberate.rehearsal.findings.sketch import Indices, Sketch, ending, halves, pairs, points
from deliberate.rehearsal.findings.suggesting import introduction
from deliberate.rehearsal.results import Finding, Floats
from deliberate.rehearsal.words import count, in_words, sentence

FEWEST_ROUNDS = 4.0  # a gap that halves sooner is no matter
MAKES_IT_SLOW = 0.05  # by how much the pace across may differ from that of the whole
NAMED_PEOPLE = 4


def bridge(sketch: Sketch) -> Iterator[Finding]:
    """Parts of one closed group that come together inside much sooner than with each other."""
    halving = sketch.rehearsal.rounds_to_halve
    if sketch.common_view is None or halving is None or halving < FEWEST_ROUNDS or len(sketch.closed) != 1:
        return
    if sketch.firmness[sketch.here].any() or sketch.question.hearing_range is not None:
        return
    shares, rounds_in_turn = _lasting(sketch)
    if shares is None:
        return
    group = sketch.closed[0]
    found = parting(shares[group][:, group], _influence_within(sketch, group))
    if found is None:
        return
    across, inside = found.across * rounds_in_turn, found.inside * rounds_in_turn
    if abs(across - halving) <= MAKES_IT_SLOW * halving:
        yield _told(sketch, [group[part] for part in found.parts], across, inside)


def _lasting(sketch: Sketch) -> tuple[Matrix | None, int]:
    """The shares of what goes on for ever, and how many rounds that has; None where that is too large to build."""
    track = course(sketch.assembly.process)
    if len(track.lasting) == 1 and track.lasting[0].rounds == 1:
        return track.lasting[0].shares.matrix, 1
    if len(track.firmness) > FULL_PEOPLE:
        return None, track.rounds_in_turn
    return turn_of(track.lasting, track.firmness).kept, track.rounds_in_turn


def _influence_within(sketch: Sketch, group: Indices) -> Floats:
    """(k,) influence of a closed group's members in it."""
    people = sketch.ids(group)
    closed = next(one for one in sketch.rehearsal.closed_groups if people[0] in one.influence)
    return np.array([closed.influence[person] for person in people])


def _told(sketch: Sketch, parts: list[Indices], across: float, inside: float) -> Finding:
    part_of = np.full(len(sketch.present), -1)
    for at, part in enumerate(parts):
        part_of[part] = at
    network = sketch.assembly.process.network
    one, other = part_of[network.listener], part_of[network.source]
    bridging = np.flatnonzero(sketch.counts & (one >= 0) & (other >= 0) & (one != other))
    by_size = sorted(parts, key=len)
    return Finding(
        kind="bridge",
        says=_says_bridge(parts, len(bridging), across),
        why=_why_bridge(sketch, parts, bridging, inside),
        people=sketch.ids(np.unique(np.concatenate([network.listener[bridging], network.source[bridging]]))),
        figures={"across": across, "inside": inside, "arrows": len(bridging), "parts": len(parts)},
        groups=tuple(sketch.ids(part) for part in parts),
        arrows=pairs(sketch, bridging),
        suggestion=introduction(sketch, by_size[0], by_size[-1]),
    )


def _says_bridge(parts: list[Indices], arrows: int, across: float) -> str:
    sides = in_words(len(parts), "side", "sides" if len(parts) == 2 else "parts")
    thin = arrows <= 2 * len(parts)
    meet = f"hang together by {count(arrows, 'arrow', 'arrows')} only" if thin else "hear little of each other"
    return sentence(f"{sides} {meet}: the gap between them {halves(across)}.")


def _why_bridge(sketch: Sketch, parts: list[Indices], bridging: Indices, inside: float) -> str:
    """Who hears across, and how soon each side comes together."""
    network = sketch.assembly.process.network
    share = np.asarray(sketch.drawn.matrix[network.listener[bridging], network.source[bridging]]).ravel()
    listeners, places = np.unique(network.listener[bridging], return_inverse=True)
    given = np.bincount(places, share)
    if len(listeners) <= NAMED_PEOPLE:
        low, high = points(given.min()), points(given.max())
        part = low if low == high else f"{low} to {high}"
        across = f"Only {sketch.names(listeners)} hear{ending(len(listeners))} across, with {part} of 100 points"
    else:
        people = sum(len(part) for part in parts)
        across = f"On average people give {points(given.sum() / people)} of 100 points across"
    if len(parts) == 2:
        one, other = (sketch.names(part, 3) for part in parts)
        within = f"among {one}, and among {other}, it {halves(inside)}"
    else:
        within = f"inside each part it {halves(inside)}"
    return f"{across}; {within}."
