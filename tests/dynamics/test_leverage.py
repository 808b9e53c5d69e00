"""Leverage by closed forms against finite differences, recomputation and published values."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from talk import network_of

from deliberate.dynamics.leverage import (
    Lasting,
    RowChanges,
    pull_at_end,
    pull_in_long_run,
    results_at_end,
    results_in_long_run,
    weight_shares,
    with_row,
)
from deliberate.dynamics.longrun import long_run
from deliberate.dynamics.network import Network
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import play

STEP = 1e-6


def plain(matrix, firmness=None, *, rounds=3) -> Process:
    matrix = np.asarray(matrix, dtype=float)
    firm = np.zeros(len(matrix)) if firmness is None else np.asarray(firmness, dtype=float)
    return Process(network_of(matrix), (Block(None, "own", rounds),), False, firm)


@st.composite
def talks(draw: st.DrawFn, repeat: bool = False) -> tuple[Process, np.ndarray, np.ndarray]:
    """A process of two stages with firmness and absence, starts and a voice: the mean of those present."""
    size = draw(st.integers(2, 5))
    random = np.random.default_rng(draw(st.integers(0, 10_000)))
    matrix = random.uniform(0.1, 1, (size, size)) * (
        random.random((size, size)) < draw(st.sampled_from([0.4, 0.8, 1]))
    )
    present = random.random(size) < 0.85
    present[0] = True
    network = replace(network_of(matrix), present=present)
    heard = random.random(network.arrows) < 0.7
    blocks = (
        Block(heard, draw(st.sampled_from(["own", "rescale"])), draw(st.integers(1, 3))),
        Block(draw(st.sampled_from([None, heard])), draw(st.sampled_from(["own", "rescale"])), 2),
    )
    firmness = np.where(random.random(size) < draw(st.sampled_from([0, 0.5])), random.uniform(0.1, 0.9, size), 0.0)
    process = Process(network, draw(st.sampled_from([blocks, blocks[1:]])), repeat, firmness)
    return process, random.uniform(0, 100, size), present / present.sum()


def some_changes(process: Process, seed: int) -> RowChanges:
    """One change a person: her weights mixed anew, arrows staying above 0 where they were, or more firmness."""
    random = np.random.default_rng(seed)
    weights = weight_shares(process.network)
    size = len(weights)
    rows = np.where(weights > 0, weights * random.uniform(0.5, 2, weights.shape), 0.0)
    rows /= rows.sum(axis=1, keepdims=True)
    firmness = np.where(random.random(size) < 0.3, np.minimum(process.firmness + 0.1, 0.95), process.firmness)
    return RowChanges(np.arange(size), rows, firmness)


@given(talks(), st.integers(0, 1000))
def test_finite_changes_are_what_recomputing_gives(talk, seed):
    process, starts, voice = talk
    changes = some_changes(process, seed)
    rounds = sum(block.rounds for block in process.blocks) + 1
    ends = results_at_end(process, starts, rounds, voice, changes)
    lasting = results_in_long_run(process, starts, Lasting.of(process, voice), changes)
    for at, person in enumerate(changes.person):
        other = with_row(process, person, changes.weights[at], changes.firmness[at])
        assert ends[at] == pytest.approx(voice @ play(other, starts, rounds)[-1], abs=1e-9)
        assert lasting[at] == pytest.approx(voice @ long_run(other, starts).average, abs=1e-7)


@given(talks())
def test_pull_is_the_derivative_of_the_result(talk):
    process, starts, voice = talk
    rounds = sum(block.rounds for block in process.blocks)
    weights = weight_shares(process.network)
    at_end, start_end = pull_at_end(process, starts, rounds, voice)
    in_long_run, start_long_run = pull_in_long_run(process, starts, Lasting.of(process, voice))
    size = len(starts)
    for person in range(size):
        sources = np.flatnonzero(weights[person])
        if len(sources) < 2:
            continue
        first, last = sources[0], sources[-1]
        shift = np.zeros(size)
        shift[[first, last]] = -1, 1
        finite = [
            with_row(process, person, weights[person] + sign * STEP * shift, process.firmness[person])
            for sign in (1, -1)
        ]
        ends = [voice @ play(one, starts, rounds)[-1] for one in finite]
        assert at_end[person, last] - at_end[person, first] == pytest.approx(np.diff(ends)[0] / (-2 * STEP), abs=1e-4)
        far = [voice @ long_run(one, starts).average for one in finite]
        slope = in_long_run[person, last] - in_long_run[person, first]
        assert slope == pytest.approx(np.diff(far)[0] / (-2 * STEP), rel=1e-3, abs=1e-3)
    higher = starts + np.eye(size)
    ends = play(process, starts, rounds)[-1] @ voice
    for person in range(size):
        assert start_end[person] == pytest.approx(voice @ play(process, higher[person], rounds)[-1] - ends, abs=1e-9)
        change = voice @ long_run(process, higher[person]).average - voice @ long_run(process, starts).average
        assert start_long_run[person] == pytest.approx(change, abs=1e-9)


@pytest.mark.parametrize(("a", "b"), [(0.3, 0.2), (0.05, 0.7), (1.0, 0.5)])
def test_two_people_as_published(a, b):
    """Schweitzer 1968, Meyer 1975 (from memory): d(influence)/da = (-b, b)/(a+b)^2."""
    process = plain([[1 - a, a], [b, 1 - b]])
    for start, slope in (((1, 0), -b / (a + b) ** 2), ((0, 1), b / (a + b) ** 2)):
        pull, _ = pull_in_long_run(process, np.array(start, dtype=float), Lasting.of(process, np.full(2, 0.5)))
        assert pull[0, 1] - pull[0, 0] == pytest.approx(slope)


def test_a_finite_change_of_two_people_exactly():
    """Influence is (b, a)/(a+b); from a = 0.3 to 0.4 the second person's goes from 0.3/0.5 to 0.4/0.6."""
    process = plain([[0.7, 0.3], [0.2, 0.8]])
    changes = RowChanges(np.array([0]), np.array([[0.6, 0.4]]), np.zeros(1))
    result = results_in_long_run(process, np.array([0.0, 1.0]), Lasting.of(process, np.full(2, 0.5)), changes)
    assert result[0] == pytest.approx(2 / 3, rel=1e-12)


