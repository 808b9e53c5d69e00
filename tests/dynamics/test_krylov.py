import numpy as np
import pytest

from deliberate.dynamics.krylov import arnoldi, gmres, leading_eigenvalue


def matrix(size: int, seed: int = 0) -> np.ndarray:
    return np.random.default_rng(seed).standard_normal((size, size)) / np.sqrt(size)


def test_arnoldi_sees_the_map_in_an_orthonormal_basis():
    """Arnoldi 1951: A V_k = V_(k+1) H."""
    given, start = matrix(30), np.random.default_rng(1).standard_normal(30)
    basis, seen = arnoldi(given.__matmul__, start, 12)
    assert basis.shape == (13, 30)
    assert seen.shape == (13, 12)
    assert basis @ basis.T == pytest.approx(np.eye(13), abs=1e-13)
    assert given @ basis[:-1].T == pytest.approx(basis.T @ seen, abs=1e-13)
    assert basis[0] * np.linalg.norm(start) == pytest.approx(start)
    assert np.tril(seen, -2) == pytest.approx(0, abs=1e-15)


def test_arnoldi_stops_where_the_map_leads_no_further():
    projector = np.diag([1.0, 2, 3] + [0.0] * 7)
    start = np.array([1.0, 1, 1] + [0.0] * 7)
    basis, seen = arnoldi(projector.__matmul__, start, 8)
    assert seen.shape == (4, 3)
    assert seen[-1].tolist() == [0, 0, 0]
    assert np.sort(np.linalg.eigvals(seen[:3]).real) == pytest.approx([1, 2, 3])
    assert len(basis) == 4


@pytest.mark.parametrize("seed", range(5))
def test_the_leading_eigenvalue_of_a_matrix(seed):
    given = matrix(40, seed)
    expected = np.abs(np.linalg.eigvals(given)).max()
    found, exact = leading_eigenvalue(given.__matmul__, 40, 40)
    assert abs(found) == pytest.approx(expected, rel=1e-9)
    assert exact


def test_too_few_steps_are_owned_up_to():
    values = np.linspace(0.99, 1, 500)
    found, exact = leading_eigenvalue(lambda x: values * x, 500, 5)
    assert not exact
    assert abs(found) < 1


def test_a_map_to_nothing_has_eigenvalue_0():
    assert leading_eigenvalue(lambda x: 0.0 * x, 9, 4) == (0j, True)


@pytest.mark.parametrize("seed", range(5))
def test_gmres_solves(seed):
    """Saad and Schultz 1986, against a direct solve."""
    given = np.eye(60) - 0.7 * matrix(60, seed) / np.abs(np.linalg.eigvals(matrix(60, seed))).max()
    right = np.random.default_rng(seed).standard_normal(60)
    found = gmres(given.__matmul__, right, 20, 40)
    assert np.linalg.norm(given @ found - right) <= 1e-8 * np.linalg.norm(right)
    assert found == pytest.approx(np.linalg.solve(given, right), abs=1e-6)


def test_gmres_says_when_it_does_not_get_there():
    cyclic = np.roll(np.eye(40), 1, axis=0)  # needs as many steps as there are rows
    assert gmres(cyclic.__matmul__, np.eye(40)[0], 5, 3) is None
    assert gmres(cyclic.__matmul__, np.eye(40)[0], 40, 1) == pytest.approx(np.eye(40)[39], abs=1e-12)


def test_gmres_of_nothing_is_nothing():
    assert gmres(lambda x: 2 * x, np.zeros(4), 3, 3).tolist() == [0, 0, 0, 0]
