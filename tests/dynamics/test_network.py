import numpy as np
from hypothesis import given
from talk import as_numbers, network_of, point_matrices

from deliberate.dynamics.network import sum_by


@given(point_matrices())
def test_a_matrix_of_points_and_the_arrows_drawn_from_it_say_the_same(written):
    weights = as_numbers(written)
    network = network_of(weights)
    again = np.diag(network.own)
    again[network.listener, network.source] = network.weight
    assert (again == weights).all()
    assert (network.listener != network.source).all()
    assert (network.people, network.arrows) == (len(weights), np.count_nonzero(again) - np.count_nonzero(network.own))
    assert network.present.all()


def test_sums_by_index():
    sums = sum_by(np.array([2, 0, 2]), np.array([1.0, 2.0, 4.0]), 4)
    assert sums.tolist() == [2, 0, 5, 0]
    nothing = sum_by(np.zeros(0, dtype=np.intp), np.zeros(0), 2)
    assert nothing.dtype == np.float64
    assert nothing.tolist() == [0, 0]


def test_parts_of_the_largest_weight_neither_overflow_nor_vanish():
    huge, tiny = 1.7e308, 5e-324
    network = network_of([[huge, huge, huge], [0, tiny, tiny], [0, 0, 0]])
    own, points = network.in_parts()
    assert own.tolist() == [1, 1, 0]
    assert points.tolist() == [1, 1, 1]
