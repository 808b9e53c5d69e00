"""Rounds at tables, for many tables at once.

At tables an arrow counts only between two who sit together, so what happens at one table depends on nobody else,
and any number of tables can be played side by side as small blocks. A table is a row of chairs that hold indices of
people; a chair that stays empty holds `n`, the number of people.
"""

from __future__ import annotations

import numpy as np

from deliberate.dynamics.network import Floats, Indices, Mask, Network, sum_by
from deliberate.dynamics.shares import Unheard


class TableTalk:
    """So many `rounds` at tables among the people of a network, whoever sits where.

    firmness, starts: (n,) as in `process`. reach: how far apart two beliefs may be to be heard, None for any
        distance. Shares are those of `shares.shares`; here they need to be right to rounding only.
    """

    def __init__(
        self,
        network: Network,
        firmness: Floats,
        starts: Floats,
        rounds: int,
        unheard: Unheard,
        reach: float | None = None,
    ) -> None:
        self.people = network.people
        self.rounds = rounds
        self._reach = reach
        self._spread_out = unheard == "rescale"
        own, points = network.in_parts()
        heard = network.present[network.source]
        both = heard & network.present[network.listener]
        # The last row and column stand for an empty chair: it hears only itself, and nobody hears it.
        self._points = np.zeros((network.people + 1, network.people + 1))
        self._points[network.listener[both], network.source[both]] = points[both]
        self._own = np.append(own, 0.0)
        # By the own rule what the absent are given goes to the own view as well.
        to_absent = sum_by(network.listener, np.where(heard, 0.0, points), network.people)
        self._whole = np.append(own + to_absent, 0.0) + self._points.sum(axis=1)
        self._firmness = np.append(firmness, 0.0)[:, None]
        self._starts = np.append(starts, 0.0)[:, None]

    def views(self, seats: Indices, beliefs: Floats) -> Floats:
        """Beliefs after the rounds: seats (..., s), beliefs before them (..., s, 1)."""
        brought_back = self._firmness[seats] * self._starts[seats]
        open_part = 1.0 - self._firmness[seats]
        points = self._points[seats[..., :, None], seats[..., None, :]]
        shares = None
        for _ in range(self.rounds):
            if self._reach is not None:
                near = np.abs(beliefs - beliefs.swapaxes(-1, -2)) <= self._reach
                shares = self._shares(seats, points * near)
            elif shares is None:
                shares = self._shares(seats, points)
            beliefs = brought_back + open_part * (shares @ beliefs)
        return beliefs

    def voices(self, seats: Indices, voices: Floats) -> Floats:
        """The way back: what beliefs before the rounds count for, and starts brought back during them.

        seats: (..., s). voices: (..., s, 2) what beliefs after the rounds count for, and what the starts count
        for already; both columns together keep their sum. Without a reach.
        """
        firmness = self._firmness[seats][..., 0]
        points = self._points[seats[..., :, None], seats[..., None, :]]
        hear_back = self._shares(seats, points).swapaxes(-1, -2)
        beliefs, starts = voices[..., 0], voices[..., 1]
        for _ in range(self.rounds):
            starts = starts + firmness * beliefs
            beliefs = (hear_back @ ((1.0 - firmness) * beliefs)[..., None])[..., 0]
        return np.stack([beliefs, starts], axis=-1)

    def linked(self) -> Mask:
        """(n + 1, n + 1) True where an arrow leads from one to the other, whichever way; never for empty chairs."""
        heard = self._points > 0
        return heard | heard.T

    def hears(self, seats: Indices) -> Mask:
        """(..., s) whether the one on each chair hears somebody at her table."""
        return (self._points[seats[..., :, None], seats[..., None, :]] > 0).any(axis=-1)

    def _shares(self, seats: Indices, points: Floats) -> Floats:
        heard = points.sum(axis=-1)
        whole = self._own[seats] + heard if self._spread_out else self._whole[seats]
        alone = whole <= 0
        whole = np.where(alone, 1.0, whole)
        shares = points / whole[..., None]
        chair = np.arange(seats.shape[-1])
        shares[..., chair, chair] = np.where(alone, 1.0, np.maximum(whole - heard, 0.0) / whole)
        return shares
