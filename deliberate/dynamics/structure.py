"""Closed groups, periods and swing phases: facts about which shares are above 0, never about how large they are.

Closed groups are strongly connected components without an arrow out (closed communicating classes of a Markov
chain). The period of a group is the greatest common divisor of level(i) + 1 - level(j) over its arrows i -> j,
level counted breadth first from any member (Denardo 1977, Management Science 23:1005).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csr_array
from scipy.sparse.csgraph import breadth_first_order, connected_components

from deliberate.dynamics.network import Indices, Mask

FRONTIER = 8


@dataclass(frozen=True, eq=False)
class ClosedSet:
    """One closed group: `members` (k,) sorted, its `period`, and `phases` (k,) in 0 .. period - 1.

    Members of one phase hear only members of the next one; the lowest member has phase 0.
    """

    members: Indices
    period: int
    phases: Indices


@dataclass(frozen=True, eq=False)
class Structure:
    """Who can hear whom in the end: `labels` (n,) number the strongly connected components."""

    labels: Indices
    closed: tuple[ClosedSet, ...]


def full_structure(matrix: NDArray[np.float64], leaking: Mask) -> Structure:
    """`structure` of a full array, in which every entry above 0 is an arrow; quick where most are."""
    people = len(matrix)
    if people and matrix.diagonal().any() and _reaches_all(matrix) and _reaches_all(matrix.T):
        one = ClosedSet(np.arange(people), 1, np.zeros(people, dtype=np.intp))
        return Structure(np.zeros(people, dtype=np.intp), () if leaking.any() else (one,))
    return structure(csr_array(matrix), leaking)


def _reaches_all(matrix: NDArray[np.float64]) -> bool:
    """Arrows lead from node 0 to every other."""
    seen = np.zeros(len(matrix), dtype=bool)
    seen[0] = True
    waiting = seen.copy()
    while True:
        (frontier,) = np.nonzero(waiting)
        if not len(frontier):
            return bool(seen.all())
        some = frontier[:FRONTIER]  # a few rows often reach everything
        waiting[some] = False
        found = matrix[some].any(axis=0) & ~seen
        seen |= found
        waiting |= found
        if seen.all():
            return True


def components(joined: csr_array) -> tuple[int, Indices]:
    """How many strongly connected components there are, and the (n,) number of each node's component.

    joined: (n, n), row = listener; every stored entry is an arrow, own shares included.
    """
    if joined.shape[0] == 0:
        return 0, np.zeros(0, dtype=np.intp)
    count, labels = connected_components(joined, directed=True, connection="strong")
    return int(count), labels.astype(np.intp)


def structure(joined: csr_array, leaking: Mask | None = None) -> Structure:
    """The components, and the closed groups ordered by their lowest member.

    joined: (n, n) as for `components`.
    leaking: (n,) nodes that also hear something outside the network, so that their component is not closed.
    """
    count, labels = components(joined)
    rows = _rows(joined)
    closed = np.ones(count, dtype=bool)
    closed[labels[rows[labels[rows] != labels[joined.indices]]]] = False
    if leaking is not None:
        closed[labels[leaking]] = False
    swings = closed.copy()
    swings[labels[rows[rows == joined.indices]]] = False  # an own share ends every swing
    members = np.flatnonzero(closed[labels])
    groups = _split(members, labels[members])
    swinging = [group for group in groups if swings[labels[group[0]]]]
    periods, level = _periods(joined, swinging) if swinging else ({}, np.zeros(len(labels), dtype=np.intp))
    closed_sets = tuple(
        ClosedSet(group, period, level[group] % period)
        for group in groups
        for period in (periods.get(int(group[0]), 1),)
    )
    return Structure(labels, closed_sets)


def _rows(joined: csr_array) -> Indices:
    """The row of each stored entry."""
    return np.repeat(np.arange(joined.shape[0]), np.diff(joined.indptr))


def _split(nodes: Indices, labels: Indices) -> list[Indices]:
    """`nodes` (sorted) by label: sorted arrays, ordered by their first node."""
    if not len(nodes):
        return []
    order = np.argsort(labels, kind="stable")
    cuts = np.flatnonzero(np.diff(labels[order])) + 1
    return sorted(np.split(nodes[order], cuts), key=lambda group: group[0])


def _periods(joined: csr_array, groups: list[Indices]) -> tuple[dict[int, int], Indices]:
    """The period of each closed group by its first member, and everybody's level below that member."""
    nodes = joined.shape[0]
    roots = np.array([group[0] for group in groups])
    level = _levels(joined, roots)
    number = np.full(nodes, -1, dtype=np.intp)
    for at, group in enumerate(groups):
        number[group] = at
    rows = _rows(joined)
    within = number[rows] >= 0
    rows, columns = rows[within], joined.indices[within]
    order = np.argsort(number[rows], kind="stable")
    gaps = (level[rows] + 1 - level[columns])[order]
    starts = np.searchsorted(number[rows][order], np.arange(len(groups)))
    periods = np.gcd.reduceat(gaps, starts)
    return {int(root): int(period) for root, period in zip(roots, periods, strict=True)}, level


def _levels(joined: csr_array, roots: Indices) -> Indices:
    """How many arrows lead at least to each node from the one root in its group; 0 where none does."""
    nodes = joined.shape[0]
    # One search from an extra node that hears all roots does for all groups.
    indices = np.concatenate([joined.indices, roots])
    indptr = np.append(joined.indptr, len(indices))
    searched = csr_array((np.ones(len(indices)), indices, indptr), shape=(nodes + 1, nodes + 1))
    order, before = breadth_first_order(searched, nodes, directed=True, return_predecessors=True)
    level = np.zeros(nodes + 1, dtype=np.intp)
    level[order[1:]] = 1
    # Pointer doubling: after k steps `level` has counted 2^k arrows back, and `ancestor` is that far back.
    ancestor = np.where(before < 0, nodes, before).astype(np.intp)
    while (ancestor != nodes).any():
        level = level + level[ancestor]
        ancestor = ancestor[ancestor]
    return np.maximum(level[:-1] - 1, 0)
