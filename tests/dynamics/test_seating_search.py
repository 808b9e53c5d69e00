from itertools import product

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from seats import Circle, as_split, splits

from deliberate.dynamics.seating.conditions import Apart, Linked, OneAtEvery, Together, cannot_be_met, find_seating
from deliberate.dynamics.seating.drawing import NoSeatingError, draw_seatings
from deliberate.dynamics.seating.every import every_seating, how_many
from deliberate.dynamics.seating.moves import all_moves
from deliberate.dynamics.seating.search import search


@pytest.mark.parametrize(
    ("sizes", "ways"), [((4, 4), 35), ((4, 4, 4), 5_775), ((4, 4, 4, 4), 2_627_625), ((3, 2), 10), ((2, 2, 1), 15)]
)
def test_how_many_ways_there_are(sizes, ways):
    # The number of ways to split a set into blocks of given sizes, e.g. 12! / (4!^3 3!) = 5,775 (from memory).
    assert how_many(sizes) == ways


@pytest.mark.parametrize("sizes", [(2, 2), (3, 3), (3, 2), (2, 2, 2), (3, 2, 2), (4, 3), (3, 3, 2)])
def test_every_seating_is_listed_once(sizes):
    people = sum(sizes)
    listed = [as_split(seats, people) for seats in every_seating(np.arange(people), sizes, people)]
    assert len(listed) == len(set(listed)) == how_many(sizes)
    assert set(listed) == set(splits(tuple(range(people)), sizes))


@pytest.mark.parametrize("reach", [None, 35.0])
@pytest.mark.parametrize(("sizes", "stages"), [((3, 3), 1), ((3, 3), 2), ((3, 2), 3), ((2, 2, 2), 2), ((4, 3), 2)])
@pytest.mark.parametrize("seed", [1, 2])
def test_the_best_seating_is_that_of_brute_force(sizes, stages, reach, seed):
    people = sum(sizes)
    circle = Circle(people, seed, reach=reach, firm=seed == 2)
    after = circle.plenary(1)
    ways = list(splits(tuple(range(people)), sizes))
    best = min(np.ptp(circle.end(*course, after=after)) for course in product(ways, repeat=stages))
    found = search(circle.spread(None, after), circle.room(*sizes), stages)
    assert found.every == len(ways) ** stages
    shown = np.ptp(circle.end(*(as_split(seats, people) for seats in found.seats), after=after))
    assert shown == pytest.approx(best, abs=1e-9)
    local = search(circle.spread(None, after), circle.room(*sizes), stages, exact=False, effort=0.02)
    assert local.every is None
    assert local.cost == pytest.approx(found.cost, abs=1e-6)


@pytest.mark.parametrize("stages", [1, 2])
@pytest.mark.parametrize("seed", [3, 4])
def test_the_most_even_voices_are_those_of_brute_force(stages, seed):
    circle = Circle(6, seed, firm=seed == 4)
    before = circle.plenary(1)
    ways = list(splits(tuple(range(6)), (3, 3)))
    best = max(
        1 / (c @ c) for course in product(ways, repeat=stages) for c in [circle.counts(*course, before=before)]
    )
    for exact in (True, False):
        found = search(circle.voices(before), circle.room(3, 3), stages, exact=exact, effort=0.02)
        counts = circle.counts(*(as_split(seats, 6) for seats in found.seats), before=before)
        assert _voices(counts) == pytest.approx(best)
        assert 1 / found.cost == pytest.approx(best)


def _voices(counts):
    return 1 / (counts @ counts)


def test_conditions_narrow_the_brute_force():
    circle = Circle(7, 5)
    conditions = (Together((0, 1)), Apart((2, 3)), OneAtEvery((4, 5)), Linked())
    linked = circle.talk.linked()

    def kept(split):
        return all(
            (0 in table) == (1 in table)
            and not {2, 3} <= set(table)
            and {4, 5} & set(table)
            and all(any(linked[one, other] for other in table) for one in table)
            for table in split
        )

    ways = [split for split in splits(tuple(range(7)), (4, 3)) if kept(split)]
    assert 1 < len(ways) < how_many((4, 3))
    best = min(np.ptp(circle.end(*course)) for course in product(ways, repeat=2))
    room = circle.room(4, 3, conditions=conditions)
    for exact in (True, False):
        found = search(circle.spread(), room, 2, exact=exact, effort=0.05)
        assert all(as_split(seats, 7) in ways for seats in found.seats)
        assert found.cost == pytest.approx(best, abs=1e-4)


