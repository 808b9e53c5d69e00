from fractions import Fraction
from itertools import combinations

import numpy as np
import pytest
from exact import assert_close, exact_shares
from hypothesis import given
from hypothesis import strategies as st
from scipy.sparse import csr_array
from talk import as_numbers, network_of, networks, plain_shares, point_matrices

from deliberate.dynamics import shares as module
from deliberate.dynamics.network import Network
from deliberate.dynamics.shares import (
    Shares,
    heard_at_tables,
    heard_from,
    heard_in_pairs,
    heard_in_silence,
    shares,
)

KINDS = ("own", "rescale")


def masked(network: Network) -> st.SearchStrategy[np.ndarray]:
    return st.lists(st.booleans(), min_size=network.arrows, max_size=network.arrows).map(
        lambda mask: np.array(mask, dtype=bool)
    )


def test_shares_are_points_divided_by_their_sum():
    matrix = shares(network_of([[60, 40, 0], [0, 0, 5], [0, 0, 0]])).matrix
    assert matrix.tolist() == [[0.6, 0.4, 0], [0, 0, 1], [0, 0, 1]]


def test_own_gives_what_does_not_count_to_the_own_view_and_rescale_spreads_it():
    network = network_of([[1, 2, 1], [1, 1, 0], [0, 4, 0]])
    heard = np.array([False, True, True, False])  # 0 does not hear 1, 2 hears nobody
    assert shares(network, heard, "own").matrix.tolist() == [[0.75, 0, 0.25], [0.5, 0.5, 0], [0, 0, 1]]
    assert shares(network, heard, "rescale").matrix.tolist() == [[0.5, 0, 0.5], [0.5, 0.5, 0], [0, 0, 1]]


def test_absent_people_hear_only_themselves_and_are_unheard_in_every_stage():
    drawn = network_of([[1, 1, 2], [1, 1, 1], [3, 1, 0]])
    network = Network(drawn.own, drawn.listener, drawn.source, drawn.weight, np.array([True, True, False]))
    assert shares(network, None, "own").matrix.tolist() == [[0.75, 0.25, 0], [1 / 3, 2 / 3, 0], [0, 0, 1]]
    assert shares(network, None, "rescale").matrix.tolist() == [[0.5, 0.5, 0], [0.5, 0.5, 0], [0, 0, 1]]


def test_an_arrow_of_weight_0_is_not_drawn():
    network = Network([1, 1], [0, 1], [1, 0], [0, 2], [True, True])
    assert shares(network).matrix.tolist() == [[1, 0], [2 / 3, 1 / 3]]


def test_nobody_at_all():
    assert shares(network_of(np.zeros((0, 0)))).people == 0


@given(st.data())
def test_any_stage_as_the_words_define_it(data):
    network = data.draw(networks())
    heard, unheard = data.draw(st.none() | masked(network)), data.draw(st.sampled_from(KINDS))
    matrix = shares(network, heard, unheard).matrix
    expected = plain_shares(network, heard, unheard)
    assert ((matrix > 0) == (expected > 0)).all()
    assert matrix == pytest.approx(expected, rel=1e-14)
    assert matrix.sum(axis=1) == pytest.approx(1, abs=1e-15)


@given(point_matrices(written=("0", "1", "1e-300", "1e300", "3e-308", "1.7e308", "3")))
def test_shares_neither_overflow_nor_vanish(written):
    """Every arrow that counts has a share above 0, and normal shares are right to the last digits."""
    matrix = shares(network_of(as_numbers(written))).matrix
    exact = exact_shares(written)
    assert matrix.sum(axis=1) == pytest.approx(1, abs=1e-15)
    for found, row in zip(matrix.tolist(), exact, strict=True):
        for share, wanted in zip(found, row, strict=True):
            assert (share > 0) == (wanted > 0)
            if wanted > Fraction(1, 10**300):
                assert abs(Fraction(share) - wanted) <= wanted / 10**15


@given(point_matrices(), st.floats(1e-6, 1e6))
def test_only_the_proportions_of_points_matter(written, factor):
    weights = as_numbers(written)
    weights[0] *= factor
    assert shares(network_of(weights)).matrix == pytest.approx(
        shares(network_of(as_numbers(written))).matrix, rel=1e-13
    )


