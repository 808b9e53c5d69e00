"""What is wanted of tables, and the seating that was found. Free of numpy: a window can load it at once."""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil
from typing import Literal

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import in_words
from deliberate.scenario.edits.table_stages import Place
from deliberate.scenario.values import Unheard, Variant

Pair = tuple[str, str]
Tables = tuple[tuple[str, ...], ...]
Goal = Literal["less-spread", "more-voices"]


@dataclass(frozen=True)
class Wish:
    """Tables to be laid. Either `tables` says how many there are or `size` how many people sit at one, at most (one
    more where somebody would otherwise sit alone).

    rotations: how often people are seated anew; rounds: how long each of these stages is.
    goal: what the seating shall do. "less-spread": the highest and the lowest belief at the plan's end lie as close
        together as can be. "more-voices": the average belief at the plan's end is carried by as many equal voices
        as can be. Both are about those present.
    place: where in the plan the table stages go; see `edits.add_table_stages`.
    unheard: what becomes of points for those at other tables.
    together, apart: two people who sit at one table, or never do, in every rotation.
    roles: at every table sits somebody with each of these roles.
    linked: at her table everybody has somebody whom she hears or who hears her.
    """

    tables: int | None = None
    size: int | None = None
    rotations: int = 2
    rounds: int = 2
    goal: Goal = "less-spread"
    place: Place = "before"
    unheard: Unheard = "rescale"
    together: tuple[Pair, ...] = ()
    apart: tuple[Pair, ...] = ()
    roles: tuple[str, ...] = ()
    linked: bool = False


@dataclass(frozen=True)
class Seating:
    """Who sits where in each rotation, and what it does. Figures are spreads or numbers of equal voices.

    after: with these tables; before: by the plan as it is; random_mean, random_best: with `random_count` seatings at
        random that keep the same conditions.
    every: how many ways to seat everybody were all looked at, so that there is no better one; None where it is the
        best of `starts` starts, `as_good` of which came equally far.
    finished: False when the search was stopped and this is the best so far.
    hear_nobody: for each rotation, who hears nobody at her table.
    apart_groups: how many groups there are among those present without an arrow between them.
    """

    variant: str
    question: str
    wish: Wish
    rotations: tuple[Tables, ...]
    before: float
    after: float
    random_mean: float
    random_best: float
    random_count: int
    every: int | None
    starts: int
    as_good: int
    finished: bool
    hear_nobody: tuple[tuple[str, ...], ...]
    apart_groups: int


def seated_people(variant: Variant) -> tuple[str, ...]:
    """Ids of those who are given a chair: all who are present."""
    return tuple(person.id for person in variant.people if person.present)


def table_sizes(people: int, wish: Wish) -> tuple[int, ...]:
    """How many sit at each table, as equal as can be. Raises DeliberateError where nobody could talk."""
    if people < 2:
        raise DeliberateError(f"tables need at least two people who are present, not {people}")
    if (wish.tables is None) == (wish.size is None):
        raise DeliberateError("give either the number of tables or the number of people at one")
    if wish.tables is None:
        if wish.size is None or wish.size < 2:
            raise DeliberateError(f"at a table sit at least two, not {wish.size}")
        tables = min(ceil(people / wish.size), people // 2)
    else:
        tables = wish.tables
    if tables < 1:
        raise DeliberateError(f"there must be at least one table, not {tables}")
    if people // tables < 2:
        raise DeliberateError(
            f"{in_words(tables, 'table', 'tables')} for {in_words(people, 'person', 'people')} would leave somebody "
            f"alone at one: lay at most {people // 2}"
        )
    return tuple(people // tables + (table < people % tables) for table in range(tables))
