"""How much of the variance of an outcome a guess explains: first-order shares, from the draws themselves.

For independent inputs the share Var(E[Y | X]) / Var(Y) says by how much the variance of Y would shrink on average if
X became known (first-order index: Sobol 1993; Saltelli et al. 2008, Global Sensitivity Analysis; from memory). Here X
is one guess with one or more numbers, a start or a whole row of shares, and E[Y | X] is fitted by least squares; what
such a fit explains of pure noise is taken off (adjusted R squared, Ezekiel 1930).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.special import fdtrc

from deliberate.dynamics.network import Floats

SAME = 1e-9  # less than this part of a number, or of its variance, is rounding


@dataclass(frozen=True)
class Explained:
    """share: of the variance, adjusted, may be slightly below 0; error: its standard error in large samples,
    2 r (1 - r^2) / sqrt(draws) (Olkin and Finn 1995, from memory); chance: how often noise alone would explain as
    much (F test)."""

    share: float
    error: float
    chance: float


NOTHING = Explained(0.0, 0.0, 1.0)


class Association:
    """Sums over draws from which the variance of q outcomes that k numbers explain can be told. Of numbers with a
    fixed sum one is left out.

    centre: (k,) and (q,) values near the means, so that nothing is lost in the sums.
    """

    def __init__(self, centre: Floats, outcome_centre: Floats) -> None:
        self._centre, self._outcome_centre = centre[:, None], outcome_centre[:, None]
        self._draws = 0
        self._sum, self._squares = np.zeros(len(centre)), np.zeros((len(centre), len(centre)))
        self._outcome_sum, self._outcome_squares = np.zeros(len(outcome_centre)), np.zeros(len(outcome_centre))
        self._products = np.zeros((len(centre), len(outcome_centre)))

    def add(self, numbers: Floats, outcomes: Floats) -> None:
        """More draws: numbers (k, d), outcomes (q, d)."""
        numbers, outcomes = numbers - self._centre, outcomes - self._outcome_centre
        self._draws += numbers.shape[1]
        self._sum += numbers.sum(axis=1)
        self._squares += numbers @ numbers.T
        self._outcome_sum += outcomes.sum(axis=1)
        self._outcome_squares += (outcomes * outcomes).sum(axis=1)
        self._products += numbers @ outcomes.T

    def explained(self, outcome: int) -> Explained:
        """What the numbers explain of one outcome; nothing where there are hardly more draws than numbers."""
        draws = self._draws
        if not draws:
            return NOTHING
        mean, outcome_mean = self._sum / draws, self._outcome_sum[outcome] / draws
        variance = self._outcome_squares[outcome] / draws - outcome_mean**2
        spread = self._squares / draws - np.outer(mean, mean)
        scale = np.sqrt(np.maximum(spread.diagonal(), 0.0))
        varies = scale > SAME * np.sqrt(self._squares.diagonal() / draws + self._centre[:, 0] ** 2)
        still = variance <= SAME**2 * (self._outcome_centre[outcome, 0] ** 2 + variance)
        if still or not 0 < varies.sum() < draws - 1:
            return NOTHING
        joint = self._products[varies, outcome] / draws - mean[varies] * outcome_mean
        correlation = joint / (scale[varies] * np.sqrt(variance))
        together = spread[np.ix_(varies, varies)] / np.outer(scale[varies], scale[varies])
        together[np.diag_indices_from(together)] += SAME  # numbers that say the same keep a solution
        explained = min(float(correlation @ np.linalg.solve(together, correlation)), 1.0)
        return _adjusted(explained, len(correlation), draws)


def _adjusted(explained: float, numbers: int, draws: int) -> Explained:
    left = draws - numbers - 1
    share = 1.0 - (1.0 - explained) * (draws - 1) / left
    error = 2.0 * np.sqrt(max(share, 0.0)) * (1.0 - share) / np.sqrt(draws)
    if explained >= 1.0:
        return Explained(share, 0.0, 0.0)
    chance = fdtrc(numbers, left, explained / numbers / ((1.0 - explained) / left))
    return Explained(share, float(error), float(chance))
