"""Influence in a large closed group that nearly falls apart into camps which hardly hear each other.

Plain iteration brings each camp to rest quickly and then hardly moves. So the two are done in turn: the camps are
taken as single voices and weighed against each other by elimination, and a few rounds spread what crosses between
them (aggregation and disaggregation; Takahashi 1975; Koury, McAllister and Stewart 1984, SIAM J. Alg. Disc. Meth.
5:164). Nothing is subtracted, so shares keep their accuracy however rarely camps hear each other.
"""

from __future__ import annotations

import numpy as np
from scipy.sparse import csr_array
from scipy.sparse.csgraph import connected_components

from deliberate.dynamics.elimination import stationary
from deliberate.dynamics.network import Floats, Indices, sum_by

# Arrows with a smaller share than this do not hold a camp together; the first of these that leaves few camps.
CUTS = (1e-2, 1e-3, 1e-4, 1e-6, 1e-9, 1e-12)
MOST_CAMPS = 1000
ROUNDS = 30
HELD_BACK = 0.1
CYCLES = 60
AIM = 1e-12


def stationary_of_camps(matrix: csr_array, guess: Floats) -> Floats | None:
    """The share vector p = p T of one closed group, positive and adding to 1; None when it is not found this way.

    matrix: (k, k) shares of the members among themselves; guess: (k,) positive shares to begin with.
    """
    rows = np.repeat(np.arange(len(guess)), np.diff(matrix.indptr))
    for cut in CUTS:
        count, camp = _camps(matrix, rows, cut)
        if 1 < count <= MOST_CAMPS:
            break
    else:
        return None
    columns = matrix.T.tocsr()
    crossing = np.flatnonzero(camp[rows] != camp[matrix.indices])
    pairs = camp[rows[crossing]] * count + camp[matrix.indices[crossing]]
    share, moved = guess, np.inf
    for _ in range(CYCLES):
        held = sum_by(camp, share, count)
        across = share[rows[crossing]] / held[camp[rows[crossing]]] * matrix.data[crossing]
        weighed = stationary(sum_by(pairs, across, count * count).reshape(count, count))
        after = share * (weighed / held)[camp]
        for _ in range(ROUNDS):
            after = HELD_BACK * after + (1 - HELD_BACK) * (columns @ after)
        after /= after.sum()
        before, moved = moved, float((np.abs(after - share) / after).max())
        share = after
        if moved <= AIM:
            return share
        if moved > before / 2 and before < 1e-3:
            return None
    return None


def _camps(matrix: csr_array, rows: Indices, cut: float) -> tuple[int, Indices]:
    """How many camps there are without the arrows below `cut`, and the camp of each member."""
    holds = matrix.data >= cut
    held = csr_array((matrix.data[holds], (rows[holds], matrix.indices[holds])), shape=matrix.shape)
    count, camp = connected_components(held, directed=True, connection="weak")
    return int(count), camp.astype(np.intp)