@settings(max_examples=40)
@given(seed=st.integers(0, 10_000))
def test_draws_and_moves_keep_conditions_and_people(seed):
    circle = Circle(13, seed, arrows=0.4)
    room = circle.room(
        5, 4, 4, conditions=(Together((0, 1)), Together((1, 2)), Apart((3, 4)), OneAtEvery((5, 6, 7, 8)))
    )
    draw = np.random.default_rng(seed)
    for seats in draw_seatings(room, 5, draw, lambda: False):
        _check(room, seats)
        for moves in all_moves(room, seats, room.units(), draw, 16):
            for tables, after in zip(moves.tables, moves.seats, strict=True):
                moved = seats.copy()
                moved[tables] = after
                _check(room, moved)
                assert (moved != seats).any()


def _check(room, seats):
    taken = seats[seats < room.everybody]
    assert sorted(taken.tolist()) == room.people.tolist()
    assert sorted((seats < room.everybody).sum(axis=1).tolist()) == sorted(room.sizes)
    table_of = {person: table for table, row in enumerate(seats.tolist()) for person in row}
    assert table_of[0] == table_of[1] == table_of[2]
    assert table_of[3] != table_of[4]
    assert {table_of[one] for one in (5, 6, 7, 8)} == {0, 1, 2}


def test_hard_conditions_that_hardly_any_draw_meets_are_met_all_the_same():
    circle = Circle(24, 6)
    # Pairs that stay together and two of every three apart: one draw in many millions.
    pairs = tuple(Together((at, at + 1)) for at in range(0, 16, 2))
    room = circle.room(*(4,) * 6, conditions=(*pairs, Apart((0, 2, 4, 6, 8, 10)), OneAtEvery(tuple(range(12, 23)))))
    found = search(circle.spread(), room, 2, effort=0.05)
    assert all(room.fits(seats).all() for seats in found.seats)
    assert found.random_figures.min() >= found.cost - 1e-4


def test_what_cannot_be_met_is_named_and_nothing_else():
    circle = Circle(12, 7)
    clash = (Together((0, 1)), Together((1, 2)), Apart((0, 2)))
    room = circle.room(4, 4, 4, conditions=(Apart((5, 6)), *clash, OneAtEvery((3, 4, 7))))
    assert find_seating(room) is None
    assert set(cannot_be_met(room)) == set(clash)
    with pytest.raises(NoSeatingError) as raised:
        search(circle.spread(), room, 1)
    assert raised.value.proven


def test_four_who_must_all_part_do_not_fit_at_three_tables():
    circle = Circle(9, 8)
    room = circle.room(3, 3, 3, conditions=(Together((6, 7)), Apart((0, 1, 2, 3))))
    assert cannot_be_met(room) == (Apart((0, 1, 2, 3)),)


def test_a_seed_repeats_and_another_draws_anew():
    circle = Circle(20, 9)
    one, same, other = (search(circle.spread(), circle.room(5, 5, 5, 5), 2, seed=s, effort=0.05) for s in (1, 1, 2))
    assert (one.seats == same.seats).all()
    assert one.cost == same.cost
    assert (one.random_figures == same.random_figures).all()
    assert not np.array_equal(one.random_figures, other.random_figures)


@pytest.mark.parametrize("aim", ["spread", "voices"])
def test_it_is_never_worse_than_the_best_at_random(aim):
    for seed in range(5):
        circle = Circle(18, seed, firm=True)
        chosen = getattr(circle, aim)()
        found = search(chosen, circle.room(6, 6, 6), 2, effort=0.02, seed=seed)
        ends = found.random_figures
        assert len(ends) == 1_000
        best = ends.min() if aim == "spread" else ends.max()
        told = found.cost if aim == "spread" else 1 / found.cost
        assert told <= best + 1e-3 if aim == "spread" else told >= best - 1e-9


def test_it_stops_when_told_and_tells_how_far_it_is():
    circle = Circle(30, 10)
    told: list[float] = []
    whole = search(circle.spread(), circle.room(*(5,) * 6), 2, effort=0.05, progress=told.append)
    assert told == sorted(told)
    assert told[-1] == 1.0
    assert not whole.stopped
    asked = iter(range(10_000))
    stopped = search(circle.spread(), circle.room(*(5,) * 6), 2, stopped=lambda: next(asked) > 40)
    assert stopped.stopped
    assert stopped.cost <= stopped.random_figures.min() + 1e-4
    at_once = search(circle.spread(), circle.room(*(5,) * 6), 2, stopped=lambda: True)
    assert at_once.stopped
    assert len(at_once.seats) == 2


def test_stopping_while_all_are_tried_keeps_the_best_so_far():
    circle = Circle(8, 11)
    asked = iter(range(10_000))
    found = search(circle.spread(), circle.room(4, 4), 2, stopped=lambda: next(asked) > 5)
    assert found.stopped
    assert found.every is None


def test_one_table_leaves_nothing_to_choose():
    circle = Circle(5, 12)
    found = search(circle.spread(), circle.room(5), 1)
    assert found.every == 1
    local = search(circle.spread(), circle.room(5), 1, exact=False, effort=0.001)
    assert local.cost == pytest.approx(found.cost)
