"""Where it leads: published values, exact fractions, and what must hold for any talk."""

from fractions import Fraction

import networkx as nx
import numpy as np
import pytest
from exact import assert_close, closed_groups, exact_shares, long_run_map, mean_of_columns
from exact import period as exact_period
from hypothesis import assume, given
from hypothesis import strategies as st
from quantecon.markov import MarkovChain
from talk import (
    FAR_APART,
    FIRMNESS,
    as_numbers,
    in_other_order,
    plenary,
    point_matrices,
    starts_of,
    talks,
)

from deliberate.dynamics.longrun import final_map, long_run
from deliberate.dynamics.network import Network
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import play
from deliberate.dynamics.shares import heard_in_silence

FRIEDKIN = [[0.220, 0.120, 0.360, 0.300], [0.147, 0.215, 0.344, 0.294], [0, 0, 1, 0], [0.090, 0.178, 0.446, 0.286]]


def groups_of(found) -> list[tuple[list[int], int, bool]]:
    return [(group.members.tolist(), group.period, group.anchored) for group in found.groups]


# Published values


def test_degroot():
    """DeGroot 1974, JASA 69:118-121 (from memory)."""
    found = long_run(plenary([[1 / 2, 1 / 2], [1 / 4, 3 / 4]]), [0, 1])
    assert found.influence == pytest.approx([1 / 3, 2 / 3], rel=1e-12)
    assert found.limit == pytest.approx([2 / 3, 2 / 3], rel=1e-12)
    assert found.rate == pytest.approx(1 / 4, rel=1e-12)
    third = long_run(plenary([[1 / 2, 1 / 2, 0], [1 / 4, 3 / 4, 0], [1 / 3, 1 / 3, 1 / 3]]), [0, 1, 0])
    assert third.influence == pytest.approx([1 / 3, 2 / 3, 0], rel=1e-12)
    assert third.influence[2] == 0
    assert third.outside.tolist() == [2]
    blocks = long_run(plenary(np.kron(np.eye(2), np.full((2, 2), 0.5))), [0, 1, 2, 5])
    assert groups_of(blocks) == [([0, 1], 1, False), ([2, 3], 1, False)]
    assert blocks.limit == pytest.approx([0.5, 0.5, 3.5, 3.5])
    assert blocks.settles_from_any_start
    assert not blocks.consensus_from_any_start


@given(point_matrices())
def test_berger(written):
    """Berger 1981, JASA 76:415-418 (condition seen quoted): a common view from every start if and only if there is
    one closed group and its period is 1; then and only then do high powers of T have equal rows."""
    found = long_run(plenary(as_numbers(written)), np.zeros(len(written)))
    exact = exact_shares(written)
    groups = closed_groups(exact)
    assert found.consensus_from_any_start == (len(groups) == 1 and exact_period(exact, groups[0]) == 1)
    power = np.linalg.matrix_power(np.array(exact, dtype=float), 2**14)
    assert found.consensus_from_any_start == (np.ptp(power, axis=0).max() < 1e-6)


def test_friedkin_and_johnsen():
    """Friedkin and Johnsen 1999, Advances in Group Processes 16:1-29 (quoted; also in Parsegov et al. 2017)."""
    process = plenary(FRIEDKIN, np.diag(FRIEDKIN))
    found = long_run(process, [25, 25, 75, 85])
    assert np.round(found.limit).tolist() == [60, 60, 75, 75]
    assert found.limit == pytest.approx([60.0208, 59.9840, 75, 74.9862], abs=5e-5)
    effects = np.array([long_run(process, start).limit for start in np.eye(4)]).T
    printed = [[0.280, 0.045, 0.551, 0.124], [0.047, 0.278, 0.549, 0.126], [0, 0, 1, 0], [0.030, 0.048, 0.532, 0.390]]
    assert effects == pytest.approx(np.array(printed), abs=0.0015)
    assert found.influence == pytest.approx(effects.mean(axis=0), rel=1e-12)
    assert all(group.anchored for group in found.groups)
    assert len(found.outside) == 0


