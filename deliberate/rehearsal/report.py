"""A rehearsal as JSON; resources/formats.md has the keys."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from deliberate.rehearsal.results import Agreement, ClosedGroup, Cycle, Floats, Rehearsal, Tally


def to_json(rehearsal: Rehearsal) -> dict[str, Any]:
    """The rehearsal as version 1 of the rehearsal JSON: plain dicts, lists, text and finite numbers."""
    people = rehearsal.people
    rounds = len(rehearsal.rounds)
    return {
        "format": "deliberate-rehearsal",
        "version": 1,
        "variant": rehearsal.variant,
        "question": rehearsal.question,
        "people": list(people),
        "rounds": rehearsal.rounds.tolist(),
        "spread": rehearsal.spread.tolist(),
        "settles_from_any_start": rehearsal.settles_from_any_start,
        "settles": rehearsal.settles,
        "consensus_from_any_start": rehearsal.consensus_from_any_start,
        "consensus": rehearsal.consensus,
        "limit": _numbers(rehearsal.limit),
        "cycle": _cycle(rehearsal.cycle),
        "long_run_average": rehearsal.long_run_average.tolist(),
        "closed_groups": [_closed_group(group) for group in rehearsal.closed_groups],
        "outside": list(rehearsal.outside),
        "influence": dict(zip(people, rehearsal.influence.tolist(), strict=True)),
        "effective_voices": rehearsal.effective_voices,
        "pace": {"rate": rehearsal.rate, "rounds_to_agree": rehearsal.rounds_to_agree},
        "ballot": None if rehearsal.ballot is None else [tally_to_json(tally) for tally in rehearsal.ballot],
        "ballot_at_limit": None if rehearsal.ballot_at_limit is None else tally_to_json(rehearsal.ballot_at_limit),
        "agreement": [_verdicts(tests) for tests in rehearsal.agreement or ((),) * rounds],
        "agreement_at_limit": None if rehearsal.limit is None else _verdicts(rehearsal.agreement_at_limit or ()),
        "unknown_starts": list(rehearsal.unknown_starts),
        "notes": list(rehearsal.notes),
    }


def _numbers(beliefs: Floats | None) -> list[float] | None:
    return None if beliefs is None else beliefs.tolist()


def _cycle(cycle: Cycle | None) -> dict[str, Any] | None:
    return None if cycle is None else {"period": cycle.period, "beliefs": cycle.beliefs.tolist()}


def _closed_group(group: ClosedGroup) -> dict[str, Any]:
    return {
        "people": list(group.people),
        "period": group.period,
        "influence": dict(group.influence),
        "anchored": group.anchored,
    }


def tally_to_json(tally: Tally) -> dict[str, Any]:
    """One count of the vote."""
    return {
        "for": tally.in_favour,
        "against": tally.against,
        "abstain": tally.abstain,
        "objecting": tally.objecting,
        "quorum_met": tally.quorum_met,
        "passes": tally.passes,
    }


def _verdicts(tests: Sequence[Agreement]) -> list[dict[str, Any]]:
    return [{"test": one.test.test, "verdict": one.verdict, "figure": one.figure} for one in tests]
