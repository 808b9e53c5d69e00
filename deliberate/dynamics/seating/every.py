"""All ways to seat a small group, each once: tables of one size have no order."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterator, Sequence
from itertools import combinations

import numpy as np

from deliberate.dynamics.network import Indices


def how_many(sizes: Sequence[int]) -> int:
    """In how many ways people can be split into groups of these sizes: n! / (product of sizes! and of repeats!)."""
    ways = math.factorial(sum(sizes))
    for size in sizes:
        ways //= math.factorial(size)
    for times in Counter(sizes).values():
        ways //= math.factorial(times)
    return ways


def every_seating(people: Indices, sizes: Sequence[int], empty: int) -> Indices:
    """(how_many, tables, s) all seatings; chairs beyond a table's size hold `empty`."""
    chairs = max(sizes)
    seatings = [
        [(*table, *(empty,) * (chairs - len(table))) for table in split]
        for split in _splits(tuple(people.tolist()), tuple(sizes))
    ]
    return np.array(seatings, dtype=np.intp).reshape(-1, len(sizes), chairs)


def _splits(people: tuple[int, ...], sizes: tuple[int, ...]) -> Iterator[tuple[tuple[int, ...], ...]]:
    """The first person's table is one of each size there is; then the rest are split."""
    if not people:
        yield ()
        return
    first, rest = people[0], people[1:]
    for size in dict.fromkeys(sizes):
        left = list(sizes)
        left.remove(size)
        for company in combinations(rest, size - 1):
            table = (first, *company)
            others = tuple(person for person in rest if person not in company)
            for split in _splits(others, tuple(left)):
                yield (table, *split)
