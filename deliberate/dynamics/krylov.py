"""Krylov steps: what repeated application of a map to a vector tells about the map.

Arnoldi 1951, Quarterly of Applied Mathematics 9:17; GMRES: Saad and Schultz 1986, SIAM J. Sci. Stat. Comput. 7:856.
Orthogonalised twice with whole-matrix products, which is several times quicker than one vector at a time.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from deliberate.dynamics.network import Floats

Map = Callable[[Floats], Floats]
# Next to 1, a vector this short is rounding.
ROUNDING = 1e-14


def arnoldi(apply: Map, start: Floats, steps: int) -> tuple[Floats, Floats]:
    """An orthonormal basis (k + 1, n) and the map seen in it (k + 1, k), with k <= steps.

    apply(basis[:k].T) = basis.T @ seen; k is smaller when the map does not lead out of the space any more, and the
    last row of `seen` is then 0.
    """
    steps = min(steps, len(start))
    basis = np.zeros((steps + 1, len(start)))
    seen = np.zeros((steps + 1, steps))
    basis[0] = start / np.linalg.norm(start)
    for step in range(steps):
        after = apply(basis[step])
        length = np.linalg.norm(after)
        for _ in range(2):
            part = basis[: step + 1] @ after
            seen[: step + 1, step] += part
            after = after - part @ basis[: step + 1]
        left = np.linalg.norm(after)
        if left <= ROUNDING * length:
            return basis[: step + 2], seen[: step + 2, : step + 1]
        seen[step + 1, step] = left
        basis[step + 1] = after / left
    return basis, seen


def leading_eigenvalue(apply: Map, size: int, steps: int) -> tuple[complex, bool]:
    """The eigenvalue of largest modulus as far as so many steps show it, and whether it is right to 1e-9."""
    start = apply(np.random.default_rng(0).standard_normal(size))
    if np.linalg.norm(start) < ROUNDING * np.sqrt(size):
        return 0j, True
    _, seen = arnoldi(apply, start, steps)
    values, vectors = np.linalg.eig(seen[:-1])
    first = np.argmax(np.abs(values))
    missing = seen[-1, -1] * abs(vectors[-1, first])
    return complex(values[first]), bool(missing <= 1e-9 * abs(values[first]))


def gmres(apply: Map, given: Floats, steps: int, restarts: int) -> Floats | None:
    """x with apply(x) = given to a relative 1e-8 of the residual; None when so many restarts do not get there."""
    answer, missing = np.zeros(len(given)), given
    aim = 1e-8 * np.linalg.norm(given)
    for _ in range(restarts):
        length = np.linalg.norm(missing)
        if length <= aim:
            return answer
        basis, seen = arnoldi(apply, missing, steps)
        wanted = np.zeros(len(seen))
        wanted[0] = length
        answer = answer + np.linalg.lstsq(seen, wanted, rcond=None)[0] @ basis[: seen.shape[1]]
        missing = given - apply(answer)
    return answer if np.linalg.norm(missing) <= aim else None
