"""Drawing what is only guessed: starting beliefs within their margins, listening rows around their shares.

Draws stand side by side in the last axis, so that one numpy call works on all of them. Everything is repeated exactly
by the same seed.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike
from scipy.sparse import csr_array
from scipy.stats import qmc

from deliberate.dynamics.network import Floats, Indices, Mask, Network
from deliberate.dynamics.shares import TINY

# A drawn share stays above this part of the share it is drawn around, so that an arrow stays an arrow: closed groups
# and periods are those of the sketch in every draw.
LEAST = 1e-6
MOST_SOBOL = 21_201  # dimensions for which scipy has direction numbers (Joe and Kuo 2008)


def draw_starts(low: Floats, high: Floats, count: int, seed: np.random.Generator) -> Floats:
    """(n, count) starting beliefs, every belief from `low` to `high` (n,) as likely as any other.

    Scrambled Sobol points (Owen 1998): the beliefs of every single person, and of most pairs, fill their range more
    evenly than independent draws would. Where low equals high nothing is drawn.
    """
    starts = np.repeat(low[:, None], count, axis=1)
    (open_,) = np.nonzero(high > low)
    if not len(open_) or not count:
        return starts
    if len(open_) > MOST_SOBOL:
        points = seed.random((len(open_), count))
    else:
        # Whole powers of two keep the points balanced; what is beyond `count` is left out.
        points = qmc.Sobol(len(open_), seed=seed).random_base2(max(count - 1, 1).bit_length())[:count].T
    width = (high - low)[open_, None]
    starts[open_] = np.minimum(low[open_, None] + width * points, high[open_, None])
    return starts


@dataclass(frozen=True, eq=False)
class Rows:
    """Drawn rows of shares: own (n, d), weight (m, d) by arrow; each person's own share and arrows sum to 1."""

    own: Floats
    weight: Floats


class RowSource:
    """Draws everybody's row of shares around the row of the sketch.

    Every share s above 0 is drawn from a gamma distribution with mean s and variance s / k, k being its
    concentration, and then each row is divided by its sum. With one k in a row that is the Dirichlet distribution
    with parameters k s, whose shares have mean s and variance s (1 - s) / (k + 1). Where k differs within a row, the
    less sure shares vary more and the means shift a little. The own view takes the mean k of the row's arrows,
    weighted by their shares. k = inf: not drawn.
    """

    def __init__(self, network: Network, concentration: ArrayLike) -> None:
        """concentration: (m,) above 0, by arrow."""
        self.listener: Indices = network.listener
        self._by_listener = adder(network.people, network.listener)
        self.own, self.share = self._row_shares(network)
        self._concentration = np.broadcast_to(np.asarray(concentration, dtype=np.float64), self.share.shape)
        if not (self._concentration > 0).all():
            raise ValueError("concentrations must be above 0")

    def _row_shares(self, network: Network) -> tuple[Floats, Floats]:
        """(n,) own shares and (m,) shares by arrow, before any stage or absence."""
        own, points = network.in_parts()
        total = own + self._by_listener @ points
        own[total == 0] = total[total == 0] = 1.0
        share = points / total[network.listener]
        return (
            np.where(network.own > 0, np.maximum(own / total, TINY), own / total),
            np.where(network.weight > 0, np.maximum(share, TINY), 0.0),
        )

    @cached_property
    def doubtful(self) -> Mask:
        """(n,) True for those whose row is drawn: it has more than one share, and not all of them are known."""
        entries = self._by_listener @ (self.share > 0) + (self.own > 0)
        open_ = self._by_listener @ ((self.share > 0) & np.isfinite(self._concentration))
        return (entries > 1) & (open_ > 0)

    @cached_property
    def _own_concentration(self) -> Floats:
        heard = self._by_listener @ self.share
        with np.errstate(invalid="ignore"):
            mean = (self._by_listener @ np.where(self.share > 0, self.share * self._concentration, 0.0)) / heard
        return np.where(heard > 0, mean, np.inf)

    def draw(self, count: int, source: np.random.Generator) -> Rows:
        """`count` draws of all rows."""
        open_ = self.doubtful
        own = _gamma(self.own, np.where(open_, self._own_concentration, np.inf), count, source)
        weight = _gamma(self.share, np.where(open_[self.listener], self._concentration, np.inf), count, source)
        total = own + self._by_listener @ weight
        return Rows(own / total, weight / total[self.listener])


def _gamma(mean: Floats, concentration: Floats, count: int, source: np.random.Generator) -> Floats:
    """(k, count) gamma variates with these means and variances mean / concentration."""
    drawn = np.repeat(mean[:, None], count, axis=1)
    (open_,) = np.nonzero((mean > 0) & np.isfinite(concentration))
    around, k = mean[open_, None], concentration[open_, None]
    least = np.maximum(LEAST * around, TINY)
    drawn[open_] = np.maximum(source.standard_gamma(np.maximum(k * around, TINY), (len(open_), count)) / k, least)
    return drawn


def adder(people: int, person: Indices) -> csr_array:
    """The (people, k) matrix that adds up values by the index of their person."""
    many = len(person)
    return csr_array((np.ones(many), (person, np.arange(many))), shape=(people, many))
