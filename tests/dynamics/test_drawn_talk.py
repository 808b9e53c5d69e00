from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from talk import line, network_of, plenary, ring

from deliberate.dynamics.drawn_talk import BrokenOff, DrawnFate, DrawnTalk
from deliberate.dynamics.draws import RowSource, draw_starts
from deliberate.dynamics.longrun import long_run
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import play

DRAWS = 5


@st.composite
def processes(draw):
    """Small courses of talk with all there is: stages, absence, firmness, repetition."""
    people = draw(st.integers(1, 6))
    entries = st.sampled_from([0.0, 0.0, 1.0, 3.5, 10.0, 1e-9])
    points = [[draw(entries) for _ in range(people)] for _ in range(people)]
    present = np.array([draw(st.sampled_from([True, True, True, False])) for _ in range(people)])
    network = replace(network_of(points), present=present)
    masks = st.none() | st.lists(st.booleans(), min_size=network.arrows, max_size=network.arrows).map(
        lambda heard: np.array(heard, dtype=bool)
    )
    blocks = st.builds(Block, masks, st.sampled_from(["own", "rescale"]), st.integers(1, 3))
    firmness = np.array([draw(st.sampled_from([0.0, 0.0, 0.0, 0.3, 1.0])) for _ in range(people)])
    return Process(network, tuple(draw(st.lists(blocks, min_size=1, max_size=3))), draw(st.booleans()), firmness)


def drawn(process, seed=3, draws=DRAWS, k=5.0):
    """Rows and starts on the scale 0 to 100."""
    source = np.random.default_rng(seed)
    people = process.network.people
    rows = RowSource(process.network, np.full(process.network.arrows, k)).draw(draws, source)
    return rows, draw_starts(np.zeros(people), np.full(people, 100.0), draws, source)


def one_draw(process, rows, at):
    """The process with the rows of one draw for its points."""
    network = replace(process.network, own=rows.own[:, at], weight=rows.weight[:, at])
    return replace(process, network=network)


@given(processes(), st.sampled_from([None, None, 30.0]))
def test_draws_side_by_side_are_those_played_one_by_one(process, hearing_range):
    rows, starts = drawn(process)
    played = DrawnTalk(process, rows, starts, hearing_range, 100.0).play(7)
    for at in range(DRAWS):
        alone = play(one_draw(process, rows, at), starts[:, at], 7, hearing_range, 100.0)
        assert played[..., at] == pytest.approx(alone, abs=1e-9)


@given(processes())
def test_long_runs_are_those_worked_out_one_by_one(process):
    rows, starts = drawn(process)
    talk = DrawnTalk(process, rows, starts)
    fate = DrawnFate(process, 0.0, 100.0)
    ends, settles = fate.of(talk).long_run(talk.play(fate.rounds_before)[-1])
    for at in range(DRAWS):
        alone = long_run(one_draw(process, rows, at), starts[:, at], scale_width=100.0)
        assert ends[:, at] == pytest.approx(alone.average, abs=1e-9)
        assert settles[at] == alone.settles


def test_groups_that_hardly_hear_each_other_keep_their_digits():
    """Twelve powers of ten between the points: the draws' long run to a relative 1e-9, as for one sketch."""
    points = np.array([[5, 5, 1e-12, 0], [5, 5, 0, 0], [0, 3e-12, 5, 5], [0, 0, 5, 5]], dtype=float)
    process = plenary(points)
    rows, starts = drawn(process, k=30.0)
    fate = DrawnFate(process, 0.0, 100.0)
    ends, _ = fate.of(DrawnTalk(process, rows, starts)).long_run(starts)
    for at in range(DRAWS):
        assert ends[:, at] == pytest.approx(long_run(one_draw(process, rows, at), starts[:, at]).average, rel=1e-9)


def test_a_swing_that_these_starts_do_not_set_off_settles():
    process = plenary([[0, 1], [1, 0]])
    starts = np.array([[40.0, 40.0], [40.0, 60.0]])
    rows = RowSource(process.network, np.full(2, 10.0)).draw(2, np.random.default_rng(0))
    ends, settles = DrawnFate(process, 0.0, 100.0).of(DrawnTalk(process, rows, starts)).long_run(starts)
    assert settles.tolist() == [True, False]
    assert ends == pytest.approx(np.array([[40.0, 50.0], [40.0, 50.0]]))


