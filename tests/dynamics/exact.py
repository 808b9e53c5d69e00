"""Long-run answers in exact fractions, by plain linear algebra: an algorithm independent of the program's."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import gcd

import networkx as nx
import numpy as np

Row = list[Fraction]


def exact_shares(written: Sequence[Sequence[str]]) -> list[Row]:
    """The share matrix of points in decimal text; nobody to hear means hearing only oneself."""
    rows = []
    for person, row in enumerate(written):
        points = [Fraction(entry) for entry in row]
        total = sum(points)
        rows.append(
            [entry / total for entry in points] if total else [Fraction(int(j == person)) for j in range(len(row))]
        )
    return rows


def long_run_map(shares: Sequence[Row], firmness: Sequence[Fraction] = ()) -> list[Row]:
    """(n, n): what each start counts for in each long-run average; rows sum to 1.

    A firm person listens to one more node, her own start, which never changes (Friedkin and Johnsen 1990).
    """
    people = len(shares)
    firmness = list(firmness) or [Fraction(0)] * people
    firm = [person for person in range(people) if firmness[person]]
    chain = [
        [(1 - firmness[i]) * share for share in shares[i]] + [firmness[i] * (j == i) for j in firm]
        for i in range(people)
    ]
    chain += [[Fraction(int(j == people + k)) for j in range(people + len(firm))] for k in range(len(firm))]
    whole = _averages(chain)
    folded = [row[:people] for row in whole[:people]]
    for k, person in enumerate(firm):
        for i in range(people):
            folded[i][person] += whole[i][people + k]
    return folded


def _averages(chain: list[Row]) -> list[Row]:
    """The average of all powers of a row-stochastic matrix."""
    nodes = len(chain)
    groups = closed_groups(chain)
    passing = sorted(set(range(nodes)) - {node for group in groups for node in group})
    result = [[Fraction(0)] * nodes for _ in range(nodes)]
    vectors = []
    for group in groups:
        inner = [[chain[i][j] - (i == j) for j in group] for i in group]
        # v (T - 1) = 0 with one of its equations replaced by: all shares add to 1.
        system = [list(column) for column in zip(*inner, strict=True)]
        system[-1] = [Fraction(1)] * len(group)
        right = [[Fraction(0)] for _ in group[:-1]] + [[Fraction(1)]]
        vectors.append([row[0] for row in solve(system, right)])
        for i in group:
            for j, share in zip(group, vectors[-1], strict=True):
                result[i][j] = share
    if passing:
        system = [[(i == j) - chain[i][j] for j in passing] for i in passing]
        right = [[sum(chain[i][j] for j in group) for group in groups] for i in passing]
        for i, chances in zip(passing, solve(system, right), strict=True):
            for group, vector, chance in zip(groups, vectors, chances, strict=True):
                for j, share in zip(group, vector, strict=True):
                    result[i][j] = chance * share
    return result


def closed_groups(chain: Sequence[Sequence[Fraction]]) -> list[list[int]]:
    """The strongly connected components without a way out, by networkx, ordered by their lowest member."""
    graph = nx.DiGraph()
    graph.add_nodes_from(range(len(chain)))
    graph.add_edges_from((i, j) for i, row in enumerate(chain) for j, share in enumerate(row) if share > 0)
    components = nx.strongly_connected_components(graph)
    return sorted(sorted(c) for c in components if all(target in c for i in c for target in graph[i]))


def period(chain: Sequence[Sequence[Fraction]], group: Sequence[int]) -> int:
    """The greatest common divisor of the lengths of all ways round, up to as many arrows as there are members."""
    joined = np.array([[chain[i][j] > 0 for j in group] for i in group])
    ways, found = np.eye(len(group), dtype=bool), 0
    for length in range(1, len(group) + 1):
        ways = (ways[:, :, None] & joined[None, :, :]).any(axis=1)
        if ways.diagonal().any():
            found = gcd(found, length)
    return found


def solve(system: Sequence[Row], right: Sequence[Row]) -> list[Row]:
    """x with system x = right, by Gauss and Jordan."""
    rows = [[*left, *given] for left, given in zip(system, right, strict=True)]
    size = len(rows)
    for column in range(size):
        pivot = next(i for i in range(column, size) if rows[i][column])
        rows[column], rows[pivot] = rows[pivot], rows[column]
        first = rows[column][column]
        rows[column] = [entry / first for entry in rows[column]]
        for i in range(size):
            factor = rows[i][column]
            if i != column and factor:
                rows[i] = [entry - factor * other for entry, other in zip(rows[i], rows[column], strict=True)]
    return [row[size:] for row in rows]


def mean_of_columns(matrix: Sequence[Row]) -> Row:
    """What each start counts for in the mean over people."""
    return [sum(column) / len(matrix) for column in zip(*matrix, strict=True)]


def assert_close(found: np.ndarray, expected: Sequence[Fraction] | Sequence[Row], relative: float = 1e-12) -> None:
    """Every entry is right to this relative error, and 0 exactly where it is 0."""
    found = np.asarray(found, dtype=float)
    for value, wanted in zip(found.ravel().tolist(), _flat(expected), strict=True):
        assert abs(Fraction(value) - wanted) <= Fraction(relative) * abs(wanted), (value, float(wanted))


def _flat(values: Sequence) -> list[Fraction]:
    return [entry for value in values for entry in (value if isinstance(value, list) else [value])]
