"""The rate: the largest modulus among the eigenvalues that are left when the lasting part is taken away."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from scipy.linalg import lu_factor, lu_solve
from scipy.sparse import coo_array, csr_array

from deliberate.dynamics.destination import Destination
from deliberate.dynamics.krylov import leading_eigenvalue
from deliberate.dynamics.large import LargeTurn
from deliberate.dynamics.network import Floats, Indices
from deliberate.dynamics.structure import Structure

# Up to this many people in one component all eigenvalues are computed; up to the next number the leading ones by
# squaring, checked; above, by Arnoldi steps.
ALL_EIGENVALUES = 64
BY_SQUARING = 1000
SQUARINGS = 8
LEADING = 12
ARNOLDI_STEPS = 80
# Near 1 Arnoldi steps are too coarse; up to this size the eigenvalue nearest to 1 is then found by solving.
NEARLY_ONE = 0.9
BY_SOLVING = 3000
# Eigenvalues below this are rounding.
ROUNDING = 1e-14
ESTIMATE = "the rate is an estimate, because many people hear each other"


def rate(kept: Floats | csr_array, shape: Structure, reached: Destination) -> tuple[float, bool]:
    """Spectral radius of `kept` (n, n) minus its limit, in [0, 1), and whether it is exact.

    Every closed group must have period 1. Found component by component, so that one-way lines, whose eigenvalues
    a full solve gets wrong, are exact.
    """
    if not kept.shape[0]:
        return 0.0, True
    sizes = np.bincount(shape.labels)
    closed = reached.group_of >= 0
    single = (sizes[shape.labels] == 1) & ~closed
    largest, exact = float(kept.diagonal()[single].max(initial=0.0)), True
    for members in _large_components(shape.labels, sizes):
        block = _among(kept, members)
        share = reached.within[members] if closed[members[0]] else None
        if len(members) > BY_SQUARING:
            found, well = _radius_of_large(block, share)
            exact &= well
        else:
            found = _radius(block.toarray() if isinstance(block, csr_array) else block, share)
        largest = max(largest, found)
    for members, blocks in _small_components(kept, shape.labels, sizes):
        moduli = np.sort(np.abs(np.linalg.eigvals(blocks)), axis=1)
        largest = max(largest, float(np.where(closed[members[:, 0]], moduli[:, -2], moduli[:, -1]).max()))
    return _below_one(largest), exact


def rate_of_pass(turn: LargeTurn, reached: Destination) -> float:
    """The rate per turn of a turn that is never written out; an estimate."""
    nobody = np.zeros(turn.people)
    closed = reached.group_of >= 0

    def among_passing(beliefs: Floats) -> Floats:
        return np.where(closed, 0.0, turn.apply(np.where(closed, 0.0, beliefs), nobody))

    def among_closed(beliefs: Floats) -> Floats:
        beliefs = np.where(closed, beliefs, 0.0)
        after = turn.apply(beliefs, nobody)
        after[closed] -= reached.group_views(beliefs)[reached.group_of[closed]]
        return np.where(closed, after, 0.0)

    return _below_one(
        max(abs(leading_eigenvalue(part, turn.people, ARNOLDI_STEPS)[0]) for part in (among_passing, among_closed))
    )


def _below_one(radius: float) -> float:
    """Structure says that everything settles; rounding must not say otherwise."""
    return min(radius, float(np.nextafter(1.0, 0.0))) if radius > ROUNDING else 0.0


def _large_components(labels: Indices, sizes: Indices) -> Iterator[Indices]:
    """The members of each component that is treated by itself."""
    for label in np.flatnonzero(sizes > ALL_EIGENVALUES):
        yield np.flatnonzero(labels == label)


def _small_components(kept: Floats | csr_array, labels: Indices, sizes: Indices) -> Iterator[tuple[Indices, Floats]]:
    """The other components of two people or more, those of one size together: (c, k) members, (c, k, k) blocks."""
    wanted = (sizes > 1) & (sizes <= ALL_EIGENVALUES)
    if len(sizes) == 1 and wanted[0]:
        yield np.arange(sizes[0])[None, :], (kept.toarray() if isinstance(kept, csr_array) else kept)[None, :, :]
        return
    if not wanted.any():
        return
    entries = kept.tocoo() if isinstance(kept, csr_array) else coo_array(kept)
    rows, columns = entries.coords
    inside = (labels[rows] == labels[columns]) & wanted[labels[rows]]
    rows, columns, values = rows[inside], columns[inside], entries.data[inside]
    order = np.argsort(labels, kind="stable")
    place = np.empty(len(labels), dtype=np.intp)
    place[order] = np.arange(len(labels)) - np.repeat(np.cumsum(sizes) - sizes, sizes)
    for size in np.unique(sizes[wanted]):
        found = np.flatnonzero(sizes == size)
        number = np.full(len(sizes), -1, dtype=np.intp)
        number[found] = np.arange(len(found))
        blocks = np.zeros((len(found), size, size))
        chosen = number[labels[rows]] >= 0
        blocks[number[labels[rows[chosen]]], place[rows[chosen]], place[columns[chosen]]] = values[chosen]
        yield order[number[labels[order]] >= 0].reshape(len(found), size), blocks


def _among(kept: Floats | csr_array, members: Indices) -> Floats | csr_array:
    """The rows and columns of `members`."""
    if len(members) == kept.shape[0]:
        return kept
    return kept[members][:, members] if isinstance(kept, csr_array) else kept[np.ix_(members, members)]


def _radius(block: Floats, share: Floats | None) -> float:
    """Largest eigenvalue modulus of one strongly connected block, without the 1 of a closed group."""
    found = _radius_by_squaring(block if share is None else block - share)
    if found is not None:
        return found
    moduli = np.sort(np.abs(np.linalg.eigvals(block)))
    return float(moduli[-1] if share is None else moduli[-2])


def _radius_by_squaring(block: Floats) -> float | None:
    """Leading eigenvalue by subspace iteration with a high power; None when the check does not hold."""
    power = block
    for _ in range(SQUARINGS):
        size = np.abs(power).max()
        if size < ROUNDING:
            return 0.0 if power is block else None
        power = power / size
        power = power @ power
    space = np.random.default_rng(0).standard_normal((len(block), LEADING))
    for _ in range(3):
        space, _ = np.linalg.qr(power @ space)
    image = block @ space
    values, vectors = np.linalg.eig(space.T @ image)
    first = np.argmax(np.abs(values))
    missing = image @ vectors[:, first] - values[first] * (space @ vectors[:, first])
    radius = float(abs(values[first]))
    return radius if np.linalg.norm(missing) <= 1e-10 * radius else None


def _radius_of_large(block: Floats | csr_array, share: Floats | None) -> tuple[float, bool]:
    """The same for a large block, by Arnoldi steps, and whether they have converged."""

    def rest(beliefs: Floats) -> Floats:
        return block @ beliefs if share is None else block @ beliefs - share @ beliefs

    leading, exact = leading_eigenvalue(rest, block.shape[0], ARNOLDI_STEPS)
    radius = abs(leading)
    if exact or radius < NEARLY_ONE or block.shape[0] > BY_SOLVING:
        return radius, exact
    full = block.toarray() if isinstance(block, csr_array) else block
    missing = np.eye(len(full)) - full
    if share is not None:
        missing += share
    factors = lu_factor(missing, check_finite=False)
    inverse, exact = leading_eigenvalue(lambda given: lu_solve(factors, given), len(full), ARNOLDI_STEPS)
    nearest = abs(1 - 1 / inverse)
    return max(radius, nearest), exact and nearest >= radius