def test_total_effects_as_published():
    """Friedkin and Johnsen 1999 (quoted): what each start counts for in each limit, within 0.0015."""
    points = [[0.220, 0.120, 0.360, 0.300], [0.147, 0.215, 0.344, 0.294], [0, 0, 1, 0], [0.090, 0.178, 0.446, 0.286]]
    effects = [[0.280, 0.045, 0.551, 0.124], [0.047, 0.278, 0.549, 0.126], [0, 0, 1, 0], [0.030, 0.048, 0.532, 0.390]]
    process = plain(points, np.diag(points))
    for person, expected in enumerate(effects):
        _, counts = pull_in_long_run(process, np.array([25.0, 25, 75, 85]), Lasting.of(process, np.eye(4)[person]))
        assert counts == pytest.approx(expected, abs=0.0015)


def test_fundamental_matrix_as_published():
    """Grinstead and Snell 1997, Land of Oz: Z from memory, fixed vector (2/5, 1/5, 2/5) quoted. The pull of row i
    is p_i times Z b."""
    process = plain([[1 / 2, 1 / 4, 1 / 4], [1 / 2, 0, 1 / 2], [1 / 4, 1 / 4, 1 / 2]])
    fundamental = np.array([[86, 3, -14], [6, 63, 6], [-14, 3, 86]]) / 75
    for start in np.eye(3):
        pull, counts = pull_in_long_run(process, start, Lasting.of(process, np.full(3, 1 / 3)))
        assert counts == pytest.approx([0.4, 0.2, 0.4])
        assert pull == pytest.approx(np.outer([0.4, 0.2, 0.4], fundamental @ start))


def test_equal_people_have_equal_leverage():
    """Everybody gives the same; two who start alike cannot differ."""
    matrix = np.full((5, 5), 0.1)
    np.fill_diagonal(matrix, 0.6)
    process = plain(matrix)
    starts = np.array([20.0, 20, 70, 70, 50])
    for pull, counts in (
        pull_at_end(process, starts, 3, np.full(5, 0.2)),
        pull_in_long_run(process, starts, Lasting.of(process, np.full(5, 0.2))),
    ):
        assert counts == pytest.approx(np.full(5, 0.2))
        assert pull[0, 2] == pytest.approx(pull[1, 3])
        assert pull[2, 0] == pytest.approx(pull[3, 1])


def test_an_arrow_out_of_a_closed_group_has_no_derivative():
    process = plain([[0.5, 0.5, 0, 0], [0.5, 0.5, 0, 0], [0, 0, 0.5, 0.5], [0, 0, 0.5, 0.5]])
    everybody = [np.ones((4, 4), dtype=bool)]
    pull, _ = pull_in_long_run(process, np.array([0.0, 0, 1, 1]), Lasting.of(process, np.full(4, 0.25)), everybody)
    assert np.isnan(pull[0, 2:]).all()
    assert np.isfinite(pull[0, :2]).all()


def test_someone_who_becomes_firm_draws_the_closed_group():
    process = plain([[0.5, 0.5], [0.5, 0.5]])
    changes = RowChanges(np.array([1]), np.array([[0.5, 0.5]]), np.array([0.1]))
    assert results_in_long_run(process, np.array([0.0, 8.0]), Lasting.of(process, np.full(2, 0.5)), changes)[
        0
    ] == pytest.approx(8.0)


def test_weights_as_shares():
    network = Network(
        own=np.array([1e300, 0.0]),
        listener=np.array([0]),
        source=np.array([1]),
        weight=np.array([1e300]),
        present=[1, 1],
    )
    assert weight_shares(network).tolist() == [[0.5, 0.5], [0, 1]]