@given(st.data())
def test_hearing_everything_is_no_mask_and_hearing_nothing_is_oneself(data):
    network = data.draw(networks())
    unheard = data.draw(st.sampled_from(KINDS))
    everything = np.ones(network.arrows, dtype=bool)
    assert (shares(network, everything, unheard).matrix == shares(network, None, unheard).matrix).all()
    silent = shares(network, heard_in_silence(network), unheard).matrix
    assert (silent == np.eye(network.people)).all()


@given(networks())
def test_full_and_sparse_storage_hold_the_same(network):
    full = shares(network)
    sparse = Shares(csr_array(full.matrix))
    assert full.full
    assert not sparse.full
    assert sparse.entries == np.count_nonzero(full.matrix)
    assert (sparse.as_full() == full.matrix).all()
    assert (full.as_sparse.toarray() == full.matrix).all()
    beliefs = np.linspace(0, 1, network.people)
    assert sparse.hear(beliefs) == pytest.approx(full.hear(beliefs), rel=1e-14)
    both = np.stack([beliefs, 1 - beliefs], axis=1)
    assert sparse.hear(both)[:, 0] == pytest.approx(full.hear(beliefs), rel=1e-14)
    assert sparse.give_back(beliefs) == pytest.approx(beliefs @ full.matrix, rel=1e-14)


def test_storage_follows_size_and_density(monkeypatch):
    """The two ways of building the matrix agree, whichever is chosen."""
    generator = np.random.default_rng(3)
    weights = generator.uniform(1, 9, (240, 240)) * (generator.random((240, 240)) < 0.05)
    weights[:7] = 0.0
    sparse = shares(network_of(weights))
    assert not sparse.full
    assert (sparse.matrix.data > 0).all()
    monkeypatch.setattr(module, "ALWAYS_FULL", 240)
    full = shares(network_of(weights))
    assert full.full
    assert (full.matrix == sparse.matrix.toarray()).all()
    monkeypatch.setattr(module, "ALWAYS_FULL", 0)
    assert shares(network_of(weights + 1.0)).full


def test_matrices_never_change():
    matrix = shares(network_of(np.ones((3, 3))))
    with pytest.raises(ValueError, match="read-only"):
        matrix.matrix[0, 0] = 2.0
    with pytest.raises(ValueError, match="read-only"):
        Shares(csr_array(np.eye(2))).matrix.data[0] = 2.0


def test_tables_speakers_and_pairs_count_as_named():
    network = network_of(np.ones((5, 5)))
    pairs = list(zip(network.listener.tolist(), network.source.tolist(), strict=True))

    def counted(mask):
        return {pair for pair, counts in zip(pairs, mask.tolist(), strict=True) if counts}

    assert counted(heard_at_tables(network, [0, 1, 0, 1, -1])) == {(0, 2), (2, 0), (1, 3), (3, 1)}
    assert counted(heard_at_tables(network, [-1] * 5)) == set()
    assert counted(heard_from(network, [False, True, False, False, False])) == {(0, 1), (2, 1), (3, 1), (4, 1)}
    assert counted(heard_in_pairs(network, [[3, 1], [0, 4]])) == {(1, 3), (3, 1), (0, 4), (4, 0)}
    assert counted(heard_in_pairs(network, np.zeros((0, 2), dtype=int))) == set()
    assert counted(heard_in_silence(network)) == set()


@pytest.mark.parametrize("people", [2, 3, 6, 9])
def test_one_pair_meeting_halfway_lowers_the_variance_as_it_should(people):
    """Boyd et al. 2006, IEEE Trans. Inf. Theory 52:2508 (from memory): with a random pair at a time, the expected
    variance is multiplied by 1 - 1/(n-1) at every meeting."""
    network = network_of(np.ones((people, people)))
    beliefs = np.random.default_rng(people).uniform(0, 1, people)
    after = [
        np.var(shares(network, heard_in_pairs(network, [pair]), "rescale").hear(beliefs))
        for pair in combinations(range(people), 2)
    ]
    assert np.mean(after) == pytest.approx(np.var(beliefs) * (1 - 1 / (people - 1)), rel=1e-12, abs=1e-16)


def test_wrong_shapes_are_refused():
    with pytest.raises(ValueError, match="shape"):
        Network([1, 1], [0], [1], [1, 2], [True, True])
    with pytest.raises(ValueError, match="shape"):
        Network([1, 1], [0], [1], [1], [True])


@given(point_matrices())
def test_shares_right_to_the_last_digits(written):
    assert_close(shares(network_of(as_numbers(written))).matrix, exact_shares(written), 1e-15)