def test_grinstead_and_snell():
    """Grinstead and Snell 1997, ch. 11 (chains quoted): Land of Oz, drunkard's walk, Ehrenfest urn."""
    oz = long_run(plenary([[2, 1, 1], [1, 0, 1], [1, 1, 2]]), [0, 1, 5])
    assert oz.influence == pytest.approx([2 / 5, 1 / 5, 2 / 5], rel=1e-12)
    assert oz.rate == pytest.approx(1 / 4, rel=1e-9)
    corners = np.diag([1.0, 0, 0, 0, 1]) + np.diag([0, 1.0, 1, 1], 1) + np.diag([1.0, 1, 1, 0], -1)
    walk = long_run(plenary(corners), [0, 9, 9, 9, 1])
    assert walk.limit == pytest.approx([0, 1 / 4, 1 / 2, 3 / 4, 1], rel=1e-12)
    assert walk.outside.tolist() == [1, 2, 3]
    urn = long_run(plenary(np.diag([4.0, 3, 2, 1], 1) + np.diag([1.0, 2, 3, 4], -1)), [0, 1, 0, 1, 0])
    assert groups_of(urn) == [([0, 1, 2, 3, 4], 2, False)]
    assert urn.groups[0].influence == pytest.approx(np.array([1, 4, 6, 4, 1]) / 16, rel=1e-12)
    assert not urn.settles
    assert urn.limit is None
    assert urn.rate is None
    assert urn.cycle == pytest.approx(np.array([[0, 1, 0, 1, 0], [1, 0, 1, 0, 1]]))
    assert urn.average == pytest.approx(np.full(5, 0.5))


def test_grinstead_and_snell_fundamental_matrix():
    """Grinstead and Snell 1997, ch. 11 (Z from memory): Z = (I - T + W)^-1 = sum over rounds of (T^t - W), plus W."""
    process = plenary([[2, 1, 1], [1, 0, 1], [1, 1, 2]])
    lasting = np.tile(long_run(process, np.zeros(3)).influence, (3, 1))
    total = lasting + sum(final_map(process, rounds) - lasting for rounds in range(60))
    printed = np.array([[86, 3, -14], [6, 63, 6], [-14, 3, 86]]) / 75
    assert total == pytest.approx(printed, abs=1e-13)


def test_jarvis_and_shier():
    """Jarvis and Shier, Graph-Theoretic Analysis of Finite Markov Chains, ex. 3 (quoted)."""
    points = [
        [1, 0, 0, 0, 0, 0],
        [0, 0, 0, 0, 1, 0],
        [0, 0, 1, 1, 1, 0],
        [1, 0, 0, 0, 0, 1],
        [0, 1, 0, 0, 1, 0],
        [1, 0, 0, 1, 0, 0],
    ]
    found = long_run(plenary(points), np.zeros(6))
    assert groups_of(found) == [([0], 1, False), ([1, 4], 1, False)]
    assert found.groups[1].influence == pytest.approx([1 / 3, 2 / 3], rel=1e-12)
    row = [long_run(plenary(points), start).limit[2] for start in np.eye(6)]
    assert row == pytest.approx([1 / 2, 1 / 6, 0, 0, 1 / 3, 0], rel=1e-12)


@pytest.mark.parametrize(
    ("graph", "expected"), [("karate", {33: 17 / 156, 0: 16 / 156}), ("florence", {"Medici": 6 / 40})]
)
def test_with_equal_points_to_every_neighbour_influence_is_degree(graph, expected):
    """Random walk on an undirected graph, exact: degree over total. Data sets inside networkx: Zachary 1977, and the
    Florentine families (Padgett and Ansell 1993)."""
    drawn = nx.karate_club_graph() if graph == "karate" else nx.florentine_families_graph()
    degrees = np.array([degree for _, degree in drawn.degree()])
    found = long_run(plenary(nx.to_numpy_array(drawn, weight=None)), np.zeros(len(degrees)))
    assert found.influence == pytest.approx(degrees / degrees.sum(), rel=1e-12)
    for member, share in expected.items():
        assert found.influence[list(drawn).index(member)] == pytest.approx(share, rel=1e-12)


def test_with_weights_influence_is_strength():
    """Random walk on an undirected weighted graph, exact: strength over total."""
    weights = nx.to_numpy_array(nx.karate_club_graph())
    found = long_run(plenary(weights), np.zeros(len(weights)))
    assert found.influence == pytest.approx(weights.sum(axis=1) / weights.sum(), rel=1e-12)


