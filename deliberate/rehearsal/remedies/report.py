"""Remedies told to people, and as JSON."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping, Sequence
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
    parts += [_told(aims, found) for aims in _alike(found)]
    parts += [_nothing(aim, aim in asked) for aim, told in found.items() if not told]
    if not found:
        parts.append(NOTHING_ASKED)
    return "\n\n".join([*parts, CAUTION]) + "\n"


def _alike(found: Found) -> Iterable[Sequence[Aim]]:
    """The aims that have remedies, those together for which the same changes are told."""
    groups: dict[tuple[Suggestion, ...], list[Aim]] = {}
    for aim, told in found.items():
        if told:
            groups.setdefault(tuple(remedy.suggestion for remedy in told), []).append(aim)
    return groups.values()


def _told(aims: Sequence[Aim], found: Found) -> str:
    lines = [f"Aim: {IN_WORDS[aim]}" for aim in aims]
    for place, same in enumerate(zip(*(found[aim] for aim in aims), strict=True), 1):
        lines.append(wrap(f"{same[0].says}.", f"{place:3}. "))
        does = [one.does for one in same if not _said(one.does, same[0].does)]
        lines += [wrap(line, " " * 5) for line in (same[0].does, *does, same[0].outcome, same[0].asks)]
    return "\n".join(lines)


def _said(sentence: str, before: str) -> bool:
    return sentence.rstrip(".").lower() in before.lower()


def _nothing(aim: Aim, asked: bool) -> str:
    return f"Aim: {IN_WORDS[aim]}\n     {NOTHING_FOUND if asked else NOT_ASKED}"


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
