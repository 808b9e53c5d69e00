from fractions import Fraction

import numpy as np
import pytest
from exact import assert_close, exact_shares, solve
from hypothesis import assume, given
from hypothesis import strategies as st
from quantecon.markov import gth_solve
from talk import FAR_APART, as_numbers, point_matrices

from deliberate.dynamics import elimination
from deliberate.dynamics.elimination import PANEL, absorption, stationary


@pytest.fixture(params=["plain", "logarithms"])
def way(request, monkeypatch) -> str:
    """Both ways of doing it: as usual, and as when pivots come near underflow."""
    if request.param == "logarithms":
        monkeypatch.setattr(elimination, "SAFE_PIVOT", np.inf)
    return request.param


def gth_in_fractions(shares: list[list[Fraction]]) -> list[Fraction]:
    """Grassmann, Taksar and Heyman 1985, state by state."""
    rows = [list(row) for row in shares]
    for state in reversed(range(1, len(rows))):
        leaving = sum(rows[state][:state])
        for i in range(state):
            rows[i][state] /= leaving
            for j in range(state):
                rows[i][j] += rows[i][state] * rows[state][j]
    vector = [Fraction(1)]
    for state in range(1, len(rows)):
        vector.append(sum(vector[i] * rows[i][state] for i in range(state)))
    return [share / sum(vector) for share in vector]


def joined_up(written: list[list[str]]) -> list[list[str]]:
    """The same points with a way round through everybody, so that they are one group."""
    people = len(written)
    return [
        [("1e-12" if entry == "0" and j == (i + 1) % people != i else entry) for j, entry in enumerate(row)]
        for i, row in enumerate(written)
    ]


def two_camps(people: int, cross: float, seed: int = 0) -> np.ndarray:
    """Two halves that hear each other with one arrow of weight `cross` each way."""
    shares = np.random.default_rng(seed).uniform(0.1, 1, (people, people))
    half = people // 2
    shares[:half, half:] = shares[half:, :half] = 0.0
    shares[0, half], shares[half, 0] = cross, 2 * cross
    return shares


def test_degroot(way):
    """DeGroot 1974, JASA 69:118-121 (from memory): (1/3, 2/3)."""
    assert stationary(np.array([[1 / 2, 1 / 2], [1 / 4, 3 / 4]])) == pytest.approx([1 / 3, 2 / 3], rel=1e-15)


def test_grinstead_and_snell(way):
    """Grinstead and Snell 1997, ch. 11 (quoted): Land of Oz, Ehrenfest urn, drunkard's walk on five corners."""
    oz = np.array([[1 / 2, 1 / 4, 1 / 4], [1 / 2, 0, 1 / 2], [1 / 4, 1 / 4, 1 / 2]])
    assert stationary(oz) == pytest.approx([2 / 5, 1 / 5, 2 / 5], rel=1e-14)
    urn = np.array([[0, 4, 0, 0, 0], [1, 0, 3, 0, 0], [0, 2, 0, 2, 0], [0, 0, 3, 0, 1], [0, 0, 0, 4, 0]]) / 4
    assert stationary(urn) == pytest.approx(np.array([1, 4, 6, 4, 1]) / 16, rel=1e-14)
    walk = np.array([[0, 0.5, 0], [0.5, 0, 0.5], [0, 0.5, 0]])
    ends = absorption(walk, np.array([[0.5, 0], [0, 0], [0, 0.5]]))
    assert ends == pytest.approx(np.array([[3, 1], [2, 2], [1, 3]]) / 4, rel=1e-14)


def test_two_people_in_general(way):
    """Schweitzer 1968, Meyer 1975 (from memory): for T = [[1-a, a], [b, 1-b]] it is (b, a)/(a+b)."""
    for a, b in [(0.3, 0.2), (1e-14, 1e-300), (1.0, 1e-16), (1e-200, 1.0)]:
        found = stationary(np.array([[1 - a, a], [b, 1 - b]]))
        assert found == pytest.approx([b / (a + b), a / (a + b)], rel=1e-12)


def test_camps_by_a_cross_weight_of_1e_14():
    """Cross weight 1e-14: elimination is right to the last digits where a solve by LU factors is off by per cents."""
    points = [
        ["0.7", "0.3", "0", "1e-14", "0", "0"],
        ["0", "0.3", "0.7", "0", "0", "0"],
        ["0.2", "0", "0.8", "0", "0", "0"],
        ["2e-14", "0", "0", "0.1", "0.9", "0"],
        ["0", "0", "0", "0", "0.6", "0.4"],
        ["0", "0", "0", "0.6", "0", "0.4"],
    ]
    exact = gth_in_fractions(exact_shares(points))
    shares = as_numbers(points) / as_numbers(points).sum(axis=1, keepdims=True)
    assert_close(stationary(shares), exact, 4e-15)
    system = (np.eye(6) - shares).T
    system[-1] = 1.0
    by_factors = np.linalg.solve(system, [0, 0, 0, 0, 0, 1.0])
    assert abs(by_factors[0] / float(exact[0]) - 1) > 1e-3


