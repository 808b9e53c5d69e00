"""Shares: what part of a person's next belief comes from whom, under what counts at the moment.

`shares` builds the row-stochastic matrix T (row = listener) of one stage from the drawn arrows. What counts is
decided by the arrows, never by a tolerance: an arrow that counts has a share above 0, whatever the other weights.
The own share is a sum of what goes to the own view, never one minus the rest, so that long-run shares can be
right entry by entry (see `elimination`).
"""

from __future__ import annotations

from functools import cached_property
from typing import Literal

import numpy as np
from scipy.sparse import csr_array

from deliberate.dynamics.network import Floats, Indices, Mask, Network, sum_by

Unheard = Literal["own", "rescale"]
TINY = float(np.finfo(np.float64).tiny)
# Below this many people a full matrix is always quicker; above, when at least one pair in so many is joined.
ALWAYS_FULL = 200
FULL_FROM_ONE_IN = 8


class Shares:
    """A share matrix T that never changes: rows sum to 1, row = listener.

    matrix: (n, n), a read-only full array or a `csr_array` without stored zeros, whichever is quicker.
    """

    def __init__(self, matrix: Floats | csr_array) -> None:
        self.matrix = matrix
        self.full = isinstance(matrix, np.ndarray)
        (matrix if self.full else matrix.data).flags.writeable = False

    @property
    def people(self) -> int:
        """How many people there are."""
        return self.matrix.shape[0]

    @property
    def entries(self) -> int:
        """How many numbers are stored: what one round costs."""
        return self.matrix.size

    def hear(self, beliefs: Floats) -> Floats:
        """Beliefs after everybody has listened once: T b, for (n,) or (n, q)."""
        return self.matrix @ beliefs

    def give_back(self, voice: Floats) -> Floats:
        """What each person's belief before a round counts for when `voice` (n,) is their count after it: w T."""
        return voice @ self.matrix if self.full else self._columns @ voice

    def as_full(self) -> Floats:
        """The matrix as a full array; read-only where it is the one in use."""
        return self.matrix if self.full else self.matrix.toarray()

    @cached_property
    def as_sparse(self) -> csr_array:
        """The matrix as a `csr_array`; its stored entries are exactly the shares above 0."""
        return csr_array(self.matrix) if self.full else self.matrix

    @cached_property
    def _columns(self) -> csr_array:
        return self.matrix.T.tocsr()


def shares(network: Network, heard: Mask | None = None, unheard: Unheard = "own") -> Shares:
    """The share matrix of a network while only the arrows in `heard` count.

    heard: (m,) True for the arrows that count; None when all do. Arrows from or to absent people never do.
    unheard: "own" gives the share of what does not count to the own view, "rescale" spreads it over what still
        counts, the own view included. A person with nothing left that counts hears only herself: T_ii = 1.
    """
    count = network.people
    listener, source, weight, own = network.listener, network.source, network.weight, network.own
    drawn = (weight > 0) & network.present[listener]
    heeded = drawn & network.present[source]
    if heard is not None:
        heeded &= heard
    # Divide by about the row's largest weight that counts before summing: sums then neither overflow nor vanish, and
    # a power of two leaves every digit as it is.
    points = np.where(drawn if unheard == "own" else heeded, weight, 0.0)
    largest = own.copy()
    np.maximum.at(largest, listener, points)
    largest[largest == 0] = 1.0
    unit = np.ldexp(1.0, np.frexp(largest)[1] - 1)
    points = np.maximum(points / unit[listener], TINY)
    to_own = np.where(own > 0, np.maximum(own / unit, TINY), 0.0)
    if not heeded.all():
        if unheard == "own":
            to_own += sum_by(listener, points * (drawn & ~heeded), count)
        listener, source, points = listener[heeded], source[heeded], points[heeded]
    total = to_own + sum_by(listener, points, count)
    alone = (total == 0) | ~network.present
    to_own[alone] = total[alone] = 1.0
    own_share = np.where(to_own > 0, np.maximum(to_own / total, TINY), 0.0)
    share = np.maximum(points / total[listener], TINY)
    return Shares(_stored(count, own_share, listener, source, share))


def _stored(count: int, own_share: Floats, listener: Indices, source: Indices, share: Floats) -> Floats | csr_array:
    """The matrix in the storage that is quicker to multiply with."""
    if count <= ALWAYS_FULL or len(share) * FULL_FROM_ONE_IN >= count * count:
        matrix = np.zeros((count, count))
        matrix[listener, source] = share
        np.fill_diagonal(matrix, own_share)
        return matrix
    (keepers,) = np.nonzero(own_share)
    rows = np.concatenate([listener, keepers])
    columns = np.concatenate([source, keepers])
    matrix = csr_array((np.concatenate([share, own_share[keepers]]), (rows, columns)), shape=(count, count))
    matrix.sort_indices()
    return matrix


def heard_at_tables(network: Network, table_of: Indices) -> Mask:
    """Which arrows count when people sit at tables: those inside one. table_of: (n,), -1 for no table."""
    table = np.asarray(table_of)[network.listener]
    return (table >= 0) & (table == np.asarray(table_of)[network.source])


def heard_from(network: Network, speakers: Mask) -> Mask:
    """Which arrows count when only `speakers` (n,) are heard."""
    return np.asarray(speakers, dtype=bool)[network.source]


def heard_in_pairs(network: Network, pairs: Indices) -> Mask:
    """Which arrows count when people talk in pairs (k, 2): those between the two of a pair, either way."""
    pairs = np.asarray(pairs, dtype=np.intp).reshape(-1, 2)
    low = np.minimum(network.listener, network.source)
    high = np.maximum(network.listener, network.source)
    return np.isin(low * network.people + high, pairs.min(axis=1) * network.people + pairs.max(axis=1))


def heard_in_silence(network: Network) -> Mask:
    """Which arrows count while nobody speaks: none."""
    return np.zeros(network.arrows, dtype=bool)
