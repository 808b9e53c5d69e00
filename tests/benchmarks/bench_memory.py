"""A long evening: 10,000 edits in the open window, undone and redone, within 50 MB and without losing a thing."""

from __future__ import annotations

import gc
import os
from pathlib import Path

import numpy as np
from bench_window import crowd, open_window, paint

from deliberate.scenario import edits
from deliberate.scenario.values import Scenario

__all__ = ["open_window"]  # the fixture
EDITS = 10_000
MOST_MB = 50


def test_memory_stays_flat(benchmark, open_window) -> None:
    window = open_window(crowd(12, 40))
    session = window.session
    draw = np.random.default_rng(3)

    def change(scenario: Scenario) -> Scenario:
        person = f"p{draw.integers(12)}"
        other = f"p{draw.integers(12)}"
        match int(draw.integers(4)):
            case 0:
                return edits.set_belief(scenario, person, "q", float(draw.uniform(0, 100)), variant="v")
            case 1:
                return edits.set_firmness(scenario, [person], float(draw.uniform(0, 0.5)), variant="v")
            case 2:
                return edits.move_people(scenario, {person: tuple(draw.uniform(0, 9, 2).tolist())}, variant="v")
            case _ if person != other:
                return edits.set_points(scenario, person, other, float(draw.uniform(1, 30)), variant="v")
        return scenario

    def many(count: int) -> None:
        for number in range(count):
            session.edit("Change", change)
            if number % 10 == 0:
                paint(window)

    def undo_and_redo() -> None:
        last = session.scenario
        steps = 0
        while session.undo_step:
            session.undo()
            steps += 1
        for _ in range(steps):
            session.redo()
        assert session.scenario == last
        paint(window)

    def evening() -> None:
        many(EDITS)
        undo_and_redo()

    many(1_500)  # fills the history, whose length is bounded, and all caches
    undo_and_redo()
    before = resident_mb()
    benchmark.pedantic(evening, rounds=1)
    grown = resident_mb() - before
    benchmark.extra_info["grown by, MB"] = round(grown, 1)
    assert grown < MOST_MB


def resident_mb() -> float:
    """Memory of this process, in MB."""
    gc.collect()
    pages = int(Path("/proc/self/statm").read_text(encoding="ascii").split()[1])
    return pages * os.sysconf("SC_PAGE_SIZE") / 1e6
