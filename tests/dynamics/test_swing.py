import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from talk import network_of, plenary

from deliberate.dynamics.longrun import long_run
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import play
from deliberate.dynamics.shares import heard_in_silence

SETTLED = 1_200  # rounds; a multiple of every period below


def rings_and_listeners(lengths: list[int], listeners: int, seed: int) -> np.ndarray:
    """Rings of these lengths, and people outside who hear them and each other."""
    inside = sum(lengths)
    points = np.zeros((inside + listeners, inside + listeners))
    first = 0
    for length in lengths:
        for at in range(length):
            points[first + at, first + (at + 1) % length] = 1.0
        first += length
    points[inside:] = np.random.default_rng(seed).integers(0, 3, points[inside:].shape)
    points[inside:, 0] += 1
    return points


@given(st.lists(st.sampled_from((1, 2, 3, 4, 6)), min_size=1, max_size=3), st.integers(0, 3), st.integers(0, 50))
def test_the_lists_are_what_rounds_come_to_in_their_order(lengths, listeners, seed):
    points = rings_and_listeners(lengths, listeners, seed)
    starts = np.random.default_rng(seed).uniform(0, 1, len(points))
    found = long_run(plenary(points), starts)
    period = math.lcm(*lengths)
    lists = found.limit[None, :] if period == 1 else found.cycle
    assert len(lists) == period
    played = play(plenary(points), starts, SETTLED + period)
    for at, expected in enumerate(lists):
        assert played[SETTLED + at] == pytest.approx(expected, abs=1e-9)


@given(st.integers(0, 5), st.integers(0, 50))
def test_the_first_list_is_that_of_round_0_whatever_comes_before(rounds, seed):
    points = rings_and_listeners([3], 2, seed)
    network = network_of(points)
    blocks = (Block(None, "own", 1),)
    if rounds:
        blocks = (Block(heard_in_silence(network), "own", rounds), *blocks)
    process = Process(network, blocks, False, np.zeros(5))
    starts = np.random.default_rng(seed).uniform(0, 1, 5)
    found = long_run(process, starts)
    played = play(process, starts, SETTLED + 3)
    for at in range(3):
        assert played[SETTLED + at] == pytest.approx(found.cycle[at], abs=1e-9)


def test_phases_of_unequal_size_swing_by_their_means():
    """Two who answer three and three who answer two: each side takes over the other's mean, weighed by its points."""
    points = np.zeros((5, 5))
    points[:2, 2:] = [[2, 1, 1], [1, 1, 2]]
    points[2:, :2] = [[1, 0], [1, 1], [0, 1]]
    found = long_run(plenary(points), [0.2, 0.4, 1, 1, 0])
    share = found.groups[0].influence
    first = share[:2] @ [0.2, 0.4] / share[:2].sum()
    second = share[2:] @ [1, 1, 0] / share[2:].sum()
    assert share[:2].sum() == pytest.approx(0.5, rel=1e-14)
    assert found.cycle == pytest.approx(np.array([[first] * 2 + [second] * 3, [second] * 2 + [first] * 3]))
    assert found.average == pytest.approx(np.full(5, (first + second) / 2))


def test_the_least_period_that_the_starts_show_is_reported():
    points = rings_and_listeners([6], 1, 0)
    halves = long_run(plenary(points), [0, 1, 0, 1, 0, 1, 0.5])
    assert halves.cycle_period == len(halves.cycle) == 2
    assert halves.groups[0].period == 6
    thirds = long_run(plenary(points), [0, 1, 2, 0, 1, 2, 0.5], scale_width=2)
    assert thirds.cycle_period == 3
    still = long_run(plenary(points), [0.3] * 6 + [0.9])
    assert still.settles
    assert still.cycle_period is None


def test_a_difference_below_rounding_is_no_swing():
    points = [[0.0, 1], [1, 0]]
    assert long_run(plenary(points), [0.5, 0.5 + 1e-13]).settles
    assert not long_run(plenary(points), [0.5, 0.5 + 1e-11]).settles
    assert long_run(plenary(points), [50, 50 + 1e-11], scale_width=100).settles


@pytest.mark.parametrize("length", [2, 3, 5, 12])
def test_listeners_of_a_swing_follow_it_damped_and_late(length):
    """A listener who gives half to her own view holds the mean of what she heard, halved every round further back."""
    points = np.zeros((length + 1, length + 1))
    points[np.arange(length), (np.arange(length) + 1) % length] = 1.0
    points[length, [length, 0]] = 1.0
    starts = np.append(np.random.default_rng(length).uniform(0, 1, length), 0.5)
    cycle = long_run(plenary(points), starts).cycle
    # Going round once brings her back: h = 2^-d h + sum of 2^-k c[-k], summed by hand.
    heard = cycle[:, 0]
    expected = sum(2.0**-k * heard[-k] for k in range(1, length + 1)) / (1 - 2.0**-length)
    assert cycle[0, length] == pytest.approx(expected, rel=1e-12)
