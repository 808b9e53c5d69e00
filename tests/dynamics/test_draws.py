import numpy as np
import pytest
from scipy import stats
from talk import network_of

from deliberate.dynamics.draws import LEAST, MOST_SOBOL, RowSource, adder, draw_starts
from deliberate.dynamics.network import Network


def seeded(seed=7):
    return np.random.default_rng(seed)


def drawn_rows(points, concentration, draws=4_000):
    network = network_of(points)
    source = RowSource(network, np.full(network.arrows, float(concentration)))
    return network, source, source.draw(draws, seeded())


def test_starts_fill_their_range_evenly():
    """A one-dimensional Sobol sequence puts one of 2^m points into each of 2^m equal parts, scrambled too
    (Owen 1998, from memory)."""
    low, high = np.array([10.0, 0.0, 40.0]), np.array([30.0, 1.0, 40.0])
    starts = draw_starts(low, high, 1024, seeded())
    for person in (0, 1):
        counts, _ = np.histogram(starts[person], bins=1024, range=(low[person], high[person]))
        assert (counts == 1).all()
    assert (starts[2] == 40).all()
    assert abs(np.corrcoef(starts[:2])[0, 1]) < 0.01


def test_starts_repeat_with_their_seed_only():
    low, high = np.zeros(5), np.ones(5)
    first, again, other = (draw_starts(low, high, 300, seeded(seed)) for seed in (1, 1, 2))
    assert np.array_equal(first, again)
    assert not np.array_equal(first, other)


@pytest.mark.parametrize("draws", [1, 2, 3, 1000])
def test_any_number_of_starts(draws):
    starts = draw_starts(np.array([-5.0, 2.0]), np.array([5.0, 2.5]), draws, seeded())
    assert starts.shape == (2, draws)
    assert (starts >= [[-5], [2]]).all()
    assert (starts <= [[5], [2.5]]).all()


def test_nobody_and_nothing_to_draw():
    assert draw_starts(np.zeros(0), np.zeros(0), 8, seeded()).shape == (0, 8)
    assert np.array_equal(draw_starts(np.array([3.0]), np.array([3.0]), 4, seeded()), [[3.0] * 4])


def test_a_crowd_of_starts_beyond_the_sobol_dimensions():
    people = MOST_SOBOL + 1
    starts = draw_starts(np.zeros(people), np.ones(people), 4, seeded())
    assert (starts >= 0).all()
    assert (starts < 1).all()
    assert starts.mean() == pytest.approx(0.5, abs=0.01)


@pytest.mark.parametrize("k", [3, 40, 1000])
def test_rows_with_one_concentration_are_dirichlet(k):
    """Dirichlet(k s): means s, variances s (1 - s) / (k + 1), covariances -s s' / (k + 1)."""
    share = np.array([0.5, 0.3, 0.2])
    network, _, rows = drawn_rows([share, [0, 1, 0], [0, 0, 1]], k, 20_000)
    assert network.listener.tolist() == [0, 0]
    drawn = np.vstack([rows.own[:1], rows.weight])
    assert drawn.sum(axis=0) == pytest.approx(np.ones(20_000))
    covariance = (np.diag(share) - np.outer(share, share)) / (k + 1)
    errors = np.sqrt(np.diag(covariance) / 20_000)
    assert (np.abs(drawn.mean(axis=1) - share) < 4 * errors).all()
    assert np.cov(drawn) == pytest.approx(covariance, rel=0.06)


def test_a_row_of_two_shares_is_a_beta_distribution():
    """By Kolmogorov and Smirnov's test, for several seeds, since any single one is below 1 % now and then."""
    source = RowSource(network_of([[3, 1], [0, 1]]), np.array([12.0]))
    tested = [
        stats.kstest(source.draw(4_000, seeded(seed)).weight[0], stats.beta(12 * 0.25, 12 * 0.75).cdf).pvalue
        for seed in range(8)
    ]
    assert np.median(tested) > 0.1
    assert min(tested) > 1e-3


def test_a_row_of_mixed_concentrations_varies_most_where_least_is_known():
    network = network_of([[1, 1, 1], [0, 1, 0], [0, 0, 1]])
    rows = RowSource(network, np.array([100.0, 10_000.0])).draw(20_000, seeded())
    own, unsure, sure = rows.own[0], rows.weight[0], rows.weight[1]
    assert unsure.std() > 1.5 * sure.std()
    assert own + unsure + sure == pytest.approx(np.ones(20_000))
    # First order: the share of gammas x / (x + y + z) with variances s / k; the own view has the mean k, 5,050.
    s, k = np.full(3, 1 / 3), np.array([5_050, 100, 10_000])
    for at, drawn in enumerate((own, unsure, sure)):
        gradient = np.where(np.arange(3) == at, 1 - s, -s[at])
        assert drawn.var() == pytest.approx((gradient**2 * s / k).sum(), rel=0.05)
        assert drawn.mean() == pytest.approx(1 / 3, abs=0.003)


def test_what_is_known_is_not_drawn():
    points = np.array([[1.0, 2, 1], [0, 5, 5], [0, 0, 3]])
    network, source, rows = drawn_rows(points, np.inf, 3)
    assert not source.doubtful.any()
    shares = points / points.sum(axis=1, keepdims=True)
    assert rows.own == pytest.approx(np.repeat(shares.diagonal()[:, None], 3, axis=1), rel=1e-15)
    assert rows.weight == pytest.approx(np.repeat(shares[network.listener, network.source][:, None], 3, axis=1))
    known = RowSource(network, np.array([np.inf, 10.0, np.inf]))
    assert known.doubtful.tolist() == [True, False, False]


def test_a_row_with_one_entry_is_no_guess():
    """Who hears only one person and not herself gives that person everything, whatever the points."""
    network, source, rows = drawn_rows([[0, 4], [0, 0]], 1, 50)
    assert source.doubtful.tolist() == [False, False]
    assert (rows.weight == 1).all()
    assert np.array_equal(rows.own, [[0.0] * 50, [1.0] * 50])
    assert network.arrows == 1


def test_arrows_stay_arrows_and_nothing_else_becomes_one():
    """Tiny shares drawn loosely are mostly next to nothing, and never nothing; shares of 0 stay 0."""
    network = network_of([[0, 1, 1e-3, 1e-300], [1, 0, 1, 0], [0, 1, 1e-9, 0], [0, 0, 0, 0]])
    rows = RowSource(network, np.full(network.arrows, 0.5)).draw(2_000, seeded())
    assert (rows.weight > 0).all()
    assert (rows.own[[0, 1]] == 0).all()
    assert (rows.own[2] > 0).all()
    assert rows.weight[1].min() < 10 * LEAST * 1e-3
    assert np.isfinite(rows.weight).all()


def test_an_arrow_of_weight_0_is_not_drawn():
    network = Network([1, 1], [0, 0], [1, 1], [0.0, 2.0], [True, True])
    rows = RowSource(network, np.array([5.0, 5.0])).draw(20, seeded())
    assert (rows.weight[0] == 0).all()
    assert (rows.weight[1] > 0).all()


@pytest.mark.parametrize("k", [0.0, -1.0, np.nan])
def test_concentrations_are_above_0(k):
    with pytest.raises(ValueError, match="above 0"):
        RowSource(network_of([[1, 1], [1, 1]]), np.array([k, 1.0]))


def test_adding_up_by_person():
    assert (adder(3, np.array([0, 2, 0])) @ np.array([1.0, 10, 100])).tolist() == [101, 0, 10]
