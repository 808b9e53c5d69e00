"""Where it leads with firm people, with stages one after the other or repeated, and when it swings."""

import numpy as np
import pytest
from talk import network_of, plenary, ring

from deliberate.dynamics.longrun import END_OF_PASS, TOO_LONG, final_map, long_run
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import play
from deliberate.dynamics.shares import heard_at_tables, heard_in_silence


def groups_of(found) -> list[tuple[list[int], int, bool]]:
    return [(group.members.tolist(), group.period, group.anchored) for group in found.groups]


def test_whoever_hears_only_firm_people_comes_to_their_starts():
    found = long_run(plenary([[1, 0, 0], [0, 1, 0], [1, 3, 0]], [1, 1, 0]), [0, 1, 0.5])
    assert found.limit.tolist() == [0, 1, 0.75]
    assert groups_of(found) == [([0], 1, True), ([1], 1, True)]
    assert found.outside.tolist() == [2]
    assert found.influence == pytest.approx([1.25 / 3, 1.75 / 3, 0], rel=1e-14)


def test_a_group_with_nobody_firm_is_plain_averaging_beside_firm_people():
    points = np.kron(np.eye(2), np.ones((2, 2)))
    found = long_run(plenary(points, [0, 0, 0.5, 0]), [0, 1, 0.2, 0.9])
    assert found.limit == pytest.approx([0.5, 0.5, 0.2, 0.2], rel=1e-14)
    assert groups_of(found) == [([0, 1], 1, False), ([2], 1, True)]
    assert found.outside.tolist() == [3]


def test_one_firm_person_is_a_common_view_from_any_start():
    found = long_run(plenary(np.ones((3, 3)), [0.1, 0, 0]), [0.3, 0.9, 0.6])
    assert found.consensus_from_any_start
    assert found.limit == pytest.approx([0.3] * 3, rel=1e-14)


def test_firmness_ends_a_swing():
    swing = [[0, 1], [1, 0]]
    assert not long_run(plenary(swing), [0, 1]).settles
    held = long_run(plenary(swing, [0.5, 0]), [0, 1])
    assert held.settles_from_any_start
    assert held.limit == pytest.approx([0, 0], abs=1e-15)


def test_a_swing_that_these_starts_do_not_show():
    found = long_run(plenary([[0, 1], [1, 0]]), [0.4, 0.4])
    assert found.settles
    assert not found.settles_from_any_start
    assert found.limit.tolist() == [0.4, 0.4]
    assert found.rate is None


def test_stages_before_the_last_are_carried_back_to_the_starts():
    """At two tables first, then everybody hears only person 0: her table's mean is the result."""
    network = network_of([[1, 1, 0, 0], [1, 1, 0, 0], [0, 0, 1, 1], [1, 0, 0, 0]])
    tables = heard_at_tables(network, [0, 0, 1, 1])
    process = Process(network, (Block(tables, "own", 1), Block(None, "own", 5)), False, np.zeros(4))
    found = long_run(process, [0, 1, 0.5, 0.5])
    assert found.limit == pytest.approx([0.5] * 4)
    assert found.influence == pytest.approx([0.5, 0.5, 0, 0])
    assert found.outside.tolist() == [2, 3]


def test_single_stages_say_nothing_about_their_repetition():
    """Each of two stages swings between its own pair; gone through again and again they settle on one view."""
    points = np.array([[0, 1, 0, 1], [1, 0, 1, 0], [0, 1, 0, 1], [1, 0, 1, 0]], dtype=float)
    network = network_of(points + np.eye(4) * 0.5)
    one, two = heard_at_tables(network, [0, 0, 1, 1]), heard_at_tables(network, [0, 1, 1, 0])
    again = Process(network, (Block(one, "rescale", 1), Block(two, "rescale", 1)), True, np.zeros(4))
    found = long_run(again, [0, 0.2, 0.6, 1])
    assert found.consensus_from_any_start
    assert np.ptp(found.limit) < 1e-15
    last = Process(network, (Block(one, "rescale", 1), Block(two, "rescale", 1)), False, np.zeros(4))
    assert len(long_run(last, [0, 0.2, 0.6, 1]).groups) == 2
    assert found.rate**2 == pytest.approx(np.sort(np.abs(np.linalg.eigvals(final_map(again, 2))))[-2], rel=1e-9)


def test_a_repeated_plan_in_which_beliefs_move_says_so():
    network = network_of(np.ones((2, 2)))
    silence = Block(heard_in_silence(network), "own", 1)
    process = Process(network, (silence, Block(None, "own", 1)), True, np.array([0.5, 0.0]))
    found = long_run(process, [0, 1])
    assert END_OF_PASS not in found.notes  # everybody comes to what is brought back
    apart = Process(network, process.blocks, True, np.array([0.5, 0.5]))
    moving = long_run(apart, [0, 1])
    assert END_OF_PASS in moving.notes
    end = play(apart, [0, 1], 400)
    assert moving.limit == pytest.approx(end[400], abs=1e-12)
    assert np.abs(end[399] - end[400]).max() > 0.1


def test_swings_too_long_to_list_are_named_only():
    lengths = [2, 3, 5, 7, 11, 13, 17, 19]
    points = np.zeros((sum(lengths), sum(lengths)))
    first = 0
    for length in lengths:
        for at in range(length):
            points[first + at, first + (at + 1) % length] = 1.0
        first += length
    found = long_run(plenary(points), np.arange(len(points)) % 7.0, scale_width=6)
    assert found.cycle_period == 9699690
    assert found.cycle is None
    assert not found.settles
    assert TOO_LONG.format(period=9699690) in found.notes


def test_a_ring_of_even_length_swings_between_its_halves():
    """Levin, Peres and Wilmer, ch. 12 (from memory): period 2 for an even ring; a lazy ring settles."""
    starts = np.arange(8) / 7
    found = long_run(plenary(ring(8)), starts)
    evens, odds = starts[::2].mean(), starts[1::2].mean()
    assert found.cycle == pytest.approx(np.array([[evens, odds] * 4, [odds, evens] * 4]), rel=1e-12)
    assert long_run(plenary(ring(8, 2.0)), starts).limit == pytest.approx(np.full(8, 0.5), rel=1e-12)


def test_nobody_has_a_long_run():
    found = long_run(plenary(np.zeros((0, 0))), [])
    assert found.groups == ()
    assert found.settles
    assert len(found.limit) == len(found.influence) == 0


def test_results_never_change():
    found = long_run(plenary([[0, 1, 0], [1, 0, 0], [1, 1, 1]]), [0, 1, 0.5])
    for values in (found.average, found.cycle, found.influence, found.groups[0].influence, found.groups[0].phases):
        with pytest.raises(ValueError, match="read-only"):
            values[0] = 7
