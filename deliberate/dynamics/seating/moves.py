"""Small changes of a seating: people at two tables change places."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from deliberate.dynamics.network import Indices
from deliberate.dynamics.seating.conditions import Room

Unit = tuple[int, ...]
TRIES = 50


@dataclass(frozen=True, eq=False)
class Moves:
    """m ways to change a seating: `tables` (m, 2) are the two that change, `seats` (m, 2, s) who sits there then."""

    tables: Indices
    seats: Indices

    def __len__(self) -> int:
        return len(self.tables)

    def that_fit(self, room: Room) -> Moves:
        """Those that keep the conditions of the room."""
        if not room.conditions:
            return self
        keeps = room.fits(self.seats).all(axis=1)
        return Moves(self.tables[keeps], self.seats[keeps])


def all_moves(
    room: Room, seats: Indices, units: list[Unit], draw: np.random.Generator, at_once: int
) -> Iterator[Moves]:
    """Every exchange of two people at different tables that keeps the conditions, in random order and in parts.

    People who must sit together change places as one, with others at random who leave room for them. The parts
    are made from `seats` as they are at the beginning.
    """
    for unit in units:
        if len(unit) > 1:
            yield _joint(room, seats, unit, units, draw).that_fit(room)
    bound = [person for unit in units if len(unit) > 1 for person in unit]
    table, chair = np.nonzero((seats < room.everybody) & ~np.isin(seats, bound))
    one, other = np.nonzero(table[:, None] < table[None, :])
    order = draw.permutation(len(one))
    for begin in range(0, len(order), at_once):
        a, b = one[order[begin : begin + at_once]], other[order[begin : begin + at_once]]
        yield _exchanged(seats, table[a], chair[a], table[b], chair[b]).that_fit(room)


def exchange(room: Room, seats: Indices, units: list[Unit], draw: np.random.Generator) -> Indices:
    """The seating after one random exchange that keeps the conditions; itself where none was found soon."""
    unit_of = {person: unit for unit in units for person in unit}
    for _ in range(TRIES):
        unit = unit_of[int(draw.choice(room.people))]
        if len(unit) > 1:
            moves = _joint(room, seats, unit, units, draw).that_fit(room)
        else:
            loose = [other[0] for other in units if len(other) == 1]
            moves = _random_exchange(seats, unit[0], loose, draw).that_fit(room)
        if len(moves):
            at = int(draw.integers(len(moves)))
            changed = seats.copy()
            changed[moves.tables[at]] = moves.seats[at]
            return changed
    return seats


def _random_exchange(seats: Indices, person: int, loose: list[int], draw: np.random.Generator) -> Moves:
    """The person changes places with another of the `loose` ones; no move where both are at one table."""
    other = int(draw.choice(loose))
    (here, chair), (there, seat) = np.argwhere(seats == person)[0], np.argwhere(seats == other)[0]
    if here == there:
        return Moves(np.empty((0, 2), dtype=np.intp), np.empty((0, 2, seats.shape[1]), dtype=np.intp))
    place = (np.array([at]) for at in (here, chair, there, seat))
    return _exchanged(seats, *place)


def _exchanged(seats: Indices, table: Indices, chair: Indices, other: Indices, there: Indices) -> Moves:
    """The people on these chairs of these tables change places, two and two."""
    each = np.arange(len(table))
    after = np.stack([seats[table], seats[other]], axis=1)
    after[each, 0, chair] = seats[other, there]
    after[each, 1, there] = seats[table, chair]
    return Moves(np.stack([table, other], axis=1), after)


def _joint(room: Room, seats: Indices, unit: Unit, units: list[Unit], draw: np.random.Generator) -> Moves:
    """The unit changes places with other units at each other table, chosen at random, that number as many."""
    table_of = {person: table for table, row in enumerate(seats.tolist()) for person in row}
    here = table_of[unit[0]]
    tables, after = [], []
    for there in range(len(seats)):
        if there == here:
            continue
        guests = [other for other in units if table_of[other[0]] == there]
        swapped: list[int] = []
        for at in draw.permutation(len(guests)).tolist():
            if len(swapped) + len(guests[at]) <= len(unit):
                swapped.extend(guests[at])
        if len(swapped) == len(unit):
            replaced = dict(zip([*unit, *swapped], [*swapped, *unit], strict=True))
            tables.append((here, there))
            after.append([[replaced.get(person, person) for person in row] for row in seats[[here, there]].tolist()])
    shape = (-1, 2, seats.shape[1])
    return Moves(np.array(tables, dtype=np.intp).reshape(-1, 2), np.array(after, dtype=np.intp).reshape(shape))
