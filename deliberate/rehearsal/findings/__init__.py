"""What stands out in a rehearsal: plain statements, the most important first."""

from __future__ import annotations

from dataclasses import replace

from deliberate.rehearsal.findings.agreements import agreement
from deliberate.rehearsal.findings.bridges import bridge
from deliberate.rehearsal.findings.edges import knife_edge
from deliberate.rehearsal.findings.groups import closed_groups, hears_nobody, outside, unheard
from deliberate.rehearsal.findings.settling import lasting_gap, settles, slow, unfinished
from deliberate.rehearsal.findings.sketch import Sketch, sketch_of
from deliberate.rehearsal.findings.starts import absent, unknown_starts
from deliberate.rehearsal.findings.swings import swing
from deliberate.rehearsal.findings.voices import carries, fixed_view
from deliberate.rehearsal.findings.votes import bare_quorum, no_quorum, vote
from deliberate.rehearsal.results import Finding, Rehearsal, Suggestion
from deliberate.scenario.values import Scenario

# What stops the meeting first, then what it hangs on, then pace, then the vote, then what to see to.
FAMILIES = (
    no_quorum,
    closed_groups,
    swing,
    fixed_view,
    lasting_gap,
    outside,
    unheard,
    hears_nobody,
    carries,
    bridge,
    unfinished,
    slow,
    settles,
    vote,
    knife_edge,
    bare_quorum,
    agreement,
    unknown_starts,
    absent,
)
NOBODY_THERE = (no_quorum, absent)


def findings(scenario: Scenario, rehearsal: Rehearsal) -> tuple[Finding, ...]:
    """What stands out in a rehearsal of `scenario`, ranked; short where the meeting is healthy."""
    sketch = sketch_of(scenario, rehearsal)
    families = FAMILIES if sketch.present.any() else NOBODY_THERE
    found = [finding for family in families for finding in family(sketch)]
    return _offering_once(_close_vote_early(_nothing_known_first(_said_once(found), sketch)))


def _said_once(found: list[Finding]) -> list[Finding]:
    """Without what another finding says as well: a bridge is the reason for a slow pace."""
    bridged = any(finding.kind == "bridge" for finding in found)
    return [finding for finding in found if not (bridged and finding.kind == "slow")]


def _nothing_known_first(found: list[Finding], sketch: Sketch) -> list[Finding]:
    """Where nobody's start is known, that comes before all that is made of it."""
    everybody = int(sketch.present.sum())
    return sorted(found, key=lambda one: one.kind != "unknown-starts" or len(one.people) < everybody)


def _close_vote_early(found: list[Finding]) -> list[Finding]:
    """A vote that one start can turn comes right behind the top."""
    early = [finding for finding in found if finding.kind in ("vote", "knife-edge")]
    if len(early) < 2:
        return found
    rest = [finding for finding in found if finding.kind not in ("vote", "knife-edge")]
    return [*rest[:1], *early, *rest[1:]]


def _offering_once(found: list[Finding]) -> tuple[Finding, ...]:
    """A change is offered once, with the first finding that asks for it."""
    offered: set[Suggestion] = set()
    kept = []
    for finding in found:
        kept.append(replace(finding, suggestion=None) if finding.suggestion in offered else finding)
        if finding.suggestion is not None:
            offered.add(finding.suggestion)
    return tuple(kept)