@pytest.mark.parametrize(("a", "b"), [(0.3, 0.2), (0.01, 0.6)])
def test_how_influence_answers_to_a_share(a, b):
    """Schweitzer 1968, J. Appl. Prob. 5:401; Meyer 1975, SIAM Rev. 17:443 (from memory): for T = [[1-a, a],
    [b, 1-b]] d(influence)/da = (-b, b)/(a+b)^2."""

    def influence(share):
        return long_run(plenary([[1 - share, share], [b, 1 - b]]), [0, 1]).influence

    step = 1e-4 * a
    slope = (influence(a + step) - influence(a - step)) / (2 * step)
    assert slope == pytest.approx(np.array([-b, b]) / (a + b) ** 2, rel=1e-6)


@pytest.mark.parametrize("people", [3, 8, 40, 150])
def test_the_hub_of_a_star(people):
    """DeMarzo, Vayanos and Zwiebel 2003, QJE 118:909 (setting; own formula): hub n/(3n-2), leaf 2/(3n-2)."""
    points = np.eye(people)
    points[0] = points[:, 0] = 1.0
    influence = long_run(plenary(points), np.zeros(people)).influence
    assert influence == pytest.approx(np.array([people] + [2] * (people - 1)) / (3 * people - 2), rel=1e-12)


def test_camps_that_hardly_hear_each_other_keep_their_digits():
    """A cross weight of 1e-14 (Grassmann, Taksar and Heyman 1985), entry by entry."""
    written = [
        ["0.5", "0.5", "1e-14", "0"],
        ["0.25", "0.75", "0", "0"],
        ["0", "3e-14", "0.5", "0.5"],
        ["0", "0", "0.125", "0.875"],
    ]
    found = long_run(plenary(as_numbers(written)), [0, 0, 1, 1])
    exact = long_run_map(exact_shares(written))
    assert_close(found.influence, mean_of_columns(exact))
    assert_close(found.limit, [row[2] + row[3] for row in exact])


# Exact fractions


@given(point_matrices(st.integers(1, 6), FAR_APART), st.data())
def test_influence_and_averages_right_to_twelve_digits(written, data):
    """Entry by entry, with points and firmness of any size."""
    people = len(written)
    firmness = data.draw(st.lists(st.sampled_from((*FIRMNESS, 1e-12)), min_size=people, max_size=people))
    starts = np.array(data.draw(st.lists(st.integers(0, 9), min_size=people, max_size=people)), dtype=float)
    exact = long_run_map(exact_shares(written), [Fraction(f) for f in firmness])
    found = long_run(plenary(as_numbers(written), firmness), starts)
    assert_close(found.influence, mean_of_columns(exact))
    average = [sum(share * int(start) for share, start in zip(row, starts, strict=True)) for row in exact]
    assert_close(found.average, average)


def test_a_committee_of_forty_right_to_twelve_digits():
    generator = np.random.default_rng(11)
    written = generator.choice(["0"] * 9 + ["1", "4", "1e-12", "0.3e-6"], (40, 40)).tolist()
    exact = long_run_map(exact_shares(written))
    found = long_run(plenary(as_numbers(written)), np.zeros(40))
    assert_close(found.influence, mean_of_columns(exact))


@given(point_matrices())
def test_influence_within_groups_as_quantecon_finds_it(written):
    chain = MarkovChain(np.array(exact_shares(written), dtype=float))
    found = long_run(plenary(as_numbers(written)), np.zeros(len(written)))
    ours = {tuple(group.members.tolist()): group.influence for group in found.groups}
    for members, vector in zip(chain.recurrent_classes_indices, chain.stationary_distributions, strict=True):
        assert ours[tuple(sorted(members.tolist()))] == pytest.approx(vector[np.sort(members)], rel=1e-11)


# What must hold for any talk


@given(talks())
def test_what_holds_for_any_long_run(talk):
    process, starts = talk
    found = long_run(process, starts)
    assert found.influence.sum() == pytest.approx(1, abs=1e-13)
    assert (found.influence >= 0).all()
    assert found.influence @ starts == pytest.approx(found.average.mean(), abs=1e-12)
    assert found.average.min() >= starts.min() - 1e-13
    assert found.average.max() <= starts.max() + 1e-13
    assert all(group.influence.sum() == pytest.approx(1) for group in found.groups)
    assert all((group.influence > 0).all() for group in found.groups)
    assert found.settles_from_any_start == all(group.period == 1 for group in found.groups)
    assert found.settles or not found.settles_from_any_start
    assert (found.limit is None) == (not found.settles)
    assert (found.cycle is None) == found.settles
    assert (found.rate is None) == (not found.settles_from_any_start)
    in_groups = {person for group in found.groups for person in group.members.tolist()}
    assert in_groups.isdisjoint(found.outside.tolist())
    assert in_groups | set(found.outside.tolist()) == set(range(len(starts)))


