"""The rate: the largest modulus among the eigenvalues that are left when the lasting part is taken away."""

from __future__ import annotations

import numpy as np

from deliberate.dynamics.destination import Destination
from deliberate.dynamics.network import Floats
from deliberate.dynamics.structure import Structure

# Up to this size all eigenvalues are computed; up to the next the leading ones by squaring, checked; then Arnoldi.
ALL_EIGENVALUES = 64
BY_SQUARING = 400
SQUARINGS = 8
LEADING = 12
ARNOLDI_STEPS = 60
# Eigenvalues below this are rounding.
ROUNDING = 1e-14


def rate(kept: Floats, shape: Structure, reached: Destination) -> float:
    """Spectral radius of `kept` (n, n) minus its limit, in [0, 1); every closed group must have period 1.

    Found component by component, so that one-way lines, whose eigenvalues a full solve gets wrong, are exact.
    """
    people = len(kept)
    if not people:
        return 0.0
    sizes = np.bincount(shape.labels)
    single = (sizes[shape.labels] == 1) & (reached.group_of < 0)
    largest = float(kept.diagonal()[single].max(initial=0.0))
    order = np.argsort(shape.labels, kind="stable")
    for members in np.split(order, np.cumsum(sizes)[:-1]):
        if len(members) == 1:
            continue
        block = kept if len(members) == people else kept[np.ix_(members, members)]
        share = reached.within[members] if reached.group_of[members[0]] >= 0 else None
        largest = max(largest, _radius(block, share))
    # Structure says that everything settles; rounding must not say otherwise.
    return min(largest, float(np.nextafter(1.0, 0.0))) if largest > ROUNDING else 0.0


def _radius(block: Floats, share: Floats | None) -> float:
    """Largest eigenvalue modulus of one strongly connected block, without the 1 of a closed group."""
    if len(block) > BY_SQUARING:
        return _radius_by_arnoldi(block, share)
    if len(block) > ALL_EIGENVALUES:
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


def _radius_by_arnoldi(block: Floats, share: Floats | None) -> float:
    """An estimate: the largest Ritz value after a number of Arnoldi steps."""
    steps = min(ARNOLDI_STEPS, len(block))
    basis = np.zeros((steps + 1, len(block)))
    start = np.random.default_rng(0).standard_normal(len(block))
    start = start if share is None else start - share @ start
    basis[0] = start / np.linalg.norm(start)
    small = np.zeros((steps + 1, steps))
    for step in range(steps):
        after = block @ basis[step]
        if share is not None:
            after -= share @ after
        for _ in range(2):
            part = basis[: step + 1] @ after
            small[: step + 1, step] += part
            after -= part @ basis[: step + 1]
        length = np.linalg.norm(after)
        small[step + 1, step] = length
        if length < ROUNDING:
            steps = step + 1
            break
        basis[step + 1] = after / length
    return float(np.abs(np.linalg.eigvals(small[:steps, :steps])).max())
