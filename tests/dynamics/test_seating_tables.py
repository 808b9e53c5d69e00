import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from seats import Circle
from talk import network_of

from deliberate.dynamics.progress import never
from deliberate.dynamics.seating.search import _ends
from deliberate.dynamics.seating.tables import TableTalk

ROOMS = {"plain": {}, "firm": {"firm": True}, "absent": {"absent": (1, 4)}, "few arrows": {"arrows": 0.15}}


def seats_of(split, chairs, empty):
    return np.array([[*table, *(empty,) * (chairs - len(table))] for table in split])


@pytest.mark.parametrize("unheard", ["own", "rescale"])
@pytest.mark.parametrize("reach", [None, 30.0])
@pytest.mark.parametrize("kind", ROOMS)
@settings(max_examples=25)
@given(seed=st.integers(0, 10_000))
def test_views_at_tables_are_those_of_the_rounds(kind, reach, unheard, seed):
    circle = Circle(9, seed, unheard=unheard, reach=reach, rounds=3, **ROOMS[kind])
    people = np.random.default_rng(seed).permutation(circle.people).tolist()
    half = len(people) // 2
    first, second = (tuple(people[:half]), tuple(people[half:])), (tuple(people[::2]), tuple(people[1::2]))
    before, after = circle.plenary(1), circle.plenary(2)
    courses = np.stack([seats_of(split, 5, 9) for split in (first, second)])[None]
    ends = _ends(circle.spread(before, after), courses, never)[0]
    np.testing.assert_allclose(ends, circle.end(first, second, before=before, after=after), rtol=0, atol=1e-10)


@pytest.mark.parametrize("unheard", ["own", "rescale"])
@pytest.mark.parametrize("kind", ROOMS)
@settings(max_examples=25)
@given(seed=st.integers(0, 10_000))
def test_voices_at_tables_are_what_unit_starts_give(kind, unheard, seed):
    circle = Circle(8, seed, unheard=unheard, **ROOMS[kind])
    people = circle.people.tolist()
    half = len(people) // 2
    first, second = (tuple(people[:half]), tuple(people[half:])), (tuple(people[::2]), tuple(people[1::2]))
    before, after = circle.plenary(1), circle.plenary(2)
    courses = np.stack([seats_of(split, 4, 8) for split in (first, second)])[None]
    aim = circle.voices(before, after)
    counts = _ends(aim, courses, never)[0]
    np.testing.assert_allclose(counts, circle.counts(first, second, before=before, after=after), rtol=0, atol=1e-12)
    assert counts.sum() == pytest.approx(1)
    assert aim.figures(counts[None])[0] == pytest.approx(1 / (counts @ counts))


def test_two_at_a_table_by_hand():
    # Everybody gives herself and each one she hears alike; 2 and 3 do not hear each other.
    network = network_of([[1, 1, 1, 0], [1, 1, 0, 1], [1, 0, 1, 0], [0, 1, 0, 1]])
    starts = np.array([0.0, 10.0, 20.0, 30.0])
    seats = np.array([[0, 1], [2, 3]])
    spread_out = TableTalk(network, np.zeros(4), starts, 1, "rescale")
    np.testing.assert_allclose(spread_out.views(seats, starts[seats][..., None])[..., 0], [[5, 5], [20, 30]])
    kept = TableTalk(network, np.zeros(4), starts, 1, "own")
    np.testing.assert_allclose(kept.views(seats, starts[seats][..., None])[..., 0], [[10 / 3, 20 / 3], [20, 30]])
    assert spread_out.hears(seats).tolist() == [[True, True], [False, False]]


def test_weights_of_any_size_neither_overflow_nor_vanish():
    for size in (1e-300, 1e300):
        network = network_of(np.array([[1.0, 3.0], [0.0, 2.0]]) * size)
        starts = np.array([0.0, 100.0])
        talk = TableTalk(network, np.zeros(2), starts, 1, "rescale")
        np.testing.assert_allclose(talk.views(np.array([[0, 1]]), starts[None, :, None])[0, :, 0], [75, 100])
