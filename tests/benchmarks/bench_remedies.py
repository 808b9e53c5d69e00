"""What the search for remedies costs, and how soon it stops. The bounds are the project's own."""

from __future__ import annotations

import time
from itertools import pairwise

import pytest
from bench_rehearsal import committee

from deliberate.rehearsal.remedies import AIMS, remedies


@pytest.mark.parametrize("aim", AIMS)
@pytest.mark.parametrize(("people", "arrows", "bound"), [(40, 300, 1.0), (150, 1500, 10.0), (150, 22_350, 10.0)])
def test_remedies_for_one_aim(benchmark, people, arrows, bound, aim):
    scenario = committee(people, arrows)
    benchmark.pedantic(remedies, (scenario, None, None, aim), warmup_rounds=1, rounds=3)
    assert benchmark.stats.stats.median < bound


@pytest.mark.parametrize(("people", "arrows"), [(150, 1500), (150, 22_350)])
def test_stopping_takes_no_longer_than_one_candidate(benchmark, people, arrows):
    """The longest work between two looks at whether to stop, the quietest of some searches; the searching thread's
    own time, so that other work on the machine does not count."""
    scenario = committee(people, arrows)
    longest: list[float] = []

    def search() -> None:
        looks = [time.thread_time()]
        remedies(scenario, None, None, "sooner", stopped=lambda: bool(looks.append(time.thread_time())))
        looks.append(time.thread_time())
        longest.append(max(later - sooner for sooner, later in pairwise(looks)))

    benchmark.pedantic(search, rounds=5)
    assert min(longest) < 0.2
