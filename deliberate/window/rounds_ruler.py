"""Ticks for a ruler of rounds. Free of Qt."""

from __future__ import annotations

STEPS = (1, 2, 5, 10, 20, 50, 100, 200, 500, 1_000, 2_000, 5_000, 10_000, 20_000, 50_000, 100_000, 200_000, 500_000)


def tick_step(rounds: int, width: float, room: float) -> int:
    """The smallest of the usual steps at which labels `room` pixels wide do not touch."""
    return next((step for step in STEPS if width * step / max(rounds, 1) >= room), STEPS[-1])
