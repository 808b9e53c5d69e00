"""Where a talk hangs by a thread: parts that come together inside much sooner than with each other.

The slowest mode of the shares T (its leading right eigenvector after the constant one) is nearly constant on such
parts. People are put in its order and cut where least influence flows across for what either side has: a sweep
over Cheeger cuts (Fiedler 1973; Jerrum and Sinclair 1989). A part that is slow inside is cut again. So many parts
there are, so many modes are slow, the constant one included (Simon and Ando 1961, from memory); where the last of
them is as fast as the talk inside, as on a ring, the cuts fall anywhere and tell nothing.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_array, diags_array

from deliberate.dynamics.network import Floats, Indices

FULL_PEOPLE = 400
MODES = 6
SQUARINGS = 6  # of the lazy map: 2 ** 6 steps
STEPS = 64
MOST_PARTS = 6
SMALLEST_PART = 2
TIMES_SLOWER = 3.0  # with each other than inside
TIMES_SLOWER_ALL = 1.5  # the fastest of the modes across than inside
REAL = 1e-6

Matrix = Floats | csr_array


@dataclass(frozen=True, eq=False)
class Parting:
    """The parts, as sorted indices, and how many turns halve the gap between them and inside the slowest of them."""

    parts: tuple[Indices, ...]
    across: float
    inside: float


def parting(shares: Matrix, influence: Floats) -> Parting | None:
    """The parts of one closed group that hold up its common view; None where nothing of the kind does.

    shares: (k, k) rows sum to 1, irreducible. influence: (k,) its stationary distribution.
    """
    people = shares.shape[0]
    if people < 2 * SMALLEST_PART:
        return None
    flows = _flows(shares, influence)
    whole = np.arange(people)
    rates, mode = _slowest(shares)
    if mode is None:
        return None
    across = _halving(rates[0])
    parts, waiting = [], _cut(whole, mode, flows, influence)
    inside = 0.0
    while waiting:
        part = waiting.pop()
        alone = _by_itself(shares, part)
        own_rates, mode = _slowest(alone)
        if _halving(own_rates[0]) * TIMES_SLOWER <= across:
            parts.append(part)
            inside = max(inside, _halving(_modulus(alone)))
            continue
        cut = _cut(part, mode, flows, influence) if mode is not None else []
        if not cut or len(parts) + len(waiting) + len(cut) > MOST_PARTS:
            return None
        waiting += cut
    if len(parts) < 2 or inside * TIMES_SLOWER > across:
        return None
    if inside * TIMES_SLOWER_ALL > _halving(rates[len(parts) - 2]):
        return None
    return Parting(tuple(sorted(parts, key=lambda part: part[0])), across, inside)


def _halving(rate: float) -> float:
    """Turns that halve a gap which shrinks by `rate` in each."""
    if rate <= 0:
        return 0.0
    return math.inf if rate >= 1 else math.log(0.5) / math.log(rate)


def _slowest(shares: Matrix) -> tuple[Floats, Floats | None]:
    """The leading eigenvalues after 1 by their real parts, and the mode of the first; no mode where that is not a
    positive real number.

    Subspace iteration with the lazy map (I + T)/2, in which swings die out, then Rayleigh-Ritz.
    """
    if shares.shape[0] == 1:
        return np.zeros(1), None
    space = _subspace(shares, lazy=True)
    values, vectors = np.linalg.eig(space.T @ _centred(shares @ space))
    order = np.argsort(-values.real)
    second = values[order[0]]
    if abs(second.imag) > REAL * abs(second) or second.real <= 0:
        return np.array([abs(second)]), None
    return np.minimum(values[order].real, 1.0), space @ vectors[:, order[0]].real


def _modulus(shares: Matrix) -> float:
    """The second-largest modulus of the eigenvalues, swings included."""
    if shares.shape[0] == 1:
        return 0.0
    space = _subspace(shares, lazy=False)
    return float(np.abs(np.linalg.eigvals(space.T @ _centred(shares @ space))).max())


def _centred(modes: Floats) -> Floats:
    """Modes (n, k) without their constant part, so that the eigenvalue 1 becomes 0 and the others stay."""
    return modes - modes.mean(axis=0)


def _subspace(shares: Matrix, lazy: bool) -> Floats:
    """(n, k) an orthonormal basis near the leading modes after the constant one, of the shares or of the lazy map."""
    people = shares.shape[0]
    space = _centred(np.random.default_rng(0).standard_normal((people, min(MODES, people - 1))))
    if people <= FULL_PEOPLE:
        step = shares if isinstance(shares, np.ndarray) else shares.toarray()
        power = _centred((step + np.eye(people)) / 2 if lazy else step)
        for _ in range(SQUARINGS):
            power = power @ power
            power /= max(np.abs(power).max(), np.finfo(float).tiny)
        return np.linalg.qr(power @ np.linalg.qr(power @ space)[0])[0]
    for step in range(STEPS):
        heard = _centred(shares @ space)
        space = (space + heard) / 2 if lazy else heard
        if step % 8 == 7:
            space = np.linalg.qr(space)[0]
    return space


@dataclass(frozen=True, eq=False)
class _Flows:
    """How much influence flows over each pair of different people: influence of the listener times the share."""

    listener: Indices
    source: Indices
    flow: Floats


def _flows(shares: Matrix, influence: Floats) -> _Flows:
    listener, source = shares.nonzero()
    different = listener != source
    listener, source = listener[different], source[different]
    share = np.asarray(shares[listener, source]).ravel()
    return _Flows(listener, source, influence[listener] * share)


def _cut(part: Indices, mode: Floats, flows: _Flows, influence: Floats) -> list[Indices]:
    """The two sides of `part` with the smallest flow across for the influence of the lesser side; [] for none."""
    if len(part) < 2 * SMALLEST_PART:
        return []
    order = part[np.argsort(mode, kind="stable")]
    rank = np.full(len(influence), -1)
    rank[order] = np.arange(len(part))
    one, other = rank[flows.listener], rank[flows.source]
    inner = (one >= 0) & (other >= 0)
    low, high = np.minimum(one, other)[inner], np.maximum(one, other)[inner]
    # A pair is across in all cuts between its two ranks: cut s has the ranks below s on one side.
    changes = np.bincount(low + 1, flows.flow[inner], len(part) + 1)
    changes -= np.bincount(high + 1, flows.flow[inner], len(part) + 1)
    across = np.cumsum(changes)[SMALLEST_PART : len(part) - SMALLEST_PART + 1]
    below = np.cumsum(influence[order])
    lesser = np.minimum(below, below[-1] - below)[SMALLEST_PART - 1 : len(part) - SMALLEST_PART]
    at = SMALLEST_PART + int(np.argmin(across / np.maximum(lesser, np.finfo(float).tiny)))
    return [np.sort(order[:at]), np.sort(order[at:])]


def _by_itself(shares: Matrix, part: Indices) -> Matrix:
    """The shares within a part, when what goes outside it stays with the own view."""
    inner = shares[part][:, part]
    kept = 1.0 - np.asarray(inner.sum(axis=1)).ravel()
    return inner + (np.diag(kept) if isinstance(inner, np.ndarray) else csr_array(diags_array(kept)))
