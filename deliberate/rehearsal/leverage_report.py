"""Leverage told to people, and as JSON."""

from __future__ import annotations

import math
from collections.abc import Iterator
from itertools import groupby
from typing import Any

from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.leverage import Lever, Leverage, moves_in_words
from deliberate.rehearsal.page import CAUTION, heading, wrap
from deliberate.rehearsal.results import Floats
from deliberate.rehearsal.words import amount, names, number, with_unit
from deliberate.scenario.values import Question, Scenario

TOLD = 12  # levers in the text; the JSON has all


def leverage_summary(scenario: Scenario, found: Leverage) -> str:
    """What the result hangs on, for people; the largest first. Made for 80 columns."""
    question = pick_question(scenario, found.question)
    told = list(_together(scenario, found, question))
    above = heading(scenario, pick_variant(scenario, found.variant), question)
    if not told:  # even one person alone has a start
        return "\n\n".join([above, "Nobody is present, so there is no result.", CAUTION]) + "\n"
    end, last = (with_unit(result, question) for result in (found.result_at_end, found.result_in_long_run))
    lines = [
        above,
        "",
        wrap(f"The mean of those present is {end} at the plan's end and {last} in the long run."),
        "",
        "What it hangs on",
        *(wrap(says, f"{place:3}. ") for place, says in enumerate(told[:TOLD], 1)),
        "",
        wrap(
            f"Starts are moved by {number(found.step, question)}, rows and firmness by 10 of 100, one at a time;"
            f" {amount(len(found.levers))} guesses were tried, sorted by what they move at the plan's end."
        ),
        "",
        CAUTION,
    ]
    return "\n".join(lines) + "\n"


def _together(scenario: Scenario, found: Leverage, question: Question) -> Iterator[str]:
    """The levers in sentences; starts next to each other that move the mean alike share one."""
    variant = pick_variant(scenario, found.variant)
    for (kind, moves), grouped in groupby(found.levers, lambda lever: _alike(lever, question)):
        levers = tuple(grouped)
        if kind == "start" and len(levers) > 1:
            people = names([lever.people[0] for lever in levers], variant)
            yield f"If one of {people} started {number(found.step, question)} higher, {moves}."
        else:
            yield from (lever.says for lever in levers)


def _alike(lever: Lever, question: Question) -> tuple[str, str]:
    return lever.kind, moves_in_words((lever.at_end, lever.in_long_run), question)


def leverage_to_json(scenario: Scenario, found: Leverage) -> dict[str, Any]:
    """All levers at full precision: plain dicts, lists, text and finite numbers (an arrow without a rate is null)."""
    arrows = pick_variant(scenario, found.variant).arrows
    return {
        "format": "deliberate-leverage",
        "version": 1,
        "variant": found.variant,
        "question": found.question,
        "step": found.step,
        "result_at_end": found.result_at_end,
        "result_in_long_run": found.result_in_long_run,
        "levers": [_lever(lever) for lever in found.levers],
        "arrows": [[arrow.listener, arrow.source] for arrow in arrows],
        "arrows_at_end": _rates(found.arrows_at_end),
        "arrows_in_long_run": _rates(found.arrows_in_long_run),
    }


def _lever(lever: Lever) -> dict[str, Any]:
    return {
        "kind": lever.kind,
        "says": lever.says,
        "amount": lever.amount,
        "at_end": lever.at_end,
        "in_long_run": lever.in_long_run,
        "people": list(lever.people),
        "arrows": [list(pair) for pair in lever.arrows],
    }


def _rates(values: Floats | None) -> list[float | None] | None:
    return None if values is None else [rate if math.isfinite(rate) else None for rate in values.tolist()]
