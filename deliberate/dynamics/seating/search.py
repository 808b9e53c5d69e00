"""The seating that serves an aim best: all of them where they are few, otherwise local search from many starts.

From each start, people at two tables change places as long as that makes it better, one table stage after the
other, until no exchange in any of them does. Then a few random exchanges are made and the search goes on from
there, back to the better of the two, until that has not helped for a while (iterated local search: Lourenço, Martin
and Stützle 2003); then comes the next start. What comes of an exchange costs two tables and a few rows of a matrix,
because what happens after a table stage is an affine function of the beliefs at its end.

The search ends after a fixed amount of work, not of time, so that the same seed gives the same seating everywhere.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product

import numpy as np

from deliberate.dynamics.network import Floats, Indices
from deliberate.dynamics.progress import Progress, Stopped, never, no_report
from deliberate.dynamics.seating.aims import CHUNK_NUMBERS, Aim
from deliberate.dynamics.seating.conditions import Room
from deliberate.dynamics.seating.drawing import draw_seatings
from deliberate.dynamics.seating.every import every_seating, how_many
from deliberate.dynamics.seating.moves import all_moves, exchange

RANDOM_SEATINGS = 1_000
MOST_SEATINGS = 20_000  # listed for one stage
MOST_COURSES = 60_000_000  # numbers looked at when all courses of seatings are gone through
MOST_COURSES_STEPPED = 2_000_000  # the same where they have to be stepped one by one
MOVES_AT_ONCE = 128
WORTH_MOVING = 1e-12  # part of a cost that an exchange must save
AS_GOOD = 1e-6  # part of a cost up to which two seatings are called equally good
WORK = 2_000_000_000  # numbers that the local search looks at, roughly
OVERHEAD = 150_000  # numbers that each look at a few exchanges costs besides
ENOUGH = 12  # starts that came equally far: then another would hardly come further
KICK = 3  # random exchanges after which the search goes on
FRUITLESS = 12  # such tries without a better seating, then the next start


@dataclass(frozen=True, eq=False)
class Found:
    """The best seating found.

    seats: (stages, tables, s) who sits where. cost: the aim's cost of it.
    random_figures: (k,) what the aim tells of seatings at random.
    every: how many courses of seatings were all gone through, or None where the search was local.
    starts, as_good: starts of the local search, and how many of them came as far as the best.
    stopped: whether the search was ended before it was done.
    """

    seats: Indices
    cost: float
    random_figures: Floats
    every: int | None
    starts: int
    as_good: int
    stopped: bool


def search(
    aim: Aim,
    room: Room,
    stages: int,
    *,
    seed: int = 1,
    effort: float = 1.0,
    exact: bool = True,
    progress: Progress = no_report,
    stopped: Stopped = never,
) -> Found:
    """The best seating for so many table stages one after the other.

    The same seed gives the same result. effort: how much work the local search does, 1 being a few seconds for a
    committee. exact: go through all seatings where they are few enough. progress is told the part that is done, 0
    to 1; once `stopped` is true the best so far is returned soon. Raises NoSeatingError where no seating meets the
    conditions.
    """
    draw = np.random.default_rng(seed)
    courses = _random_courses(room, stages, draw, stopped)
    random_ends = _ends(aim, courses, stopped)
    random_costs, random_figures = aim.cost(random_ends), aim.figures(random_ends)
    best = int(np.argmin(random_costs))
    so_far = _Best(courses[best].copy(), float(random_costs[best]))
    if exact and _few_enough(aim, room, stages):
        every = _try_all(aim, room, stages, so_far, progress, stopped)
        return Found(so_far.seats, so_far.cost, random_figures, every, 0, 0, every is None)
    climb = _Climb(aim, room, draw, _Work(WORK * effort, progress, stopped))
    ends = []
    for start in np.argsort(random_costs, kind="stable"):
        seats, cost = climb.from_start(courses[start].copy())
        ends.append(cost)
        so_far.offer(seats, cost)
        as_good = sum(cost <= so_far.cost * (1 + AS_GOOD) for cost in ends)
        if climb.work.over or as_good >= ENOUGH:
            break
    progress(1.0)
    return Found(so_far.seats, so_far.cost, random_figures, None, len(ends), as_good, stopped())


class _Best:
    """The best so far; the first of several that are alike."""

    def __init__(self, seats: Indices, cost: float) -> None:
        self.seats, self.cost = seats, cost

    def offer(self, seats: Indices, cost: float) -> None:
        if cost < self.cost:
            self.seats, self.cost = seats.copy(), float(cost)


def _random_courses(room: Room, stages: int, draw: np.random.Generator, stopped: Stopped) -> Indices:
    """(k, stages, tables, s) seatings at random for all stages."""
    each = [draw_seatings(room, RANDOM_SEATINGS, draw, stopped) for _ in range(stages)]
    many = min(map(len, each))
    return np.stack([seatings[:many] for seatings in each], axis=1)


def _ends(aim: Aim, courses: Indices, stopped: Stopped) -> Floats:
    """(k, n) what courses of seatings lead to; fewer once stopped, but at least one."""
    numbers = courses[0, 0].size * courses.shape[-1] + aim.state.size
    step = max(1, CHUNK_NUMBERS // numbers)
    ends: list[Floats] = []
    for at in range(0, len(courses), step):
        if ends and stopped():
            break
        states = np.repeat(aim.state[None], len(courses[at : at + step]), axis=0)
        for stage in _order(aim, courses.shape[1]):
            states = _seated(aim, courses[at : at + step, stage], states)
        ends.append(aim.ends(states))
    return np.concatenate(ends)


def _order(aim: Aim, stages: int) -> range:
    return range(stages - 1, -1, -1) if aim.backwards else range(stages)


def _seated(aim: Aim, seats: Indices, states: Floats) -> Floats:
    """(m, n + 1, columns) states after one table stage: seats (m, tables, s) or (tables, s) for all alike."""
    each = np.arange(len(states))[:, None, None]
    seats = np.broadcast_to(seats, (len(states), *seats.shape[-2:]))
    after = states.copy()
    after[each, seats] = aim.talk(seats, states[each, seats])
    return after


# All of them


def _few_enough(aim: Aim, room: Room, stages: int) -> bool:
    ways = how_many(room.sizes)
    if ways > MOST_SEATINGS:
        return False
    most = MOST_COURSES if aim.affine else MOST_COURSES_STEPPED
    return ways**stages * max(len(room.people), 1) <= most


def _try_all(
    aim: Aim,
    room: Room,
    stages: int,
    so_far: _Best,
    progress: Progress,
    stopped: Stopped,
) -> int | None:
    """Look at every course of seatings; how many there are, or None when stopped before the end.

    The stage gone through last is one affine map for each seating, so that all of them are one product.
    """
    seatings = every_seating(room.people, room.sizes, room.everybody)
    seatings = seatings[room.fits(seatings).all(axis=1)]
    last = _Onward(aim, seatings)
    *earlier, latest = _order(aim, stages)
    total = len(seatings) ** len(earlier)
    for number, chosen in enumerate(product(range(len(seatings)), repeat=len(earlier))):
        if stopped():
            return None
        state = aim.state[None]
        for choice in chosen:
            state = _seated(aim, seatings[choice], state)
        costs = last.costs(state[0])
        best = int(np.argmin(costs))
        if costs[best] < so_far.cost * (1 - WORTH_MOVING):
            course = np.empty((stages, *seatings.shape[1:]), dtype=np.intp)
            course[list(earlier)] = seatings[list(chosen)]
            course[latest] = seatings[best]
            so_far.offer(course, float(costs[best]))
        progress((number + 1) / total)
    return len(seatings) ** stages


class _Onward:
    """What each of the seatings leads to from a state, in the stage gone through last."""

    def __init__(self, aim: Aim, seatings: Indices) -> None:
        self._aim, self._seatings = aim, seatings
        if not aim.affine:
            return
        points = _points(aim.state)
        ends = np.stack([aim.ends(_seated(aim, seats, points)) for seats in seatings])  # (seatings, points, n)
        self._still = ends[:, 0]
        self._moved = (ends[:, 1:] - ends[:, :1]).swapaxes(1, 2).reshape(-1, len(points) - 1)

    def costs(self, state: Floats) -> Floats:
        """(seatings,) the cost of each."""
        if self._aim.affine:
            ends = self._still + (self._moved @ state[:-1].ravel()).reshape(self._still.shape)
            return self._aim.cost(ends)
        states = np.repeat(state[None], len(self._seatings), axis=0)
        return self._aim.cost(self._aim.ends(_seated(self._aim, self._seatings, states)))


def _points(state: Floats) -> Floats:
    """(1 + n * columns, n + 1, columns) states at which an affine function of a state shows all it is."""
    people, columns = state.shape[0] - 1, state.shape[1]
    points = np.zeros((1 + people * columns, *state.shape))
    points[1:, :-1] = np.eye(people * columns).reshape(-1, people, columns)
    return points


# Local search


class _Work:
    """How much is left to do, in numbers looked at."""

    def __init__(self, total: float, progress: Progress, stopped: Stopped) -> None:
        self._total, self._progress, self._stopped = total, progress, stopped
        self._done = 0.0
        self.over = stopped()

    def spend(self, numbers: float) -> None:
        self._done += numbers
        self.over = self._done >= self._total or self._stopped()
        self._progress(min(self._done / self._total, 1.0))


class _Climb:
    """Local search for one aim in one room."""

    def __init__(self, aim: Aim, room: Room, draw: np.random.Generator, work: _Work) -> None:
        self._aim, self._room, self._draw, self.work = aim, room, draw, work
        self._units = room.units()
        at_two_tables = 2 * room.chairs * (room.chairs + 4)
        later = 2 * room.chairs * room.everybody if aim.affine else 8 * room.everybody**2
        self._numbers_per_move = 8 * at_two_tables + later

    def from_start(self, course: Indices) -> tuple[Indices, float]:
        """The best course of seatings found from `course` (stages, tables, s), and its cost."""
        best, cost = self._descend(course)
        fruitless = 0
        while fruitless < FRUITLESS and not self.work.over:
            shaken = best.copy()
            for stage in self._draw.integers(len(course), size=KICK):
                shaken[stage] = exchange(self._room, shaken[stage], self._units, self._draw)
            after, costs = self._descend(shaken)
            fruitless = 0 if costs < cost * (1 - WORTH_MOVING) else fruitless + 1
            if costs <= cost:
                best, cost = after, costs
        return best, cost

    def _descend(self, course: Indices) -> tuple[Indices, float]:
        """Exchange people until no exchange in any stage makes it better. Changes `course`."""
        aim, order = self._aim, _order(self._aim, len(course))
        cost, still = np.inf, 0
        while still < len(order):
            for at, stage in enumerate(order):
                arriving = aim.state[None]
                for earlier in order[:at]:
                    arriving = _seated(aim, course[earlier], arriving)
                state = _seated(aim, course[stage], arriving)[0]
                leaving = _Leaving(aim, [course[later] for later in order[at + 1 :]], state)
                before, after = self._improve(course[stage], arriving[0], state, leaving)
                still = 1 if after < before else still + 1
                cost = after
                if self.work.over or still >= len(order):
                    break
            if self.work.over:
                break
        return course, cost

    def _improve(self, seats: Indices, arriving: Floats, state: Floats, leaving: _Leaving) -> tuple[float, float]:
        """Exchange people in one stage until no exchange makes it better; the costs before and then.

        arriving, state: (n + 1, columns) before and after the stage. Changes `seats`.
        """
        before = cost = leaving.begin(state)
        better = True
        while better:
            better = False
            for some in all_moves(self._room, seats, self._units, self._draw, MOVES_AT_ONCE):
                self.work.spend(OVERHEAD + len(some) * self._numbers_per_move)
                if self.work.over:
                    return before, cost
                if not len(some):
                    continue
                people = some.seats.reshape(len(some), -1)
                states = self._aim.talk(some.seats, arriving[some.seats]).reshape(*people.shape, -1)
                costs = leaving.costs(people, states)
                best = int(np.argmin(costs))
                if costs[best] < cost * (1 - WORTH_MOVING):
                    seats[some.tables[best]] = some.seats[best]
                    state = state.copy()
                    state[people[best]] = states[best]
                    cost, better = leaving.begin(state), True
                    break
        return before, cost


class _Leaving:
    """What comes of states after one stage: the later table stages, then the rest of the plan."""

    def __init__(self, aim: Aim, later: list[Indices], state: Floats) -> None:
        self._aim, self._later = aim, later
        self._rows: Floats | None = None
        self.begin(state)
        if aim.affine:
            ends = self._step_by_step(_points(aim.state))
            rows = (ends[1:] - ends[0]).reshape(-1, aim.state.shape[1], ends.shape[1])
            self._rows = np.pad(rows, ((0, 1), (0, 0), (0, 0)))  # (n + 1, columns, n): an empty chair changes nothing

    def begin(self, state: Floats) -> float:
        """Look at changes of `state` (n + 1, columns) from now on; its cost."""
        self._state = state
        self._end = self._step_by_step(state[None])[0]
        return float(self._aim.cost(self._end[None])[0])

    def costs(self, people: Indices, states: Floats) -> Floats:
        """(m,) costs when some people (m, k) have other states (m, k, columns).

        Where it is affine this adds what each of them changes. A product of full matrices would do more work, and
        numpy would spread it over threads that are slower than one as soon as the machine has something else to do.
        """
        if self._rows is None:
            changed = np.repeat(self._state[None], len(people), axis=0)
            changed[np.arange(len(people))[:, None], people] = states
            return self._aim.cost(self._step_by_step(changed))
        by = (states - self._state[people]).reshape(len(people), 1, -1)
        rows = self._rows[people].reshape(len(people), by.shape[2], -1)
        return self._aim.cost(self._end + (by @ rows)[:, 0])

    def _step_by_step(self, states: Floats) -> Floats:
        for seats in self._later:
            states = _seated(self._aim, seats, states)
        return self._aim.ends(states)
