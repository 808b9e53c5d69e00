"""One variant as arrays, ready to paint. Free of Qt.

Made anew when the meeting changes; what an edit did not touch is taken over from the scene before.
"""

from __future__ import annotations

from collections.abc import MutableMapping
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from deliberate.rehearsal.voices import Voices, voices
from deliberate.rehearsal.words import amount, decimals, isolated, number, shown_names
from deliberate.scenario.values import Question, Variant
from deliberate.window.canvas.geometry import bends
from deliberate.window.canvas.places import disc_radius, places

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]
Flags = NDArray[np.bool_]
Pair = tuple[str, str]

NOTHING = 5e-5  # of the scale's width: what moves the mean by less is said to leave it
STRONG = 300  # so many arrows are drawn in full, the strongest
DRAWN = 1000  # and so many in all, the weaker ones thin; the rest only where their people are selected


@dataclass(frozen=True, eq=False)
class Scene:
    """People and arrows of `variant` on `question`; arrays follow the order of the variant."""

    variant: Variant
    question: Question
    places: Floats  # (people, 2), scene units
    radius: float  # of a person with ring, scene units
    listener: Indices  # (arrows,)
    source: Indices
    share: Floats  # (arrows,) of the listener's points
    bend: Floats  # (arrows,)
    moves: Floats | None = None  # (arrows,) where arrows are drawn by it: what ten points more would move the mean

    @cached_property
    def strength(self) -> Floats:
        """How thick each arrow is, 0 to 1, shape (arrows,): its share, or what it moves against the largest."""
        if self.moves is None:
            return self.share
        size = np.abs(self.moves)
        most = size.max(initial=0.0)
        return size / most if most > 0 else size

    @cached_property
    def lowering(self) -> Flags:
        """Which arrows have an open head, because more of them moves the mean down, shape (arrows,)."""
        return np.zeros(len(self.share), dtype=bool) if self.moves is None else self.moves < 0

    @cached_property
    def rank(self) -> Indices:
        """Place of each arrow by strength, 0 for the strongest, shape (arrows,)."""
        rank = np.empty(len(self.strength), dtype=np.intp)
        rank[np.argsort(-self.strength, kind="stable")] = np.arange(len(rank))
        return rank

    @cached_property
    def ids(self) -> tuple[str, ...]:
        """Ids of the people."""
        return tuple(person.id for person in self.variant.people)

    @cached_property
    def index(self) -> dict[str, int]:
        """Place of each id."""
        return {one: place for place, one in enumerate(self.ids)}

    @cached_property
    def names(self) -> tuple[str, ...]:
        """What each person is called on the canvas."""
        return tuple(person.shown_name for person in self.variant.people)

    @cached_property
    def told_apart(self) -> tuple[str, ...]:
        """Names for sentences, in which two of the same name can be told apart."""
        known = shown_names(self.variant)
        return tuple(isolated(known[one]) for one in self.ids)

    @cached_property
    def arrow_index(self) -> dict[Pair, int]:
        """Place of each (listener, source)."""
        return {(arrow.listener, arrow.source): place for place, arrow in enumerate(self.variant.arrows)}

    @cached_property
    def present(self) -> Flags:
        """Who is there."""
        return np.array([person.present for person in self.variant.people], dtype=bool)

    @cached_property
    def silent(self) -> Indices:
        """Who has no vote."""
        return np.array([place for place, one in enumerate(self.variant.people) if one.ballots == 0], dtype=np.intp)

    @cached_property
    def weighted(self) -> dict[int, str]:
        """Who casts another number of votes than one, and what is written beside them."""
        people = enumerate(self.variant.people)
        return {place: times_words(one.ballots) for place, one in people if one.ballots not in (0, 1)}

    @cached_property
    def unknown(self) -> Flags:
        """Of whose start nothing is known."""
        return np.array([self.question.id not in person.beliefs for person in self.variant.people], dtype=bool)

    @cached_property
    def _voices(self) -> dict[int, Voices]:
        return {}

    def voices(self, stage: int) -> Voices:
        """What makes up everybody's next belief in a stage."""
        if stage not in self._voices:
            self._voices[stage] = voices(self.variant, stage)
        return self._voices[stage]

    def counting(self, stage: int) -> Flags:
        """Which arrows count in a stage, shape (arrows,)."""
        heard, count = self.voices(stage), len(self.ids)
        return np.isin(self.listener * count + self.source, heard.listener * count + heard.source)

    def pair(self, arrow: int) -> Pair:
        """(listener, source) of an arrow."""
        return self.ids[self.listener[arrow]], self.ids[self.source[arrow]]

    def sentence(self, arrow: int) -> str:
        """The arrow written out: "Amina listens to Jun: 30 of 100 points"."""
        here, there = self.told_apart[self.listener[arrow]], self.told_apart[self.source[arrow]]
        points = f"{here} listens to {there}: {points_words(self.share[arrow])} of 100 points"
        return points if self.moves is None else f"{points}; {moves_words(float(self.moves[arrow]), self.question)}"

    def about(self, person: int, belief: float) -> str:
        """A person in one sentence: name, belief, and what is special about her."""
        who = self.variant.people[person]
        unit = f" {self.question.unit}" if self.question.unit else ""
        parts = [f"{number(belief, self.question)}{unit}"]
        if self.unknown[person]:
            parts.append("start not known")
        if who.firmness > 0:
            parts.append(f"firmness {amount(round(who.firmness, 3))}")
        if not who.present:
            parts.append("absent")
        if who.ballots == 0:
            parts.append("no vote")
        elif who.ballots != 1:
            parts.append(f"{amount(who.ballots)} votes")
        role = f", {who.role}" if who.role else ""
        return f"{self.told_apart[person]}{role}: {', '.join(parts)}"

    def shown(self, counting: Flags, people: Flags, arrows: Flags) -> Flags:
        """Which arrows are drawn: all, or in a crowd the strongest of those `counting` in the stage, those of
        `people` and those of `arrows`."""
        if len(self.rank) <= STRONG:
            return np.ones(len(self.rank), dtype=bool)
        usual = counting & (self.rank < DRAWN)
        return usual | people[self.listener] | people[self.source] | arrows

    def moved_to(self, new: Floats) -> Scene:
        """The same people and arrows at other places."""
        return replace(self, places=new)

    def drawn_by(self, moves: Floats | None) -> Scene:
        """The same scene with arrows as thick as what ten points more would `move`, or with None as their shares."""
        return replace(self, moves=moves)


