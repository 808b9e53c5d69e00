import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.sparse import csr_array
from talk import as_numbers, line, plenary, point_matrices, ring, talks

from deliberate.dynamics import spectrum
from deliberate.dynamics.destination import Eliminated
from deliberate.dynamics.large import Iterated, large_structure, large_turn
from deliberate.dynamics.longrun import final_map, long_run
from deliberate.dynamics.process import course
from deliberate.dynamics.spectrum import rate, rate_of_pass
from deliberate.dynamics.structure import full_structure
from deliberate.dynamics.turns import turn_of


def rate_of(points: np.ndarray) -> float:
    return long_run(plenary(points), np.zeros(len(points))).rate


def radius_without_limit(matrix: np.ndarray) -> float:
    """By all eigenvalues of T minus its limit, which is a high power of T."""
    limit = np.linalg.matrix_power(matrix, 2**20)
    return float(np.abs(np.linalg.eigvals(matrix - limit)).max(initial=0.0))


def everyone_but_me(people: int) -> np.ndarray:
    return np.ones((people, people)) - np.eye(people)


@pytest.fixture(params=["all eigenvalues", "squaring", "arnoldi"])
def by(request, monkeypatch) -> str:
    """The three ways of finding the rate of a component, whatever its size."""
    if request.param != "all eigenvalues":
        monkeypatch.setattr(spectrum, "ALL_EIGENVALUES", 1)
    if request.param == "arnoldi":
        monkeypatch.setattr(spectrum, "BY_SQUARING", 1)
    return request.param


def test_degroot_and_grinstead_and_snell(by):
    """DeGroot 1974 (from memory): second eigenvalue 1/4. Land of Oz (Grinstead and Snell 1997): 1, 1/4, -1/4."""
    assert rate_of(np.array([[1.0, 1], [1, 3]])) == pytest.approx(1 / 4, rel=1e-9)
    assert rate_of(np.array([[2.0, 1, 1], [1, 0, 1], [1, 1, 2]])) == pytest.approx(1 / 4, rel=1e-9)


@pytest.mark.parametrize("people", [3, 5, 9, 31])
def test_levin_peres_and_wilmer(by, people):
    """Levin, Peres and Wilmer, ch. 12 (from memory): ring cos(2 pi k/n); lazy ring (1 + cos(2 pi/n))/2 ; everyone but
    me equally 1/(n-1)."""
    moduli = np.sort(np.abs(np.cos(2 * np.pi * np.arange(people) / people)))
    assert rate_of(ring(people)) == pytest.approx(moduli[-2], rel=1e-9)
    assert rate_of(ring(people, 2.0)) == pytest.approx((1 + np.cos(2 * np.pi / people)) / 2, rel=1e-9)
    assert rate_of(everyone_but_me(people)) == pytest.approx(1 / (people - 1), rel=1e-9)


@pytest.mark.parametrize("people", [100, 400])
def test_larger_rings_and_complete_groups(people):
    assert rate_of(ring(people, 2.0)) == pytest.approx((1 + np.cos(2 * np.pi / people)) / 2, rel=1e-9)
    assert rate_of(everyone_but_me(people)) == pytest.approx(1 / (people - 1), rel=1e-9)


@pytest.mark.parametrize("people", [40, 300])
def test_a_one_way_line_is_exact(people):
    """Every modulus of a line with own share 0.1 is 0.1, whatever the order in which people are listed."""
    assert rate_of(line(people)) == 0.1
    order = np.random.default_rng(people).permutation(people)
    assert rate_of(line(people)[np.ix_(order, order)]) == 0.1


@given(point_matrices())
def test_the_rate_is_the_radius_without_the_limit(written):
    found = long_run(plenary(as_numbers(written)), np.zeros(len(written)))
    matrix = plenary(as_numbers(written)).legs[0].shares.matrix
    if found.settles_from_any_start:
        # Defective eigenvalues, as of one-way lines, scatter by the k-th root of rounding.
        assert found.rate == pytest.approx(radius_without_limit(matrix), abs=2e-2)
        assert 0 <= found.rate < 1


