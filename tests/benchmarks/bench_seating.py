"""What finding a seating costs, and how soon it stops. Bounds are the project's own."""

from __future__ import annotations

import threading
import time

import pytest
from bench_rehearsal import committee

from deliberate.rehearsal.seating.seat import seat
from deliberate.rehearsal.seating.wish import Wish

FIVE_TABLES = Wish(tables=5, rotations=2, rounds=2)


@pytest.mark.parametrize("arrows", [300, 1560])
@pytest.mark.parametrize("goal", ["less-spread", "more-voices"])
def test_forty_people_at_five_tables_twice(benchmark, arrows, goal):
    scenario, wish = committee(40, arrows), Wish(tables=5, rotations=2, rounds=2, goal=goal)
    found = benchmark.pedantic(seat, (scenario, None, None, wish), rounds=3, warmup_rounds=1)
    benchmark.extra_info.update(best=found.after, random_mean=found.random_mean, random_best=found.random_best)
    assert benchmark.stats.stats.median < 5


def test_one_hundred_and_fifty_people_at_fifteen_tables_twice(benchmark):
    benchmark.pedantic(
        seat, (committee(150, 1500), None, None, Wish(tables=15, rotations=2, rounds=2)), rounds=2, warmup_rounds=1
    )


@pytest.mark.parametrize(("people", "arrows", "tables"), [(40, 1560, 5), (150, 1500, 15), (500, 5000, 60)])
def test_stopping(benchmark, people, arrows, tables):
    """From asking to the answer: under 200 ms, once the random seatings have been drawn."""
    scenario, wish = committee(people, arrows), Wish(tables=tables, rotations=2, rounds=2)

    def stop() -> float:
        begun, told = threading.Event(), threading.Event()
        worker = threading.Thread(
            target=seat,
            args=(scenario, None, None, wish),
            kwargs={"progress": lambda share: begun.set(), "stopped": told.is_set},
        )
        worker.start()
        begun.wait()
        asked = time.perf_counter()
        told.set()
        worker.join()
        return time.perf_counter() - asked

    waits = [stop() for _ in range(3)]
    benchmark.extra_info["longest wait"] = round(max(waits), 3)
    benchmark.pedantic(stop, rounds=1)
    assert max(waits) < 0.2
