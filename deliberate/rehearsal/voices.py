"""What makes up everybody's next belief: the listening ring in numbers. Needs numpy only."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from deliberate.dynamics.network import Floats, Indices
from deliberate.scenario.settings import lets_through
from deliberate.scenario.values import Arrow, Stage, Variant


@dataclass(frozen=True, eq=False)
class Voices:
    """Shares of everybody's next belief in one stage; per person, ``firm + own + her share entries = 1``.

    `own` and `firm` have shape (people,); `listener`, `source` (indices into the variant's people) and `share`
    have one entry per arrow that counts in the stage, in the order of the variant's arrows.
    """

    own: Floats
    firm: Floats
    listener: Indices
    source: Indices
    share: Floats


def voices(variant: Variant, stage: int) -> Voices:
    """The voices of stage number `stage` of the variant's plan, without a hearing range.

    Friedkin and Johnsen 1990: firmness ``f`` brings back the starting belief, the rest is heard through the row.
    """
    people, setting = variant.people, variant.plan.stages[stage]
    place = {person.id: index for index, person in enumerate(people)}
    counted = list(_that_count(variant, setting))
    heard = set(counted)
    kept = [] if setting.unheard == "rescale" else [arrow for arrow in variant.arrows if arrow not in heard]
    listener, source, weight = _as_arrays(counted, place)
    keeper, _, unheard = _as_arrays(kept, place)
    own = np.array([person.own_weight for person in people], dtype=np.float64)
    firm = np.array([person.firmness for person in people], dtype=np.float64)

    # Weights are any finite numbers: measured by a person's largest one, their sum is finite too.
    largest = own.copy()
    np.maximum.at(largest, listener, weight)
    np.maximum.at(largest, keeper, unheard)
    largest[largest == 0] = 1.0
    weight = weight / largest[listener]
    own = own / largest + np.bincount(keeper, unheard / largest[keeper], len(people))
    total = own + np.bincount(listener, weight, len(people))
    hears_only_herself = total == 0
    own[hears_only_herself] = total[hears_only_herself] = 1.0
    open_part = 1.0 - firm
    return Voices(open_part * own / total, firm, listener, source, (open_part / total)[listener] * weight)


def _as_arrays(arrows: Sequence[Arrow], place: Mapping[str, int]) -> tuple[Indices, Indices, Floats]:
    """Listeners and sources as indices, and weights."""
    listener = np.array([place[arrow.listener] for arrow in arrows], dtype=np.intp)
    source = np.array([place[arrow.source] for arrow in arrows], dtype=np.intp)
    return listener, source, np.array([arrow.weight for arrow in arrows], dtype=np.float64)


def _that_count(variant: Variant, stage: Stage) -> Iterator[Arrow]:
    """The arrows between present people that the stage lets through."""
    present = {person.id for person in variant.people if person.present}
    counts = lets_through(stage)
    for arrow in variant.arrows:
        if arrow.listener in present and arrow.source in present and counts(arrow.listener, arrow.source):
            yield arrow
