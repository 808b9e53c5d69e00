"""Remedies told to people, and as JSON."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from typing import Any

import msgspec

from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.page import CAUTION, heading, wrap
from deliberate.rehearsal.remedies.aims import IN_WORDS, Aim
from deliberate.rehearsal.remedies.figures import Figures
from deliberate.rehearsal.remedies.search import Remedy, aims_here
from deliberate.rehearsal.report import tally_to_json
from deliberate.rehearsal.results import Suggestion
from deliberate.scenario.values import Scenario

NOTHING_ASKED = "By these figures no aim asks for a change of process."
NOTHING_FOUND = "Nothing that was tried serves it."
NOT_ASKED = "The figures do not ask for it, and nothing that was tried serves it further."

Found = Mapping[Aim, Sequence[Remedy]]


def remedies_summary(scenario: Scenario, variant: str | None, question: str | None, found: Found) -> str:
    """The remedies of one aim or several, for people; the best first. Made for 80 columns."""
    parts = [heading(scenario, pick_variant(scenario, variant), pick_question(scenario, question))]
    asked = aims_here(scenario, variant, question) if not all(found.values()) else tuple(found)
    parts += [_told(aim, told, NOTHING_FOUND if aim in asked else NOT_ASKED) for aim, told in found.items()]
    if not found:
        parts.append(NOTHING_ASKED)
    return "\n\n".join([*parts, CAUTION]) + "\n"


def _told(aim: Aim, remedies: Sequence[Remedy], otherwise: str) -> str:
    lines = [f"Aim: {IN_WORDS[aim]}"]
    for place, remedy in enumerate(remedies, 1):
        lines.append(wrap(f"{remedy.says}.", f"{place:3}. "))
        lines += [wrap(line, " " * 5) for line in (remedy.does, remedy.outcome, remedy.asks)]
    return "\n".join(lines if remedies else [*lines, f"     {otherwise}"])


def remedies_to_json(scenario: Scenario, variant: str | None, question: str | None, found: Found) -> dict[str, Any]:
    """The same at full precision: plain dicts, lists, tuples, text and finite numbers."""
    return {
        "format": "deliberate-remedies",
        "version": 1,
        "variant": pick_variant(scenario, variant).name,
        "question": pick_question(scenario, question).id,
        "aims": [
            {"aim": aim, "in_words": IN_WORDS[aim], "remedies": [_remedy(remedy) for remedy in remedies]}
            for aim, remedies in found.items()
        ],
    }


def _remedy(remedy: Remedy) -> dict[str, Any]:
    return {
        "change": _change(remedy.suggestion),
        "says": remedy.says,
        "does": remedy.does,
        "asks": remedy.asks,
        "outcome": remedy.outcome,
        "before": _figures(remedy.before),
        "after": _figures(remedy.after),
        "effort": msgspec.to_builtins(remedy.effort),
        "way": remedy.way,
        "worth": remedy.worth,
        "people": list(remedy.people),
        "arrows": [list(pair) for pair in remedy.arrows],
    }


def _change(suggestion: Suggestion) -> dict[str, Any]:
    """Which change it is, "mixed-tables" for example, and what belongs to it."""
    kind = re.sub(r"(?<!^)(?=[A-Z])", "-", type(suggestion).__name__).lower()
    return {"kind": kind, **msgspec.to_builtins(suggestion)}


def _figures(figures: Figures) -> dict[str, Any]:
    votes = (figures.vote_at_end, figures.vote_in_long_run)
    at_end, in_long_run = (None if vote is None else tally_to_json(vote) for vote in votes)
    return {
        "common_view": figures.common_view,
        "closed_groups": figures.groups,
        "swings": figures.swings,
        "still_moving": figures.still_moving,
        "rounds_to_agree": figures.rounds_to_agree,
        "spread_at_end": figures.spread_at_end,
        "effective_voices": figures.voices,
        "influence": dict(figures.influence),
        "mean_at_end": figures.mean_at_end,
        "mean_in_long_run": figures.mean_in_long_run,
        "vote_at_end": at_end,
        "vote_in_long_run": in_long_run,
    }
