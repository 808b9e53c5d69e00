"""Seatings at random that keep all conditions: what a search is compared with, and what it starts from."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from deliberate.dynamics.network import Indices
from deliberate.dynamics.progress import Stopped
from deliberate.dynamics.seating.conditions import Room, find_seating
from deliberate.dynamics.seating.moves import exchange

TRIES = 20  # draws for each seating that is wanted; where too few meet the conditions, the rest are shuffled
SHUFFLED = 200  # at most so many, because each takes many exchanges
EXCHANGES = 12

Draw = np.random.Generator


class NoSeatingError(Exception):
    """No seating meets the conditions, or none was found in time (`proven` False)."""

    def __init__(self, proven: bool) -> None:
        super().__init__(proven)
        self.proven = proven


def draw_seatings(room: Room, wanted: int, draw: Draw, stopped: Stopped) -> Indices:
    """(k, tables, s) seatings, k at most `wanted` and at least 1.

    Each is a fair draw that was kept because it meets all conditions (people who must sit together go to the
    table of the first of them). Where hardly any draw does, they are made from one that does by exchanging people.
    Raises NoSeatingError.
    """
    found: list[Indices] = []
    for _ in range(TRIES):
        deals = np.array(list(_deals(room, wanted, draw)), dtype=np.intp).reshape(-1, len(room.sizes), room.chairs)
        found.extend(deals[room.fits(deals).all(axis=1)])
        if len(found) >= wanted or (stopped() and found):
            return np.array(found[:wanted])
    found.extend(_shuffled(room, found, min(wanted, SHUFFLED) - len(found), draw))
    return np.array(found)


def _deals(room: Room, many: int, draw: Draw) -> Iterator[Indices]:
    """Up to `many` deals of everybody, those who must sit together at one table."""
    taken = np.arange(room.chairs)[None, :] < np.array(room.sizes)[:, None]
    table_of = np.repeat(np.arange(len(room.sizes)), room.sizes)
    joined = [unit for unit in room.units() if len(unit) > 1]
    dealt = draw.permuted(np.tile(room.people, (many, 1)), axis=1)
    for deal in dealt:
        if joined and not _gather(deal, table_of, joined, draw):
            continue
        seats = np.full(taken.shape, room.everybody)
        seats[taken] = deal
        yield seats


def _gather(deal: Indices, table_of: Indices, joined: list[tuple[int, ...]], draw: Draw) -> bool:
    """Exchange people until each joined unit sits where its first one does; False where there is no room."""
    bound = np.isin(deal, [person for unit in joined for person in unit])
    for unit in joined:
        place = {person: at for at, person in enumerate(deal.tolist())}
        table = table_of[place[unit[0]]]
        away = [person for person in unit if table_of[place[person]] != table]
        loose = np.flatnonzero((table_of == table) & ~bound)
        if len(loose) < len(away):
            return False
        for person, there in zip(away, draw.permutation(loose).tolist(), strict=False):
            here = place[person]
            deal[[here, there]] = deal[[there, here]]
            bound[[here, there]] = bound[[there, here]]
    return True


def _shuffled(room: Room, found: list[Indices], missing: int, draw: Draw) -> Iterator[Indices]:
    """`missing` more seatings, each some exchanges away from the one before."""
    if missing <= 0:
        return
    if found:
        seats = found[-1]
    else:
        try:
            known = find_seating(room)
        except TimeoutError:
            raise NoSeatingError(proven=False) from None
        if known is None:
            raise NoSeatingError(proven=True)
        seats = known
        yield seats
        missing -= 1
    units = room.units()
    for _ in range(missing):
        for _ in range(EXCHANGES):
            seats = exchange(room, seats, units, draw)
        yield seats