@given(point_matrices(st.integers(2, 7), FAR_APART))
def test_shares_of_the_final_view_right_to_twelve_digits(written):
    """Entry by entry against exact fractions, with weights 1e-12 apart."""
    points = joined_up(written)
    exact = gth_in_fractions(exact_shares(points))
    weights = as_numbers(points)
    assert_close(stationary(weights / weights.sum(axis=1, keepdims=True)), exact)


@given(point_matrices(st.integers(2, 6), FAR_APART), st.integers(1, 3))
def test_chances_to_end_somewhere_right_to_twelve_digits(written, ends):
    shares = exact_shares(joined_up(written))
    states = len(shares) - ends
    assume(states > 0)
    inside = [row[ends:] for row in shares[ends:]]
    exits = [row[:ends] for row in shares[ends:]]
    system = [[(i == j) - inside[i][j] for j in range(states)] for i in range(states)]
    doubles = np.array(inside, dtype=float), np.array(exits, dtype=float)
    assert_close(absorption(*doubles), solve(system, exits))


def test_forty_people_with_weights_far_apart():
    """The size of a large committee, against exact fractions."""
    generator = np.random.default_rng(5)
    written = generator.choice(["0", "0", "1", "3", "1e-12", "0.25e-6"], (40, 40)).tolist()
    points = joined_up(written)
    weights = as_numbers(points)
    assert_close(stationary(weights / weights.sum(axis=1, keepdims=True)), gth_in_fractions(exact_shares(points)))


@pytest.mark.parametrize("people", [2, 5, PANEL, PANEL + 1, PANEL + 2, 2 * PANEL + 1, 150])
@pytest.mark.parametrize("cross", [1.0, 1e-12])
def test_panels_change_nothing(people, cross, way):
    """Against the elimination of one state after the other in quantecon."""
    shares = two_camps(people, cross)
    shares /= shares.sum(axis=1, keepdims=True)
    found = stationary(shares)
    assert found.sum() == pytest.approx(1, abs=1e-14)
    assert found == pytest.approx(gth_solve(shares), rel=1e-12)


@pytest.mark.parametrize("states", [1, 3, PANEL, PANEL + 1, 3 * PANEL + 5])
def test_absorption_solves_its_equations(states, way):
    generator = np.random.default_rng(states)
    rows = generator.uniform(0, 1, (states, states + 3)) * (generator.random((states, states + 3)) < 0.5)
    rows[:, 0] += 1e-3
    rows /= rows.sum(axis=1, keepdims=True)
    exits, inside = rows[:, :3], rows[:, 3:]
    found = absorption(inside, exits)
    assert found == pytest.approx(np.linalg.solve(np.eye(states) - inside, exits), rel=1e-11, abs=1e-15)
    assert found.sum(axis=1) == pytest.approx(1, abs=1e-14)


def test_a_chain_of_tiny_shares_does_not_vanish():
    """Products of hundreds of powers of ten below any double; the answer is still one of plain proportions."""
    people = 12
    shares = np.zeros((people, people))
    for person in range(people - 1):
        shares[person, person + 1] = 1e-290
        shares[person + 1, person] = 2e-290
    found = stationary(shares)
    assert found == pytest.approx(found[0] * 0.5 ** np.arange(people), rel=1e-10)
    forward = np.zeros((people, people))
    forward[np.arange(people - 1), np.arange(1, people)] = 1e-250
    exits = np.zeros((people, 2))
    exits[0, 0], exits[-1, 1] = 3e-250, 1.0
    backward = absorption(forward, exits)
    assert backward[0] == pytest.approx([0.75, 0.25], rel=1e-10)
    assert backward[1:, 1] == pytest.approx(1)


def test_own_shares_are_never_looked_at(way):
    shares = two_camps(6, 1e-12)
    inside, exits = shares[:4, :4], shares[:4, 4:] + 0.1
    garbled = shares.copy()
    np.fill_diagonal(garbled, np.nan)
    assert (stationary(garbled) == stationary(shares)).all()
    assert (absorption(garbled[:4, :4], exits) == absorption(inside, exits)).all()


def test_what_is_given_stays_as_it_is(way):
    shares = two_camps(40, 0.5)
    before = shares.copy()
    stationary(shares)
    absorption(shares[:30, :30], shares[:30, 30:] + 0.1)
    assert (shares == before).all()


def test_one_person_and_one_exit_and_nobody():
    assert stationary(np.array([[1.0]])).tolist() == [1]
    assert absorption(np.full((2, 2), 0.25), np.full((2, 1), 0.5)).tolist() == [[1], [1]]
    assert absorption(np.zeros((0, 0)), np.zeros((0, 2))).shape == (0, 2)
