import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from talk import line, plenary, talks

from deliberate.dynamics import turns as module
from deliberate.dynamics.process import Leg, course
from deliberate.dynamics.rounds import play
from deliberate.dynamics.turns import advance, followed_by, give_back, repeated, round_turn, turn_of


def rows_add_to_one(turn) -> bool:
    return np.allclose(turn.kept.sum(axis=1) + turn.brought.sum(axis=1), 1.0, rtol=0, atol=1e-14)


@given(talks())
def test_one_round_as_a_map(talk):
    process, starts = talk
    turn = round_turn(process.legs[0].shares, process.firmness)
    assert turn.firm.tolist() == np.flatnonzero(process.firmness).tolist()
    assert rows_add_to_one(turn)
    assert turn.apply(starts, starts) == pytest.approx(play(process, starts, 1)[1], abs=1e-15)


@given(talks())
def test_a_pass_through_the_plan_as_a_map(talk):
    process, starts = talk
    turn = turn_of(process.legs, process.firmness)
    rounds = sum(leg.rounds for leg in process.legs)
    assert rows_add_to_one(turn)
    assert turn.apply(starts, starts) == pytest.approx(play(process, starts, rounds)[-1], abs=1e-14)


@given(talks(), st.integers(1, 70))
def test_many_turns_by_squaring_are_turns_one_by_one(talk, count):
    process, starts = talk
    turn = turn_of(process.legs, process.firmness)
    held = starts
    for _ in range(count):
        held = turn.apply(held, starts)
    assert repeated(turn, count).apply(starts, starts) == pytest.approx(held, abs=1e-13)


def test_the_later_turn_stands_on_the_left():
    first, then = (plenary(np.array(points)) for points in ([[1.0, 1], [0, 1]], [[1.0, 0], [1, 1]]))
    one, two = (round_turn(process.legs[0].shares, np.zeros(2)) for process in (first, then))
    assert followed_by(one, two).kept.tolist() == [[0.5, 0.5], [0.25, 0.75]]
    assert followed_by(two, one).kept.tolist() == [[0.75, 0.25], [0.5, 0.5]]


@pytest.mark.parametrize("squared", [False, True])
@given(talk=talks())
def test_what_is_given_back_is_what_is_carried_on(talk, squared):
    """voice @ (beliefs after) = counts of beliefs before + counts of starts, for any voice: an adjoint identity."""
    process, starts = talk
    beliefs, voice = np.sqrt(starts + 0.5), np.linspace(0.1, 1, len(starts))
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "LONG_LEG", 0 if squared else 10**9)
        after = advance(process.legs, process.firmness, beliefs, starts)
        to_beliefs, to_starts = give_back(process.legs, process.firmness, voice)
    assert (to_beliefs >= 0).all()
    assert (to_starts >= 0).all()
    assert to_beliefs.sum() + to_starts.sum() == pytest.approx(voice.sum(), rel=1e-13)
    assert to_beliefs @ beliefs + to_starts @ starts == pytest.approx(voice @ after, rel=1e-12)


@given(talks())
def test_a_long_leg_crossed_by_squaring_is_played_round_by_round(talk):
    process, starts = talk
    (lasting,) = course(process).lasting[:1]
    long = (Leg(lasting.shares, module.LONG_LEG + 45),)
    crossed = advance(long, process.firmness, starts, starts)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "SQUARING_PEOPLE", 0)
        played = advance(long, process.firmness, starts, starts)
    assert crossed == pytest.approx(played, abs=1e-12)


def test_products_of_tiny_shares_stay_above_nothing():
    """Structure says who counts; a product below the smallest double must not say otherwise."""
    points = np.array([[1.0, 1e-250, 0], [0, 1.0, 1e-250], [0, 0, 1.0]])
    turn = repeated(round_turn(plenary(points).legs[0].shares, np.zeros(3)), 2)
    assert 0 < turn.kept[0, 2] < 1e-300
    assert ((turn.kept > 0) == (np.linalg.matrix_power(points > 0, 2) > 0)).all()


def test_a_firmness_next_to_nothing_or_to_all_still_counts():
    matrix = plenary([[1, 1], [1, 1]]).legs[0].shares
    turn = round_turn(matrix, np.array([5e-324, np.nextafter(1, 0)]))
    assert (turn.kept > 0).all()
    assert turn.brought[0, 0] > 0
    assert round_turn(matrix, np.array([0.0, 1.0])).kept[1].tolist() == [0, 0]


def test_maps_of_a_line_hold_what_has_come_through():
    """Row k of t rounds is the binomial distribution of how far back somebody is heard."""
    turn = repeated(round_turn(plenary(line(8)).legs[0].shares, np.zeros(8)), 3)
    assert turn.kept[7, 4:] == pytest.approx([0.729, 0.243, 0.027, 0.001], rel=1e-13)
