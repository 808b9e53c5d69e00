"""What the findings of a meeting are, for the tests of their families."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from deliberate.rehearsal.findings import findings
from deliberate.rehearsal.findings.sketch import Sketch, sketch_of
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import Finding
from deliberate.rehearsal.suggestions import apply
from deliberate.scenario.values import Plan, Scenario, Stage


def all_told(scenario: Scenario, **asked: object) -> tuple[Finding, ...]:
    return findings(scenario, rehearse(scenario, **asked))


def kinds(scenario: Scenario, **asked: object) -> list[str]:
    return [finding.kind for finding in all_told(scenario, **asked)]


def told(scenario: Scenario, kind: str, **asked: object) -> Finding:
    """The one finding of this kind."""
    (finding,) = [finding for finding in all_told(scenario, **asked) if finding.kind == kind]
    return finding


def sketch(scenario: Scenario, **asked: object) -> Sketch:
    return sketch_of(scenario, rehearse(scenario, **asked))


def after(scenario: Scenario, finding: Finding) -> Sketch:
    """The sketch of the meeting with what the finding suggests."""
    assert finding.suggestion is not None
    changed = apply(scenario, scenario.variants[0].name, finding.suggestion)
    return sketch(changed, variant=changed.variants[1].name)


def talk(rounds: int, afterwards: str = "last") -> Plan:
    """One plenary stage."""
    return Plan((Stage("Plenary", rounds),), afterwards)


def share_rows(points: Sequence[Sequence[float]]) -> np.ndarray:
    rows = np.array(points, dtype=float)
    return rows / rows.sum(axis=1, keepdims=True)
