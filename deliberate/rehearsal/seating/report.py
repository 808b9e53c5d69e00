"""A seating for the command line: told to people, and as JSON."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.page import CAUTION, heading, wrap
from deliberate.rehearsal.seating.told import (
    cautions,
    company,
    conditions_listed,
    stage_names,
    standing,
    summary,
    table_names,
)
from deliberate.rehearsal.seating.wish import Seating, Wish
from deliberate.rehearsal.words import isolated, shown_names
from deliberate.scenario.values import Scenario, Variant


def seating_summary(scenario: Scenario, seating: Seating) -> str:
    """What the seating does, and who sits where. Made for 80 columns."""
    variant, question = pick_variant(scenario, seating.variant), pick_question(scenario, seating.question)
    kept = conditions_listed(seating.wish, variant)
    paragraphs = [summary(seating, question), standing(seating), company(seating), *cautions(seating, variant)]
    if kept:
        paragraphs.append(f"Kept in every rotation: {kept}.")
    lines = [heading(scenario, variant, question), "", *map(wrap, paragraphs), *_tables(seating, variant)]
    return "\n".join([*lines, "", CAUTION]) + "\n"


def _tables(seating: Seating, variant: Variant) -> Iterator[str]:
    known = shown_names(variant)
    for name, tables in zip(stage_names(seating), seating.rotations, strict=True):
        yield from ("", name)
        for table, people in zip(table_names(seating), tables, strict=True):
            yield wrap(", ".join(isolated(known[one]) for one in people), f"  {table}: ")


def seating_to_json(seating: Seating) -> dict[str, Any]:
    """All of it at full precision: plain dicts, lists, text and finite numbers. People are given by id."""
    return {
        "format": "deliberate-tables",
        "version": 1,
        "variant": seating.variant,
        "question": seating.question,
        "wish": _wish(seating.wish),
        "rotations": [[list(table) for table in tables] for tables in seating.rotations],
        "before": seating.before,
        "after": seating.after,
        "random": {"seatings": seating.random_count, "mean": seating.random_mean, "best": seating.random_best},
        "proven": seating.every is not None,
        "seatings_in_all": seating.every,
        "starts": seating.starts,
        "starts_as_good": seating.as_good,
        "hear_nobody": [list(people) for people in seating.hear_nobody],
    }


def _wish(wish: Wish) -> dict[str, Any]:
    return {
        "tables": wish.tables,
        "size": wish.size,
        "rotations": wish.rotations,
        "rounds": wish.rounds,
        "aim": wish.goal,
        "place": wish.place,
        "unheard": wish.unheard,
        "together": [list(pair) for pair in wish.together],
        "apart": [list(pair) for pair in wish.apart],
        "roles": list(wish.roles),
        "linked": wish.linked,
    }
