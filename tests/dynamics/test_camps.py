import numpy as np
import pytest
from scipy.sparse import csr_array

from deliberate.dynamics.camps import stationary_of_camps
from deliberate.dynamics.elimination import stationary


def camps(sizes: list[int], cross: float, seed: int = 0) -> np.ndarray:
    """Shares within camps that mix well, and one arrow with share `cross` from each camp to the next."""
    generator = np.random.default_rng(seed)
    shares = np.zeros((sum(sizes), sum(sizes)))
    firsts = np.cumsum([0, *sizes[:-1]])
    for first, size in zip(firsts, sizes, strict=True):
        shares[first : first + size, first : first + size] = generator.uniform(0.2, 1, (size, size))
    shares /= shares.sum(axis=1, keepdims=True)
    for first, following in zip(firsts, np.roll(firsts, -1), strict=True):
        shares[first, following] = cross * generator.uniform(1, 9)
    return shares / shares.sum(axis=1, keepdims=True)


@pytest.mark.parametrize("cross", [1e-4, 1e-9, 1e-14, 1e-100, 1e-250])
@pytest.mark.parametrize("sizes", [[20, 20], [5, 40, 11, 30], [1, 25, 2]])
def test_shares_are_those_of_elimination(sizes, cross):
    """Against Grassmann, Taksar and Heyman 1985, whose shares are right entry by entry."""
    shares = camps(sizes, cross)
    order = np.random.default_rng(1).permutation(len(shares))
    shares = shares[np.ix_(order, order)]
    found = stationary_of_camps(csr_array(shares), np.full(len(shares), 1 / len(shares)))
    assert found == pytest.approx(stationary(shares), rel=1e-11)
    assert found.sum() == pytest.approx(1, abs=1e-13)


def test_people_who_hold_on_to_their_own_view_are_camps_of_their_own():
    shares = camps([1] * 30, 1e-11)
    found = stationary_of_camps(csr_array(shares), np.full(30, 1 / 30))
    assert found == pytest.approx(stationary(shares), rel=1e-12)


def test_where_there_are_no_camps_it_finds_nothing():
    """Tightly joined people fall into no parts, whatever small arrows are left out."""
    assert stationary_of_camps(csr_array(np.full((8, 8), 1 / 8)), np.full(8, 1 / 8)) is None


def test_camps_that_do_not_come_to_rest_within_are_given_up():
    """Long lines mix too slowly for a few rounds; then it says so instead of guessing."""
    size = 200
    shares = np.zeros((2 * size, 2 * size))
    for person in range(2 * size):
        for other in (person - 1, person + 1):
            if 0 <= other < 2 * size and other // size == person // size:
                shares[person, other] = 0.5
        shares[person, person] = 1 - shares[person].sum()
    shares[0, size] = shares[size, 0] = 1e-9
    guess = np.random.default_rng(1).uniform(0.1, 1, 2 * size)
    assert stationary_of_camps(csr_array(shares), guess) is None