@given(talks())
def test_the_limit_or_the_cycle_is_what_many_rounds_come_to(talk):
    process, starts = talk
    found = long_run(process, starts)
    turn = sum(block.rounds for block in process.blocks) if process.repeat else 1
    lists = found.limit[None, :] if found.cycle is None else found.cycle
    assume(found.rate is None or found.rate < 0.99)
    many = len(lists) * (1_500 // len(lists) + 1)
    played = play(process, starts, (many + len(lists)) * turn)[::turn]
    for at, expected in enumerate(lists):
        assert played[many + at] == pytest.approx(expected, abs=1e-9)
    assert lists.mean(axis=0) == pytest.approx(found.average, abs=1e-13)


@given(talks())
def test_another_turn_leaves_the_limit_or_moves_the_cycle_on(talk):
    process, starts = talk
    found = long_run(process, starts)
    lists = found.limit[None, :] if found.cycle is None else found.cycle
    for held, after in zip(lists, np.roll(lists, -1, axis=0), strict=True):
        for leg in found.course.lasting:
            for _ in range(leg.rounds):
                held = process.firmness * starts + (1 - process.firmness) * leg.shares.hear(held)
        assert held == pytest.approx(after, abs=1e-12)


@given(talks(), st.randoms(use_true_random=False))
def test_the_order_of_people_does_not_matter_in_the_long_run(talk, random):
    process, starts = talk
    order = list(range(len(starts)))
    random.shuffle(order)
    here, moved = long_run(process, starts), long_run(in_other_order(process, np.array(order)), starts[order])
    assert moved.influence == pytest.approx(here.influence[order], rel=1e-12)
    assert moved.average == pytest.approx(here.average[order], abs=1e-14)
    assert sorted(order[at] for at in moved.outside.tolist()) == here.outside.tolist()
    assert moved.settles == here.settles
    assert moved.cycle_period == here.cycle_period
    if here.cycle is not None:
        assert moved.cycle == pytest.approx(here.cycle[:, order], abs=1e-12)
    if here.rate is not None:
        assert moved.rate == pytest.approx(here.rate, abs=1e-7)


@given(talks(), st.floats(0.1, 50), st.floats(-20, 20))
def test_the_scale_does_not_matter(talk, width, low):
    process, starts = talk
    here, there = long_run(process, starts), long_run(process, low + width * starts, scale_width=width)
    assert there.average == pytest.approx(low + width * here.average, abs=1e-12 * (width + abs(low)))
    assert (there.influence == here.influence).all()
    assert there.cycle_period == here.cycle_period


@given(talks())
def test_absent_people_stay_as_they_are_and_are_closed_groups_of_their_own(talk):
    process, starts = talk
    network = process.network
    gone = Network(network.own, network.listener, network.source, network.weight, np.arange(len(starts)) != 0)
    absent = Process(gone, process.blocks, process.repeat, process.firmness)
    found = long_run(absent, starts)
    assert found.average[0] == pytest.approx(starts[0], abs=1e-15)
    assert [0] in [group.members.tolist() for group in found.groups]
    assert found.influence[0] == pytest.approx(1 / len(starts), rel=1e-13)


@given(talks())
def test_silence_for_ever_keeps_what_was_reached(talk):
    process, starts = talk
    silence = Block(heard_in_silence(process.network), "own", 1)
    quiet = Process(process.network, (*process.blocks, silence), False, np.zeros(len(starts)))
    rounds = sum(block.rounds for block in process.blocks)
    assert long_run(quiet, starts).limit == pytest.approx(play(quiet, starts, rounds)[-1], abs=1e-14)


@given(st.data())
def test_influence_does_not_depend_on_the_starts(data):
    process, starts = data.draw(talks())
    others = data.draw(starts_of(process))
    one, two = long_run(process, starts), long_run(process, others)
    assert (one.influence == two.influence).all()
    assert one.rate == two.rate
    assert groups_of(one) == groups_of(two)
    both = long_run(process, (starts + others) / 2)
    assert both.average == pytest.approx((one.average + two.average) / 2, abs=1e-14)
