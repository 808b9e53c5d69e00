"""What a seating must keep, and whether any seating can.

Every condition is met or not met by each table on its own.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.optimize import Bounds, LinearConstraint, milp
from scipy.sparse import coo_array

from deliberate.dynamics.network import Floats, Indices, Mask

SECONDS_FOR_PROOF = 2.0


@dataclass(frozen=True)
class Together:
    """These people sit at one table."""

    people: tuple[int, ...]


@dataclass(frozen=True)
class Apart:
    """No two of these people sit at one table."""

    people: tuple[int, ...]


@dataclass(frozen=True)
class OneAtEvery:
    """At every table sits at least one of these people."""

    people: tuple[int, ...]


@dataclass(frozen=True)
class Linked:
    """At her table everybody has somebody whom she hears or who hears her."""


Condition = Together | Apart | OneAtEvery | Linked


@dataclass(frozen=True, eq=False)
class Room:
    """Who is to be seated, how many sit at each table, and what must be kept.

    people: (p,) indices of those who are seated, out of `everybody` people in all.
    sizes: how many sit at each table.
    linked: (everybody + 1, everybody + 1) True where an arrow joins two, whichever way.
    """

    everybody: int
    people: Indices
    sizes: tuple[int, ...]
    linked: Mask
    conditions: tuple[Condition, ...] = ()

    @property
    def chairs(self) -> int:
        """Chairs at each table; some stay empty where tables differ in size."""
        return max(self.sizes)

    def fits(self, tables: Indices) -> Mask:
        """(...) whether each of the tables (..., s) meets all conditions."""
        met = np.ones(tables.shape[:-1], dtype=bool)
        for condition in self.conditions:
            met &= self._meets(condition, tables)
        return met

    def units(self) -> list[tuple[int, ...]]:
        """People who must sit together, as one; everybody else alone."""
        joined = {person: {person} for person in self.people.tolist()}
        for condition in self.conditions:
            if isinstance(condition, Together):
                whole = set().union(*(joined[person] for person in condition.people))
                for person in whole:
                    joined[person] = whole
        return list(dict.fromkeys(tuple(sorted(unit)) for unit in joined.values()))

    def _meets(self, condition: Condition, tables: Indices) -> Mask:
        match condition:
            case Together(people):
                there = self._among(people)[tables].sum(axis=-1)
                return (there == 0) | (there == len(people))
            case Apart(people):
                return self._among(people)[tables].sum(axis=-1) <= 1
            case OneAtEvery(people):
                return self._among(people)[tables].any(axis=-1)
            case Linked():
                joined = self.linked[tables[..., :, None], tables[..., None, :]].any(axis=-1)
                return (joined | (tables == self.everybody)).all(axis=-1)

    def _among(self, people: tuple[int, ...]) -> Mask:
        marked = np.zeros(self.everybody + 1, dtype=bool)
        marked[list(people)] = True
        return marked


def find_seating(room: Room) -> Indices | None:
    """Some seating (tables, s) that meets all conditions, or None where there is none.

    By integer programming (branch and bound). Raises TimeoutError where that is not decided in a few seconds.
    """
    found = _solve(room)
    if found is None:
        return None
    seats = np.full((len(room.sizes), room.chairs), room.everybody)
    for table, row in enumerate(found.T):
        there = room.people[row]
        seats[table, : len(there)] = there
    return seats


def cannot_be_met(room: Room) -> tuple[Condition, ...]:
    """The conditions of a room without any seating that cannot all be met: leave one out, and the rest can.

    By deletion: each condition in turn is dropped for good if there is still no seating without it (Chinneck and
    Dravnieks 1991).
    """
    kept = list(room.conditions)
    for condition in room.conditions:
        rest = [one for one in kept if one is not condition]
        try:
            if _solve(Room(room.everybody, room.people, room.sizes, room.linked, tuple(rest))) is None:
                kept = rest
        except TimeoutError:
            continue
    return tuple(kept)


def _solve(room: Room) -> Mask | None:
    """(p, tables) who sits where. One unknown per person and table, 1 where she sits there."""
    people, tables = len(room.people), len(room.sizes)
    place = {person: at for at, person in enumerate(room.people.tolist())}
    rows = _Rows(people, tables)
    for person in range(people):
        rows.add([(person, table, 1.0) for table in range(tables)], 1, 1)
    for table, size in enumerate(room.sizes):
        rows.add([(person, table, 1.0) for person in range(people)], size, size)
    for condition in room.conditions:
        for table in range(tables):
            match condition:
                case Together(ids):
                    first = place[ids[0]]
                    for other in ids[1:]:
                        rows.add([(first, table, 1.0), (place[other], table, -1.0)], 0, 0)
                case Apart(ids):
                    rows.add([(place[one], table, 1.0) for one in ids], 0, 1)
                case OneAtEvery(ids):
                    rows.add([(place[one], table, 1.0) for one in ids], 1, people)
                case Linked():
                    for person, at in place.items():
                        others = np.flatnonzero(room.linked[person, :-1]).tolist()
                        company = [(place[other], table, 1.0) for other in others if other in place]
                        rows.add([*company, (at, table, -1.0)], 0, people)
    return rows.solve(_first_tables(room))


def _first_tables(room: Room) -> Floats:
    """(p, tables) 0 where somebody need not be tried: the first person may sit at the first table of her size."""
    allowed = np.ones((len(room.people), len(room.sizes)))
    if len(set(room.sizes)) == 1 and len(room.people):
        allowed[0, 1:] = 0
    return allowed


class _Rows:
    """Linear conditions on who sits where, gathered one by one."""

    def __init__(self, people: int, tables: int) -> None:
        self._shape = (people, tables)
        self._entries: list[tuple[int, int, float]] = []  # row, unknown, factor
        self._low: list[float] = []
        self._high: list[float] = []

    def add(self, factors: Sequence[tuple[int, int, float]], low: float, high: float) -> None:
        row = len(self._low)
        self._entries.extend((row, person * self._shape[1] + table, factor) for person, table, factor in factors)
        self._low.append(low)
        self._high.append(high)

    def solve(self, allowed: Floats) -> Mask | None:
        rows, unknowns, factors = zip(*self._entries, strict=True)
        matrix = coo_array((factors, (rows, unknowns)), shape=(len(self._low), allowed.size)).tocsr()
        answer = milp(
            np.zeros(allowed.size),
            integrality=np.ones(allowed.size),
            bounds=Bounds(0, allowed.ravel()),
            constraints=LinearConstraint(matrix, self._low, self._high),
            options={"time_limit": SECONDS_FOR_PROOF},
        )
        if answer.x is not None:
            return answer.x.reshape(self._shape) > 0.5
        if answer.status == 2:
            return None
        raise TimeoutError
