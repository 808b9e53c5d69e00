"""The first round from which the spread stays within a tolerance, counted and never guessed from the rate."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from deliberate.dynamics.longrun import LongRun
from deliberate.dynamics.process import Process
from deliberate.dynamics.rounds import mover, scheduled

STEPS = 100_000


def rounds_to_agree(
    process: Process,
    starts: ArrayLike,
    tolerance: float,
    long_run: LongRun,
    hearing_range: float | None = None,
    scale_width: float = 1.0,
) -> int | None:
    start = np.asarray(starts, dtype=np.float64)
    move = mover(process.firmness, start)
    if long_run.limit is not None and np.ptp(long_run.limit) > tolerance:
        return None
    last = -1
    beliefs = start
    for at, matrix in enumerate(scheduled(process, 1000)):
        if np.ptp(beliefs) > tolerance:
            last = at
        beliefs = move(matrix, beliefs)
    return last + 1 if last < 999 else None
