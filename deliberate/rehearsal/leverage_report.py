"""Leverage told to people, and as JSON."""

from __future__ import annotations

from typing import Any

from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.leverage import Lever, Leverage
from deliberate.rehearsal.page import CAUTION, heading, wrap
from deliberate.rehearsal.results import Floats
from deliberate.rehearsal.words import number, with_unit
from deliberate.scenario.values import Scenario

TOLD = 12  # levers in the text; the JSON has all


def leverage_summary(scenario: Scenario, found: Leverage) -> str:
    """What the result hangs on, for people; the largest first. Made for 80 columns."""
    question = pick_question(scenario, found.question)
    end, last = (with_unit(result, question) for result in (found.result_at_end, found.result_in_long_run))
    lines = [heading(scenario, pick_variant(scenario, found.variant), question), ""]
    lines.append(wrap(f"The mean of those present is {end} at the plan's end and {last} in the long run."))
    told = found.levers[:TOLD]
    lines += ["", "What it hangs on" if told else "Nobody is present, so it hangs on nothing."]
    lines += [wrap(lever.says, f"{place:3}. ") for place, lever in enumerate(told, 1)]
    if len(found.levers) > TOLD:
        lines += ["", wrap(f"These are {TOLD} of {len(found.levers)} guesses, by what they move at the plan's end.")]
    step = number(found.step, question)
    lines += ["", wrap(f"Starts are moved by {step}, rows and firmness by 10 of 100, one at a time.")]
    return "\n".join([*lines, "", CAUTION]) + "\n"


def leverage_to_json(scenario: Scenario, found: Leverage) -> dict[str, Any]:
    """All levers at full precision: plain dicts, lists, text and finite numbers."""
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
        "arrows_at_end": _numbers(found.arrows_at_end),
        "arrows_in_long_run": _numbers(found.arrows_in_long_run),
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


def _numbers(values: Floats | None) -> list[float] | None:
    return None if values is None else values.tolist()
