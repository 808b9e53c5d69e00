"""Courses of talk for tests: from a matrix of points, and at random; and what plain loops say about them."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from hypothesis import strategies as st
from numpy.typing import ArrayLike

from deliberate.dynamics.network import Network
from deliberate.dynamics.process import Block, Process

# Points as they are written in a file: half of the pairs hear nothing of each other.
POINTS = ("0", "0", "0", "0", "1", "2.5", "0.3", "7")
# Points that lie twelve powers of ten apart.
FAR_APART = ("0", "0", "0", "1", "2.5", "1e-12", "7e-12", "0.3e-6")
FEW = st.integers(1, 7)
FIRMNESS = (0.0, 0.0, 0.0, 0.0, 0.25, 0.6, 1.0)


def network_of(matrix: ArrayLike) -> Network:
    """The network whose weights are the entries of a square matrix (row = listener), everybody present."""
    weights = np.asarray(matrix, dtype=np.float64)
    own = weights.diagonal().copy()
    listener, source = np.nonzero(weights)
    drawn = listener != source
    listener, source = listener[drawn], source[drawn]
    return Network(own, listener, source, weights[listener, source], np.ones(len(own), dtype=bool))


def plenary(points: Sequence[Sequence[float]], firmness: Sequence[float] | None = None) -> Process:
    """Everybody hears everybody, for ever, with these points (row = listener)."""
    network = network_of(np.array(points, dtype=float))
    firm = np.zeros(network.people) if firmness is None else np.array(firmness, dtype=float)
    return Process(network, (Block(None, "own", 1),), False, firm)


def line(people: int, own: float = 0.1) -> np.ndarray:
    """Points of a one-way line: the first hears only herself, everybody else the one before and herself."""
    points = np.eye(people) * own
    points[0, 0] = 1.0
    points[np.arange(1, people), np.arange(people - 1)] = 1 - own
    return points


def ring(people: int, own: float = 0.0) -> np.ndarray:
    """Points of a ring: everybody hears both neighbours alike."""
    points = np.eye(people) * own
    for person in range(people):
        points[person, [person - 1, (person + 1) % people]] = 1.0
    return points


def plain_shares(network: Network, heard: np.ndarray | None, unheard: str) -> np.ndarray:
    """The share matrix, arrow by arrow, as the words define it."""
    rows = np.zeros((network.people, network.people))
    for person in range(network.people):
        rows[person, person] = network.own[person]
    for at in range(network.arrows):
        listener, source, weight = network.listener[at], network.source[at], network.weight[at]
        if not network.present[listener]:
            continue
        if network.present[source] and (heard is None or heard[at]):
            rows[listener, source] += weight
        elif unheard == "own":
            rows[listener, listener] += weight
    for person in range(network.people):
        if not network.present[person] or not rows[person].any():
            rows[person] = 0.0
            rows[person, person] = 1.0
    return rows / rows.sum(axis=1, keepdims=True)


def plain_rounds(process: Process, starts: np.ndarray, rounds: int, reach: float | None = None) -> np.ndarray:
    """Beliefs after round 0, 1, ..., by b(t+1) = F b(0) + (I - F) T(t) b(t) alone."""
    schedule = [block for block in process.blocks for _ in range(block.rounds)]
    network, firmness = process.network, process.firmness
    played = [np.array(starts, dtype=float)]
    for at in range(rounds):
        block = schedule[at % len(schedule) if process.repeat else min(at, len(schedule) - 1)]
        held, heard = played[-1], block.heard
        if reach is not None:
            near = np.abs(held[network.source] - held[network.listener]) <= reach + 1e-12
            heard = near if heard is None else near & heard
        matrix = plain_shares(network, heard, block.unheard)
        played.append(firmness * starts + (1 - firmness) * (matrix @ held))
    return np.array(played)


def point_matrices(
    people: st.SearchStrategy[int] = FEW, written: Sequence[str] = POINTS
) -> st.SearchStrategy[list[list[str]]]:
    """Square matrices of points in decimal text, row = listener."""
    one = st.sampled_from(written)
    return people.flatmap(lambda n: st.lists(st.lists(one, min_size=n, max_size=n), min_size=n, max_size=n))


def as_numbers(written: Sequence[Sequence[str]]) -> np.ndarray:
    """The doubles nearest to the decimal text."""
    return np.array([[float(points) for points in row] for row in written])


@st.composite
def networks(draw: st.DrawFn, written: Sequence[str] = POINTS) -> Network:
    """Up to seven people, some of them perhaps absent."""
    drawn = network_of(as_numbers(draw(point_matrices(written=written))))
    there = draw(st.lists(st.sampled_from((True, True, True, False)), min_size=drawn.people, max_size=drawn.people))
    return Network(drawn.own, drawn.listener, drawn.source, drawn.weight, np.array(there))


@st.composite
def processes(draw: st.DrawFn, firm: bool = True) -> Process:
    """One to three stages in which some arrows count, perhaps repeated, with firm people where `firm`."""
    network = draw(networks())
    kinds = FIRMNESS if firm else (0.0,)
    firmness = draw(st.lists(st.sampled_from(kinds), min_size=network.people, max_size=network.people))
    masks = st.one_of(st.none(), st.lists(st.booleans(), min_size=network.arrows, max_size=network.arrows))
    blocks = []
    for _ in range(draw(st.integers(1, 3))):
        mask = draw(masks)
        heard = None if mask is None else np.array(mask, dtype=bool)
        blocks.append(Block(heard, draw(st.sampled_from(("own", "rescale"))), draw(st.integers(1, 3))))
    return Process(network, tuple(blocks), draw(st.booleans()), np.array(firmness))


def starts_of(process: Process) -> st.SearchStrategy[np.ndarray]:
    """Starting beliefs on a scale from 0 to 1, whole hundredths so that ties occur."""
    people = process.network.people
    hundredths = st.lists(st.integers(0, 100), min_size=people, max_size=people)
    return hundredths.map(lambda numbers: np.array(numbers) / 100)


@st.composite
def talks(draw: st.DrawFn, firm: bool = True) -> tuple[Process, np.ndarray]:
    """A process and starting beliefs."""
    process = draw(processes(firm))
    return process, draw(starts_of(process))


def in_other_order(process: Process, order: np.ndarray) -> Process:
    """The same talk with person order[k] in place k."""
    network = process.network
    place = np.argsort(order)
    moved = Network(
        network.own[order], place[network.listener], place[network.source], network.weight, network.present[order]
    )
    return Process(moved, process.blocks, process.repeat, process.firmness[order])
