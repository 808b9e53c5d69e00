"""What all candidates are found from: who would hear whom, the sides that stand apart, and what points would do."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from deliberate.dynamics.leverage import Lasting, pull_at_end, pull_in_long_run, weight_shares
from deliberate.dynamics.network import Network
from deliberate.dynamics.process import course
from deliberate.rehearsal.assemble import heard
from deliberate.rehearsal.findings.cuts import parting
from deliberate.rehearsal.findings.sketch import Indices, Mask, Sketch
from deliberate.rehearsal.results import ClosedGroup, Floats, Introduce, MovePoints

POINTS = 10.0  # what an introduction gets, and what is moved within a row
PICKED = 3  # listeners looked at for each kind of change within a row
EIGEN_PEOPLE = 200  # all eigenvectors of more take too long to wait for
ROUNDING = 1e-9
LONG = 3  # a repeated plan is followed for so many passes to see who counts


@dataclass(frozen=True, eq=False)
class Grounds:
    """A sketch with what the search for candidates needs of it."""

    sketch: Sketch

    @cached_property
    def weights(self) -> Floats:
        """(n, n) everybody's points as shares of 1, own view on the diagonal."""
        return weight_shares(self.sketch.assembly.process.network)

    @cached_property
    def audible(self) -> tuple[Mask, ...]:
        """Of each stage (n, n), who would hear whom if all arrows were drawn."""
        people = len(self.sketch.present)
        listener, source = np.nonzero(~np.eye(people, dtype=bool))
        everybody = Network(np.ones(people), listener, source, np.ones(len(listener)), self.sketch.present)
        place, masks = self.sketch.assembly.place, []
        for stage in self.sketch.variant.plan.stages:
            counts = heard(stage, everybody, place)
            pairs = np.zeros((people, people), dtype=bool)
            pairs[listener, source] = True if counts is None else counts
            masks.append(pairs & self.sketch.present & self.sketch.present[:, None])
        return tuple(masks)

    @cached_property
    def audible_for_ever(self) -> Mask:
        """(n, n) who would hear whom in a stage that goes on for ever."""
        lasting = self.audible if self.sketch.variant.plan.afterwards == "repeat" else self.audible[-1:]
        return np.logical_or.reduce(lasting)

    @cached_property
    def by_influence(self) -> Indices:
        """Those who take part, the most influential first, then those who are given most points."""
        given = self.weights.sum(axis=0) - self.weights.diagonal()
        here = self.sketch.here
        influence = np.round(self.sketch.influence / ROUNDING)
        return here[np.lexsort((-np.round(given[here] / ROUNDING), -influence[here]))]

    def leading(self, people: Iterable[int]) -> list[int]:
        """Some of those who take part, the most influential first."""
        wanted = {int(one) for one in people}
        return [one for one in self.by_influence.tolist() if one in wanted]

    @cached_property
    def sides(self) -> list[Indices]:
        """The parts that stand apart and should be mixed: closed groups, the parts of a swing, the sides of a
        bridge, or else those below and above the middle of the present starts."""
        sketch = self.sketch
        swinging = [group for group in sketch.rehearsal.closed_groups if group.period > 1]
        if len(sketch.closed) > 1:
            parts = list(sketch.closed)
        elif len(swinging) == 1:
            parts = self._parts_of_swing(swinging[0])
        else:
            return self._sides_of_bridge() or self._low_and_high()
        outside = np.setdiff1d(sketch.here, np.concatenate(parts))
        return [*parts, outside] if len(outside) else parts

    def _parts_of_swing(self, group: ClosedGroup) -> list[Indices]:
        phases = [[] for _ in range(group.period)]
        for person, phase in zip(group.people, group.phases, strict=True):
            phases[phase].append(self.sketch.assembly.place[person])
        return [np.array(part) for part in phases]

    def _sides_of_bridge(self) -> list[Indices] | None:
        sketch = self.sketch
        lasting = course(sketch.assembly.process).lasting
        whole = len(sketch.closed) == 1 and len(sketch.closed[0]) == len(sketch.here) and not sketch.firmness.any()
        if not whole or len(lasting) > 1 or sketch.question.hearing_range is not None:
            return None
        group = sketch.closed[0]
        closed = next(one for one in sketch.rehearsal.closed_groups if len(one.people) == len(group))
        influence = np.array([closed.influence[person] for person in sketch.ids(group)])
        found = parting(lasting[0].shares.matrix[group][:, group], influence)
        return None if found is None else [group[part] for part in found.parts]

    def _low_and_high(self) -> list[Indices]:
        here = self.sketch.here
        order = here[np.argsort(self.sketch.starts[here], kind="stable")]
        return [order[: len(order) // 2], order[len(order) // 2 :]]

    # What points would do, by closed form

    def pull_on_spread(self) -> Floats | None:
        """(n, n) by how much each weight widens the spread at the plan's end."""
        sketch = self.sketch
        if self._unsure or not len(sketch.here):
            return None
        voice = np.zeros(len(sketch.present))
        ends = sketch.ends[sketch.here]
        voice[sketch.here[ends.argmax()]] += 1
        voice[sketch.here[ends.argmin()]] -= 1
        return pull_at_end(sketch.assembly.process, sketch.starts, sketch.plan_rounds, voice, self.audible)[0]

    def pull_on_influence(self) -> Floats | None:
        """(n, n) by how much each weight makes influence less even: the sum of its squares changes by twice what the
        mean view would, had people started at their influence."""
        sketch = self.sketch
        if self._unsure or not len(sketch.here):
            return None
        process = sketch.assembly.process
        voice = sketch.present / sketch.present.sum()
        if process.repeat:
            return pull_at_end(process, sketch.influence, LONG * sketch.plan_rounds, voice, self.audible)[0]
        return pull_in_long_run(process, sketch.influence, Lasting.of(process, voice), self.audible)[0]

    def pull_on_pace(self) -> Floats | None:
        """(n, n) by how much each weight slows the slowest part of the talk: the derivative of an eigenvalue is
        (left vector) x (right vector) (Wilkinson 1965). None for plans in which several rounds alternate."""
        process = self.sketch.assembly.process
        lasting = course(process).lasting
        if self._unsure or len(lasting) > 1 or lasting[0].rounds > 1 or len(self.sketch.here) > EIGEN_PEOPLE:
            return None
        kept = (1 - process.firmness)[:, None] * lasting[0].shares.as_full()
        here = self.sketch.here
        values, right = np.linalg.eig(kept[np.ix_(here, here)])
        order = np.argsort(-np.abs(values))
        if len(order) < 2 or abs(values[order[1]]) < ROUNDING:
            return None
        slow = order[0] if process.firmness.any() else order[1]
        left = np.linalg.pinv(right)[slow]
        turned = np.conj(values[slow]) / abs(values[slow])
        pull = np.full(kept.shape, np.nan)
        pull[np.ix_(here, here)] = (turned * np.outer(left, right[:, slow])).real
        return np.where(self.audible_for_ever | np.eye(len(kept), dtype=bool), pull, pull.diagonal()[:, None])

    @property
    def _unsure(self) -> bool:
        """Closed forms do not hold where beliefs decide who is heard."""
        return self.sketch.question.hearing_range is not None

    def introductions(self, pull: Floats | None) -> Iterator[Introduce]:
        """The new arrows that would lower what is pulled most, one for a listener."""
        if pull is None:
            return
        mean = np.where(self.weights > 0, self.weights * pull, 0.0).sum(axis=1)
        gain = mean[:, None] - pull
        known = (self.weights > 0) | np.eye(len(pull), dtype=bool)
        gain[known | ~np.logical_or.reduce(self.audible)] = np.nan
        for listener, source in self._best(gain):
            yield Introduce(*self.sketch.ids([listener, source]), POINTS)

    def moves(self, pull: Floats | None) -> Iterator[MovePoints]:
        """The moves of points within a row, between voices that are heard, that would lower what is pulled most."""
        if pull is None:
            return
        drawn = self.weights > 0
        able = self.weights > POINTS / 100 + ROUNDING
        highest = np.where(able, pull, -np.inf)
        away = np.nan_to_num(highest, nan=-np.inf).argmax(axis=1)
        rows = np.arange(len(pull))
        gain = np.where(drawn, highest[rows, away][:, None] - pull, np.nan)
        gain[rows, away] = np.nan
        for listener, to in self._best(gain):
            yield MovePoints(*self.sketch.ids([listener, away[listener], to]), POINTS)

    def _best(self, gain: Floats) -> Iterator[tuple[int, int]]:
        """The (listener, voice) with the largest gain above 0 of some listeners, the largest first."""
        ready = self.sketch.present & (self.sketch.firmness < 1)
        gain = np.where(np.isfinite(gain) & ready[:, None], gain, -np.inf)
        best = gain.argmax(axis=1)
        size = gain[np.arange(len(gain)), best]
        for listener in np.argsort(-size, kind="stable")[:PICKED].tolist():
            if size[listener] > ROUNDING:
                yield listener, int(best[listener])
