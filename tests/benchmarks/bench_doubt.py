"""What doubt costs: 2,000 draws of a committee and of a large group, beside a loop over plain rehearsals, and how
soon it stops. Processor time, since the bounds are for a machine that has nothing else to do.

The bounds are the project's own; a benchmark fails when its median is beyond them.
"""

from __future__ import annotations

import time
from itertools import pairwise

import numpy as np
import pytest
from bench_rehearsal import committee
from msgspec.structs import replace

from deliberate.dynamics.draws import RowSource, draw_starts
from deliberate.dynamics.progress import never
from deliberate.rehearsal.assemble import assemble
from deliberate.rehearsal.doubt import doubt
from deliberate.rehearsal.doubt_draws import GuessedMeeting
from deliberate.rehearsal.doubt_results import Concentration
from deliberate.rehearsal.findings.sketch import sketch_of
from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario.values import FrozenDict, Plan, Scenario, Stage

DRAWS = 2_048
LOOPED = 64  # draws of the loop; the whole loop takes so many times as long
STOPS_WITHIN = 0.2

pytestmark = pytest.mark.benchmark(timer=time.process_time)


def guessed(people: int, arrows: int, firmness: float = 0.0) -> Scenario:
    """The random meeting with margins of ten around all starts and twelve rounds in three stages."""
    scenario = committee(people, arrows)
    (variant,) = scenario.variants
    plan = Plan((Stage("Go-round", 4), Stage("Silence", 4, "silence"), Stage("Plenary", 4)))
    everybody = tuple(
        replace(person, margins=FrozenDict(q=10.0), firmness=firmness if at % 2 else 0.0)
        for at, person in enumerate(variant.people)
    )
    return replace(scenario, variants=(replace(variant, people=everybody, plan=plan),))


@pytest.mark.parametrize(
    ("people", "arrows", "firmness", "bound"),
    [(40, 300, 0.0, 2), (40, 1560, 0.0, 2), (40, 300, 0.3, 2), (150, 1500, 0.0, 30), (150, 22_000, 0.0, 30)],
)
def test_2000_draws(benchmark, people, arrows, firmness, bound):
    scenario = guessed(people, arrows, firmness)
    doubt(scenario, draws=64)
    benchmark.pedantic(doubt, (scenario,), {"draws": DRAWS}, rounds=3)
    assert benchmark.stats.stats.median < bound


def test_draws_beside_a_loop_over_rehearsals(benchmark):
    """40 people, 12 rounds: draws with their rounds, long run and ballots, beside one `rehearse` for each."""
    scenario = guessed(40, 300)
    draw_all(scenario)
    one_by_one(scenario, 4)
    pairs = [(seconds(draw_all, scenario), seconds(one_by_one, scenario, LOOPED)) for _ in range(7)]
    batched, looped = np.median(pairs, axis=0)
    times = looped * DRAWS / LOOPED / batched
    benchmark.extra_info["times as fast"] = round(float(times), 1)
    benchmark.pedantic(draw_all, (scenario,), rounds=3)
    assert times > 20


def draw_all(scenario: Scenario) -> None:
    """All draws without the counting."""
    meeting = GuessedMeeting(sketch_of(scenario, rehearse(scenario)), Concentration())
    assert sum(chunk.draws for chunk in meeting.chunks(DRAWS, 1, never)) == DRAWS


def one_by_one(scenario: Scenario, draws: int) -> None:
    """A rehearsal for each draw of the points and the starts."""
    (variant,), (question,) = scenario.variants, scenario.questions
    process = assemble(variant, question).process
    source = np.random.default_rng(1)
    rows = RowSource(process.network, np.full(process.network.arrows, 10.0)).draw(draws, source)
    given = np.array([person.beliefs["q"] for person in variant.people])
    starts = draw_starts(np.maximum(given - 10, 0), np.minimum(given + 10, 100), draws, source)
    for at in range(draws):
        people = tuple(
            replace(person, own_weight=own, beliefs=FrozenDict(q=start))
            for person, own, start in zip(
                variant.people, rows.own[:, at].tolist(), starts[:, at].tolist(), strict=True
            )
        )
        arrows = tuple(
            replace(arrow, weight=weight)
            for arrow, weight in zip(variant.arrows, rows.weight[:, at].tolist(), strict=True)
        )
        rehearse(replace(scenario, variants=(replace(variant, people=people, arrows=arrows),)))


@pytest.mark.parametrize(("people", "arrows"), [(40, 300), (150, 1_500), (150, 22_000)])
@pytest.mark.parametrize("hearing_range", [None, 20.0])
def test_stopping(benchmark, people, arrows, hearing_range):
    """The longest that somebody who wants to stop can wait: between two looks whether she does, from the last one to
    the answer, or from the call to the first."""
    scenario = guessed(people, arrows)
    (question,) = scenario.questions
    scenario = replace(scenario, questions=(replace(question, hearing_range=hearing_range),))
    doubt(scenario, draws=8)
    waits = [min(longest_wait(scenario, looks) for _ in range(3)) for looks in (20, 200, 400)]
    benchmark.extra_info["longest wait"] = round(max(waits), 3)
    benchmark.pedantic(doubt, (scenario,), {"draws": 8}, rounds=1)
    assert max(waits) < STOPS_WITHIN


def longest_wait(scenario: Scenario, looks: int) -> float:
    """When the stop comes at the look of that number. By the clock: idle threads of the linear algebra count as
    processor time."""
    times = [time.perf_counter()]

    def stopped() -> bool:
        times.append(time.perf_counter())
        return len(times) > looks

    doubt(scenario, draws=DRAWS, stopped=stopped)
    times.append(time.perf_counter())
    return max(later - earlier for earlier, later in pairwise(times))


def seconds(work, *given) -> float:
    start = time.process_time()
    work(*given)
    return time.process_time() - start


def test_a_hearing_range(benchmark):
    """No bound of the issue's; stepping to rest is the slowest that 40 people can have."""
    scenario = guessed(40, 300)
    (question,) = scenario.questions
    scenario = replace(scenario, questions=(replace(question, hearing_range=20.0),))
    benchmark.pedantic(doubt, (scenario,), {"draws": DRAWS, "stopped": never}, rounds=3)
    assert benchmark.stats.stats.median < 10