@given(st.integers(2, 12), st.integers(0, 1000))
def test_the_rate_is_the_second_eigenvalue_of_a_mixed_group(people, seed):
    points = np.random.default_rng(seed).uniform(0.05, 1, (people, people))
    expected = np.sort(np.abs(np.linalg.eigvals(points / points.sum(axis=1, keepdims=True))))[-2]
    assert rate_of(points) == pytest.approx(expected, rel=1e-8)


@given(st.integers(2, 12), st.integers(0, 1000))
def test_with_firm_people_it_is_the_first_eigenvalue_of_what_is_kept(people, seed):
    generator = np.random.default_rng(seed)
    points = generator.uniform(0.05, 1, (people, people))
    firmness = generator.choice([0.0, 0.3, 1.0], people)
    firmness[0] = 0.2
    kept = (1 - firmness)[:, None] * points / points.sum(axis=1, keepdims=True)
    found = long_run(plenary(points, firmness), np.zeros(people)).rate
    assert found == pytest.approx(np.abs(np.linalg.eigvals(kept)).max(), rel=1e-8)


@given(talks())
def test_the_rate_of_any_plan_is_the_radius_of_its_turn(talk):
    process, starts = talk
    found = long_run(process, starts)
    if found.settles_from_any_start:
        turn = turn_of(found.course.lasting, process.firmness)
        per_turn = found.rate**found.course.rounds_in_turn
        assert per_turn == pytest.approx(radius_without_limit(turn.kept), abs=2e-2)


def test_many_small_components_at_once():
    """Components of the same size are solved together, each with its own answer."""
    generator = np.random.default_rng(2)
    sizes, moduli = [2, 3, 2, 5, 3, 1, 4], []
    points = np.zeros((sum(sizes), sum(sizes)))
    first = 0
    for size in sizes:
        block = generator.uniform(0.2, 1, (size, size)) + 3 * np.eye(size)
        points[first : first + size, first : first + size] = block
        if size > 1:
            moduli.append(np.sort(np.abs(np.linalg.eigvals(block / block.sum(axis=1, keepdims=True))))[-2])
        first += size
    order = generator.permutation(len(points))
    assert rate_of(points[np.ix_(order, order)]) == pytest.approx(max(moduli), rel=1e-9)


@given(point_matrices(st.integers(2, 7)))
def test_full_and_sparse_give_one_rate(written):
    process = plenary(as_numbers(written))
    turn = turn_of(course(process).lasting, process.firmness)
    shape = full_structure(turn.kept, turn.brought.any(axis=1))
    if any(group.period > 1 for group in shape.closed):
        return
    reached = Eliminated(turn, shape.closed)
    assert rate(csr_array(turn.kept), shape, reached)[0] == pytest.approx(
        rate(turn.kept, shape, reached)[0], abs=1e-9
    )


@given(point_matrices(st.integers(2, 7)))
def test_a_pass_that_is_never_written_out_has_the_same_rate(written):
    points = as_numbers(written) + 0.5 * np.eye(len(written))
    process = plenary(points)
    large = large_turn(course(process).lasting, process.firmness)
    reached = Iterated(large, large_structure(large).closed)
    assert rate_of_pass(large, reached) == pytest.approx(rate_of(points), abs=2e-2)


def test_nearly_closed_groups_are_slow():
    """Two people who each hear the other with e: 1 - 2e, to the digits that doubles have beside 1."""
    for cross in (1e-3, 1e-6, 1e-12):
        assert 1 - rate_of(np.array([[1 - cross, cross], [cross, 1 - cross]])) == pytest.approx(2 * cross, rel=1e-3)


def test_rates_stay_below_1_where_everything_settles():
    assert rate_of(np.array([[1.0, 1e-17], [1e-17, 1.0]])) < 1
    assert rate_of(np.eye(3)) == 0


def test_nobody_has_no_rate():
    assert rate_of(np.zeros((0, 0))) == 0


def test_maps_of_a_plan_and_of_its_rounds_agree_on_the_rate():
    process = plenary(ring(9, 1.0))
    assert np.sort(np.abs(np.linalg.eigvals(final_map(process, 5))))[-2] == pytest.approx(rate_of(ring(9, 1.0)) ** 5)
