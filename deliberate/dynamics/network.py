"""Who listens to whom, as arrays: the arrows as they were drawn, before any stage or presence is applied."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]
Mask = NDArray[np.bool_]


def sum_by(index: Indices, values: Floats, count: int) -> Floats:
    """(count,) sums of the values that have the same index."""
    return np.bincount(index, values, count).astype(np.float64, copy=False)  # bincount counts in int when empty


@dataclass(frozen=True, eq=False)
class Network:
    """People 0 .. n-1 and arrows 0 .. m-1; arrow k means that `listener[k]` hears `source[k]`.

    own: (n,) weight a person gives to her own view, in her own points, >= 0.
    listener, source: (m,) indices; no pair twice, no arrow from a person to herself.
    weight: (m,) in the listener's points. An arrow of weight 0 counts as not drawn.
    present: (n,) False for those who neither hear nor are heard.
    """

    own: Floats
    listener: Indices
    source: Indices
    weight: Floats
    present: Mask

    def __post_init__(self) -> None:
        for name, kind in (
            ("own", np.float64),
            ("listener", np.intp),
            ("source", np.intp),
            ("weight", np.float64),
            ("present", np.bool_),
        ):
            object.__setattr__(self, name, np.ascontiguousarray(getattr(self, name), dtype=kind))
        if self.own.shape != self.present.shape or self.own.ndim != 1:
            raise ValueError("own and present must both have shape (n,)")
        if not self.listener.shape == self.source.shape == self.weight.shape or self.weight.ndim != 1:
            raise ValueError("listener, source and weight must all have shape (m,)")

    @property
    def people(self) -> int:
        """How many people there are, absent ones included."""
        return len(self.own)

    @property
    def arrows(self) -> int:
        """How many arrows there are, whether they count at the moment or not."""
        return len(self.weight)

    def in_parts(self) -> tuple[Floats, Floats]:
        """(n,) own weights and (m,) weights by arrow, as parts of the largest in their row: so sums of a row neither
        overflow nor vanish."""
        largest = self.own.copy()
        np.maximum.at(largest, self.listener, self.weight)
        largest[largest == 0] = 1.0
        return self.own / largest, self.weight / largest[self.listener]