def points_words(share: float) -> str:
    """A share as points of 100, in as few digits as tell it."""
    points = float(share) * 100
    if 0 < points < 0.05:
        return "under 0.1"
    return amount(round(points, 1))


def times_words(ballots: float) -> str:
    """A number of votes in a few digits: "×2.5", "×1,200", "×<0.01"."""
    return f"×{amount(round(ballots, 2))}" if ballots >= 0.01 else "×<0.01"


def moves_words(change: float, question: Question) -> str:
    """What ten points more for an arrow would do to the mean."""
    least = 10.0 ** -decimals(question)
    if abs(change) < NOTHING * question.width:
        return "ten points more would leave the mean at the plan's end as it is"
    size = (
        f"by {number(abs(change), question)}" if abs(change) >= least / 2 else f"by under {number(least, question)}"
    )
    return f"ten points more would move the mean {'up' if change > 0 else 'down'} {size} at the plan's end"


def scene_of(
    variant: Variant,
    question: Question,
    remembered: MutableMapping[str, tuple[float, float]],
    radius: float | None,
    before: Scene | None = None,
) -> Scene:
    """The scene of a variant; `radius` None measures the places for one."""
    placed = places(variant, remembered)
    reach = disc_radius(placed) if radius is None else radius
    same_arrows = before is not None and _same_points(before.variant, variant)
    if before is not None and same_arrows:
        listener, source, share = before.listener, before.source, before.share
    else:
        listener, source, share = _arrows(variant)
    if before is not None and same_arrows and before.radius == reach and np.array_equal(before.places, placed):
        bend = before.bend
    else:
        bend = bends(placed, listener, source, reach)
    return Scene(variant, question, placed, reach, listener, source, share, bend)


def _same_points(one: Variant, other: Variant) -> bool:
    if one is other:
        return True
    if one.arrows is not other.arrows or len(one.people) != len(other.people):
        return False
    return all(
        a is b or (a.id, a.own_weight) == (b.id, b.own_weight) for a, b in zip(one.people, other.people, strict=True)
    )


def _arrows(variant: Variant) -> tuple[Indices, Indices, Floats]:
    index = {person.id: place for place, person in enumerate(variant.people)}
    listener = np.array([index[arrow.listener] for arrow in variant.arrows], dtype=np.intp)
    source = np.array([index[arrow.source] for arrow in variant.arrows], dtype=np.intp)
    weight = np.array([arrow.weight for arrow in variant.arrows], dtype=np.float64)
    own = np.array([person.own_weight for person in variant.people], dtype=np.float64)
    # Divided by the largest first, so that no sum of huge weights overflows.
    largest = own.copy()
    np.maximum.at(largest, listener, weight)
    largest[largest == 0] = 1.0
    part = weight / largest[listener]
    total = own / largest + np.bincount(listener, weights=part, minlength=len(own))
    return listener, source, part / total[listener]
