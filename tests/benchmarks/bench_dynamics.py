"""What the numbers alone cost, beside a straightforward script of the same answer, in one run.

The plain script: strongly connected components by networkx, left eigenvectors by `numpy.linalg.eig`, the limit and
the rounds by stepping with `matrix_power`. The bounds are the project's own; a benchmark fails beyond them.
"""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable
from dataclasses import dataclass

import networkx as nx
import numpy as np
import pytest

from deliberate.dynamics.agreeing import rounds_to_agree
from deliberate.dynamics.longrun import long_run
from deliberate.dynamics.network import Network
from deliberate.dynamics.process import Block, Process
from deliberate.dynamics.rounds import play

ROUNDS = 12
TOLERANCE = 0.01
TIMES_FASTER = 10
ONE_ROUND = 1.1
ONE_SOLVE = 5


@dataclass(frozen=True)
class Talk:
    """People, their arrows and their starting beliefs, before anything is computed."""

    network: Network
    starts: np.ndarray

    @property
    def process(self) -> Process:
        """A process of which nothing has been worked out yet."""
        people = self.network.people
        return Process(self.network, (Block(None, "own", ROUNDS),), False, np.zeros(people))


def talk(people: int, arrows: int | None = None) -> Talk:
    """Everybody hears everybody, or so many arrows at random; points from 1 to 20."""
    draw = np.random.default_rng(1)
    if arrows is None:
        listener, source = np.nonzero(~np.eye(people, dtype=bool))
    else:
        pairs = np.unique(draw.integers(0, people * people, 2 * arrows))
        listener, source = np.divmod(draw.permutation(pairs[pairs // people != pairs % people])[:arrows], people)
    weight = draw.integers(1, 20, len(listener)).astype(float)
    network = Network(np.full(people, 10.0), listener, source, weight, np.ones(people, dtype=bool))
    return Talk(network, draw.uniform(0, 1, people))


def ours(given: Talk) -> np.ndarray:
    """The whole analysis: rounds, groups, influence, limit, rate and the rounds to the tolerance."""
    process = given.process
    play(process, given.starts, ROUNDS)
    found = long_run(process, given.starts)
    rounds_to_agree(process, given.starts, TOLERANCE, found)
    return found.limit


def plain(given: Talk) -> np.ndarray:
    """The same answer by a straightforward script."""
    network, starts = given.network, given.starts
    people = network.people
    matrix = np.diag(network.own)
    matrix[network.listener, network.source] = network.weight
    matrix /= matrix.sum(axis=1, keepdims=True)
    graph = nx.from_numpy_array(matrix, create_using=nx.DiGraph)
    parts = list(nx.strongly_connected_components(graph))
    closed = [sorted(part) for part in parts if all(set(graph[one]) <= part for one in part)]
    for group in closed:
        nx.is_aperiodic(graph.subgraph(group))
    values, vectors = np.linalg.eig(matrix.T)
    influence = vectors[:, np.argmax(values.real)].real
    influence /= influence.sum()
    np.sort(np.abs(values))[-2:-1]
    for rounds in range(1, ROUNDS + 1):
        np.linalg.matrix_power(matrix, rounds) @ starts
    held, rounds = starts, 0
    while np.ptp(held) > TOLERANCE and rounds < 1_000:
        held, rounds = matrix @ held, rounds + 1
    return np.full(people, influence @ starts) if len(closed) == 1 else np.linalg.matrix_power(matrix, 4096) @ starts


def ratio(ours: Callable[[], object], theirs: Callable[[], object], times: int) -> float:
    """How many times as long ours takes; the two take turns, so that both meet the same noise."""
    ours()
    theirs()
    pairs = [(seconds(ours), seconds(theirs)) for _ in range(times)]
    return statistics.median(one / other for one, other in pairs)


def seconds(work: Callable[[], object]) -> float:
    begin = time.perf_counter()
    work()
    return time.perf_counter() - begin


@pytest.mark.parametrize(("people", "arrows"), [(300, None), (2_000, 20_000)], ids=["300 full", "2000 sparse"])
def test_beside_a_plain_script(benchmark, people, arrows):
    given = talk(people, arrows)
    assert ours(given) == pytest.approx(plain(given), abs=1e-9)
    faster = 1 / ratio(lambda: ours(given), lambda: plain(given), 9 if arrows is None else 3)
    benchmark.pedantic(ours, (given,), rounds=5)
    benchmark.extra_info["times faster"] = round(faster, 1)
    assert faster >= TIMES_FASTER


@pytest.mark.parametrize(
    ("people", "arrows"),
    [(300, None), (2_000, 20_000), (2_000, None)],
    ids=["300 full", "2000 sparse", "2000 full"],
)
def test_one_round_beside_a_bare_product(benchmark, people, arrows):
    given = talk(people, arrows)
    process, matrix = given.process, given.process.legs[0].shares.matrix
    rounds = 2_000 if people < 2_000 else 200

    def products() -> None:
        held = given.starts
        for _ in range(rounds):
            held = matrix @ held

    def played() -> None:
        play(process, given.starts, rounds)

    times = ratio(played, products, 15)
    benchmark.extra_info["times a product"] = round(times, 3)
    benchmark.pedantic(played, rounds=3)
    assert times <= ONE_ROUND


def test_2000_people_who_all_hear_each_other(benchmark):
    """The whole rehearsal within five times one solve of that size."""
    given = talk(2_000)
    system = np.eye(2_000) - 0.5 * given.process.legs[0].shares.matrix
    times = ratio(lambda: ours(given), lambda: np.linalg.solve(system, given.starts), 7)
    benchmark.pedantic(ours, (given,), rounds=3)
    benchmark.extra_info["times one solve"] = round(times, 2)
    assert times <= ONE_SOLVE


def test_a_crowd(benchmark):
    """100,000 people and 1,000,000 arrows, without reading a file."""
    given = talk(100_000, 1_000_000)
    benchmark.pedantic(ours, (given,), rounds=3)
    assert benchmark.stats.stats.median < 10
