"""What a rehearsal costs: at every edit in the window, from the command line, and for a crowd.

The bounds are the project's own; a benchmark fails when its median is beyond them.
"""

from __future__ import annotations

import json
import os
import resource
import statistics
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pytest

from deliberate.files import write
from deliberate.rehearsal.assemble import assemble
from deliberate.rehearsal.ballots import Electorate
from deliberate.rehearsal.findings import findings
from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario.values import Arrow, Person, Question, Scenario, Variant

CHECKOUT = Path(__file__).resolve().parent.parent.parent
DEMO = CHECKOUT / "scenarios" / "reservoir-board.deliberate.json"
COMMAND = "import sys; from deliberate.cli import main; sys.exit(main())"
MILLISECOND = 1e-3


def committee(people: int, arrows: int, seed: int = 1) -> Scenario:
    """A meeting drawn at random: everybody hears about as many others, points from 1 to 20."""
    draw = np.random.default_rng(seed)
    pairs: dict[tuple[int, int], None] = {}
    while len(pairs) < arrows:
        drawn = draw.integers(0, people, (arrows, 2))
        pairs.update(dict.fromkeys((a, b) for a, b in drawn.tolist() if a != b))
    weights = draw.integers(1, 20, arrows).tolist()
    beliefs = draw.uniform(0, 100, people).tolist()
    everybody = tuple(Person(f"p{i}", own_weight=30.0, beliefs={"q": belief}) for i, belief in enumerate(beliefs))
    heard = tuple(
        Arrow(f"p{a}", f"p{b}", float(weight)) for (a, b), weight in zip(list(pairs)[:arrows], weights, strict=True)
    )
    question = Question("q", "What is asked?", 0, 100, pass_mark=50)
    return Scenario("Bench", (question,), (Variant("As it stands", everybody, arrows=heard),))


def analysis(scenario: Scenario) -> None:
    """All that an edit sets off."""
    findings(scenario, rehearse(scenario))


@pytest.mark.parametrize(("people", "arrows", "bound"), [(40, 300, 10), (40, 1560, 10), (150, 1500, 60)])
def test_whole_analysis_with_findings(benchmark, people, arrows, bound):
    scenario = committee(people, arrows)
    benchmark.pedantic(analysis, (scenario,), warmup_rounds=3, rounds=30)
    assert benchmark.stats.stats.median < bound * MILLISECOND


def test_assembling_40_people(benchmark):
    scenario = committee(40, 300)
    benchmark(assemble, scenario.variants[0], scenario.questions[0])
    assert benchmark.stats.stats.median < 1 * MILLISECOND


def test_counting_2000_ballots_of_40_people(benchmark):
    scenario = committee(40, 300)
    electorate = Electorate(scenario.questions[0], scenario.ballot, scenario.variants[0].people)
    beliefs = np.random.default_rng(2).uniform(0, 100, (2_000, 40))
    benchmark(electorate.tally, beliefs)
    assert benchmark.stats.stats.median < 10 * MILLISECOND


def test_a_crowd_from_the_command_line(benchmark, tmp_path):
    """100,000 people and 1,000,000 arrows: `rehearse --json` in under 30 s and 4 GiB, reading the file included."""
    path = tmp_path / "crowd.deliberate.json"
    write(committee(100_000, 1_000_000), path)
    out = tmp_path / "out.json"

    def from_the_command_line() -> None:
        with out.open("wb") as file:
            command = [sys.executable, "-c", COMMAND, "rehearse", str(path), "--json"]
            subprocess.run(command, stdout=file, env=_environment(), check=True)

    benchmark.pedantic(from_the_command_line, rounds=1)
    peak = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 2**20
    benchmark.extra_info["GiB"] = round(peak, 2)
    assert len(json.loads(out.read_bytes())["people"]) == 100_000
    assert benchmark.stats.stats.median < 30
    assert peak < 4


def test_start_of_the_command_line(benchmark):
    """`deliberate rehearse` on a demo beside `import numpy, scipy.sparse.csgraph`: at most 1.5 times as long."""
    ours = [sys.executable, "-c", COMMAND, "rehearse", str(DEMO)]
    bare = [sys.executable, "-c", "import numpy, scipy.sparse.csgraph"]
    pairs = [(_seconds(bare), _seconds(ours)) for _ in range(11)]  # side by side, so that both meet the same noise
    ratio = statistics.median(mine for _, mine in pairs) / statistics.median(plain for plain, _ in pairs)
    benchmark.extra_info["times as long"] = round(ratio, 2)
    benchmark.pedantic(_seconds, (ours,), rounds=3)
    assert ratio < 1.5


def _seconds(command: list[str]) -> float:
    start = time.perf_counter()
    subprocess.run(command, stdout=subprocess.DEVNULL, env=_environment(), check=True)
    return time.perf_counter() - start


def _environment() -> dict[str, str]:
    return {**os.environ, "PYTHONPATH": str(CHECKOUT)}
