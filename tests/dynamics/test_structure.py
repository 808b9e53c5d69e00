import networkx as nx
import numpy as np
import pytest
from exact import closed_groups, period
from hypothesis import given
from hypothesis import strategies as st
from quantecon.markov import MarkovChain
from scipy.sparse import csr_array
from talk import point_matrices

from deliberate.dynamics.structure import components, full_structure, structure

SPARSE = ("0", "0", "0", "0", "1")


def joined(*rows: str) -> np.ndarray:
    """Who hears whom, a row of 0 and 1 for each listener."""
    return np.array([[int(digit) for digit in row] for row in rows], dtype=float)


@st.composite
def patterns(draw: st.DrawFn) -> np.ndarray:
    """Who hears whom, everybody somebody; own shares are rare, so that swings are not."""
    written = draw(point_matrices(st.integers(1, 9), SPARSE))
    matrix = np.array(written, dtype=float)
    if draw(st.booleans()):
        np.fill_diagonal(matrix, 0.0)
    silent = ~matrix.any(axis=1)
    matrix[silent, (np.arange(len(matrix)) + 1)[silent] % len(matrix)] = 1.0
    return matrix


def rings(*lengths: int) -> np.ndarray:
    """Rings of so many people each, in which everybody hears the next one."""
    matrix = np.zeros((sum(lengths), sum(lengths)))
    first = 0
    for length in lengths:
        for at in range(length):
            matrix[first + at, first + (at + 1) % length] = 1.0
        first += length
    return matrix


@given(patterns())
def test_components_and_closed_groups_as_networkx_finds_them(matrix):
    found = structure(csr_array(matrix))
    count, labels = components(csr_array(matrix))
    graph = nx.from_numpy_array(matrix, create_using=nx.DiGraph)
    parts = {frozenset(part) for part in nx.strongly_connected_components(graph)}
    assert {frozenset(np.flatnonzero(labels == label).tolist()) for label in range(count)} == parts
    assert (found.labels == labels).all()
    assert [group.members.tolist() for group in found.closed] == closed_groups(matrix.tolist())


@given(patterns())
def test_periods_are_the_common_divisors_of_all_ways_round(matrix):
    for group in structure(csr_array(matrix)).closed:
        assert group.period == period(matrix.tolist(), group.members.tolist())


@given(patterns())
def test_members_of_a_phase_hear_only_the_next_phase(matrix):
    for group in structure(csr_array(matrix)).closed:
        assert group.phases[0] == 0
        assert set(group.phases.tolist()) == set(range(group.period))
        phase_of = dict(zip(group.members.tolist(), group.phases.tolist(), strict=True))
        for listener, source in zip(*np.nonzero(matrix), strict=True):
            if int(listener) in phase_of:
                assert phase_of[int(source)] == (phase_of[int(listener)] + 1) % group.period


@given(patterns())
def test_groups_and_period_as_quantecon_finds_them(matrix):
    chain = MarkovChain(matrix / matrix.sum(axis=1, keepdims=True))
    found = structure(csr_array(matrix)).closed
    recurrent = sorted(sorted(group.tolist()) for group in chain.recurrent_classes_indices)
    assert [group.members.tolist() for group in found] == recurrent
    if chain.is_irreducible:
        assert found[0].period == chain.period


@given(patterns(), st.data())
def test_a_full_array_and_its_entries_have_one_structure(matrix, data):
    leaking = np.array(data.draw(st.lists(st.booleans(), min_size=len(matrix), max_size=len(matrix))))
    if data.draw(st.booleans()):
        leaking[:] = False
    full, sparse = full_structure(matrix, leaking), structure(csr_array(matrix), leaking)
    assert len(full.closed) == len(sparse.closed)
    for one, other in zip(full.closed, sparse.closed, strict=True):
        assert one.members.tolist() == other.members.tolist()
        assert one.period == other.period
        assert one.phases.tolist() == other.phases.tolist()
    same = full.labels[:, None] == full.labels
    assert (same == (sparse.labels[:, None] == sparse.labels)).all()


@given(patterns(), st.data())
def test_whoever_hears_something_outside_keeps_her_group_from_being_closed(matrix, data):
    leaking = np.array(data.draw(st.lists(st.booleans(), min_size=len(matrix), max_size=len(matrix))))
    kept = [group.members.tolist() for group in structure(csr_array(matrix), leaking).closed]
    every = [group.members.tolist() for group in structure(csr_array(matrix)).closed]
    assert kept == [members for members in every if not leaking[members].any()]


@given(patterns(), st.randoms(use_true_random=False))
def test_the_order_of_people_does_not_matter_to_the_structure(matrix, random):
    order = list(range(len(matrix)))
    random.shuffle(order)
    moved = structure(csr_array(matrix[np.ix_(order, order)])).closed
    back = {(frozenset(order[at] for at in group.members.tolist()), group.period) for group in moved}
    here = {(frozenset(group.members.tolist()), group.period) for group in structure(csr_array(matrix)).closed}
    assert back == here


def test_the_ehrenfest_urn_has_period_2():
    """Grinstead and Snell 1997, ch. 11 (quoted): 4 balls."""
    (urn,) = structure(csr_array(joined("01000", "10100", "01010", "00101", "00010"))).closed
    assert urn.period == 2
    assert urn.phases.tolist() == [0, 1, 0, 1, 0]


@pytest.mark.parametrize("people", range(3, 12))
def test_a_ring_hearing_both_neighbours_swings_when_even(people):
    """Levin, Peres and Wilmer, ch. 12 (from memory): period 2 for an even number, else 1."""
    matrix = rings(people) + rings(people).T
    (group,) = structure(csr_array(matrix)).closed
    assert group.period == (2 if people % 2 == 0 else 1)


def test_jarvis_and_shier():
    """Jarvis and Shier, ex. 3 (quoted): closed groups {0} and {1, 4}."""
    found = structure(csr_array(joined("100000", "000010", "001110", "100001", "010010", "100100")))
    assert [(group.members.tolist(), group.period) for group in found.closed] == [([0], 1), ([1, 4], 1)]


@pytest.mark.parametrize("lengths", [(2, 3, 5, 7, 11, 13), (1, 1, 4), (6,), (64, 63)])
def test_every_ring_has_the_period_of_its_own_length(lengths):
    """Reported group by group: the common multiple of all of them soon explodes."""
    found = structure(csr_array(rings(*lengths)))
    assert [group.period for group in found.closed] == list(lengths)
    assert all(group.phases.tolist() == list(range(group.period)) for group in found.closed)


def test_one_own_share_ends_a_swing_and_a_chord_changes_it():
    swing = rings(12)
    assert structure(csr_array(swing)).closed[0].period == 12
    swing[0, 4] = 1.0  # a way round of 9: the greatest common divisor is 3
    assert structure(csr_array(swing)).closed[0].period == 3
    swing[5, 5] = 1.0
    assert structure(csr_array(swing)).closed[0].period == 1


def test_a_share_counts_however_small():
    matrix = np.eye(2)
    matrix[0, 1] = 5e-324
    assert [group.members.tolist() for group in structure(csr_array(matrix)).closed] == [[1]]
    assert [group.members.tolist() for group in full_structure(matrix, np.zeros(2, dtype=bool)).closed] == [[1]]


def test_a_long_way_round_is_found():
    (group,) = structure(csr_array(rings(5000))).closed
    assert group.period == 5000


def test_nobody_has_no_structure():
    nothing = np.zeros((0, 0))
    assert full_structure(nothing, np.zeros(0, dtype=bool)).closed == ()
    assert components(csr_array(nothing))[0] == 0