@pytest.mark.parametrize("points", [[[1, 1], [3, 5]], [[2, 1, 1], [1, 4, 0], [0, 3, 3]], line(4, 0.4), ring(5, 1.0)])
def test_variance_of_the_limit_under_dirichlet_rows(points):
    """By first order: the limit is pi b, and moving row i by dT_i moves it by pi_i dT_i Z b, with Z the fundamental
    matrix (Schweitzer 1968, J. Appl. Prob. 5:401; Meyer 1975, SIAM Rev. 17:443; from memory), so that its variance is
    the sum of pi_i^2 Var(Dirichlet row . Z b)."""
    points, k, draws = np.asarray(points, dtype=float), 2_000.0, 4_096
    process = plenary(points)
    people = len(points)
    beliefs = np.linspace(10, 90, people) ** 1.2 / 3
    shares = points / points.sum(axis=1, keepdims=True)
    influence = np.linalg.matrix_power(shares, 2**20)[0]
    gain = np.linalg.inv(np.eye(people) - shares + np.outer(np.ones(people), influence)) @ beliefs
    row_variance = (shares @ gain**2 - (shares @ gain) ** 2) / (k + 1)
    expected = (influence**2 * row_variance).sum()
    rows, _ = drawn(process, draws=draws, k=k)
    starts = np.repeat(beliefs[:, None], draws, axis=1)
    ends, _ = DrawnFate(process, 0.0, 100.0).of(DrawnTalk(process, rows, starts)).long_run(starts)
    assert ends[0].mean() == pytest.approx(influence @ beliefs, abs=0.1)
    assert ends[0].var() == pytest.approx(expected, rel=0.1, abs=1e-12)


def test_stepping_to_rest_finds_the_limit():
    """Without a hearing range it must come to where elimination leads."""
    process = plenary([[2, 1, 0, 0], [1, 2, 1, 0], [0, 1, 2, 1], [0, 0, 1, 2]], [0.0, 0.2, 0.0, 0.0])
    rows, starts = drawn(process)
    talk = DrawnTalk(process, rows, starts)
    stepped, rests = talk.step_to_rest(starts)
    ends, _ = DrawnFate(process, 0.0, 100.0).of(talk).long_run(starts)
    assert rests.all()
    assert stepped == pytest.approx(ends, abs=0.01)


def test_stepping_says_where_views_do_not_rest():
    process = plenary([[0, 1], [1, 0]])
    starts = np.array([[40.0, 40.0], [40.0, 60.0]])
    rows = RowSource(process.network, np.full(2, 10.0)).draw(2, np.random.default_rng(0))
    ends, rests = DrawnTalk(process, rows, starts).step_to_rest(starts)
    assert rests.tolist() == [True, False]
    assert np.sort(ends, axis=0) == pytest.approx(starts)


def test_a_hearing_range_leaves_groups_apart_in_each_draw_by_itself():
    """Equal weights; beliefs exactly the range apart hear each other, in groups of three (as in Hegarty and Wedin,
    arXiv:1406.0819, for this range)."""
    process = plenary(np.ones((6, 6)))
    rows = RowSource(process.network, np.full(process.network.arrows, np.inf)).draw(2, np.random.default_rng(0))
    starts = np.array([[0, 10, 20, 30, 40, 50], [0, 1, 2, 3, 4, 5]], dtype=float).T
    ends, rests = DrawnTalk(process, rows, starts, 10.0, 100.0).step_to_rest(starts)
    assert rests.all()
    assert len(set(np.round(ends[:, 0], 2))) == 2
    assert ends[:, 1] == pytest.approx(np.full(6, 2.5))


def test_stopping_ends_playing_and_stepping():
    process = plenary([[1, 1], [1, 1]])
    rows, starts = drawn(process)
    calls = []

    def after_three():
        calls.append(1)
        return len(calls) > 3

    with pytest.raises(BrokenOff):
        DrawnTalk(process, rows, starts, stopped=after_three).play(100)
    assert len(calls) == 4
    with pytest.raises(BrokenOff):
        DrawnTalk(process, rows, starts, stopped=lambda: True).step_to_rest(starts)


def test_nobody_talks():
    process = plenary(np.zeros((0, 0)))
    rows, starts = drawn(process)
    talk = DrawnTalk(process, rows, starts)
    fate = DrawnFate(process, 0.0, 1.0)
    ends, settles = fate.of(talk).long_run(talk.play(2)[-1])
    assert ends.shape == (0, DRAWS)
    assert settles.all()
