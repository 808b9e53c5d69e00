"""What leverage costs: it may run at every edit of a committee. The bounds are the project's own."""

from __future__ import annotations

import pytest
from bench_rehearsal import MILLISECOND, committee

from deliberate.rehearsal.leverage import leverage


@pytest.mark.parametrize(("people", "arrows", "bound"), [(40, 300, 20), (40, 1560, 20), (150, 1500, 500)])
def test_leverage_of_all_rows(benchmark, people, arrows, bound):
    scenario = committee(people, arrows)
    benchmark.pedantic(leverage, (scenario,), warmup_rounds=3, rounds=20)
    assert benchmark.stats.stats.median < bound * MILLISECOND
