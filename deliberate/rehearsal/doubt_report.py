"""Doubt told to people, and as JSON."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import asdict
from typing import Any

import numpy as np

from deliberate.rehearsal.choosing import pick_question, pick_variant
from deliberate.rehearsal.doubt_results import LEVELS, Concentration, Doubt, FindingOdds, Odds, VoteDoubt
from deliberate.rehearsal.doubt_words import holds, in_draws
from deliberate.rehearsal.page import CAUTION, aligned, heading, labelled, shown_rounds, wrap, wrapped
from deliberate.rehearsal.results import Floats
from deliberate.rehearsal.words import amount, isolated, listing, numbers, shown_names, with_unit
from deliberate.scenario.values import Question, Scenario, Variant

SHOWN_PEOPLE = 8
EXAMPLE = 0.30  # the share by which the page shows how closely rows are drawn
LOW, MIDDLE, HIGH = 0, 2, 4  # in LEVELS


def doubt_summary(scenario: Scenario, found: Doubt) -> str:
    """The doubt for people: ranges and odds, what holds, what to ask about again. Made for 80 columns."""
    variant, question = pick_variant(scenario, found.variant), pick_question(scenario, found.question)
    present = sum(person.present for person in variant.people)
    parts = [
        heading(scenario, variant, question),
        _table(found, variant, question) if present else "",
        _facts(found, question, present),
        _people(found, variant, question),
        _standing_out(found),
        _asking(found) if present else "",
        wrapped(f"Note: {note}." for note in found.notes),
        CAUTION,
    ]
    return "\n\n".join(part for part in parts if part) + "\n"


def _table(found: Doubt, variant: Variant, question: Question) -> str:
    """Where 8 of 10 draws lie, at the start, after each stage and in the long run, with the odds of the vote."""
    last = found.spread.shape[1] - 1
    shown = shown_rounds(variant, last)
    columns = [
        ["", *("Start" if at == 0 else f"Round {amount(at)}" for at in shown), "Long run"],
        ["mean", *_ranges([*(found.mean[:, at] for at in shown), found.mean_in_long_run], question)],
        ["spread", *_ranges([*(found.spread[:, at] for at in shown), found.spread_in_long_run], question)],
    ]
    vote = found.vote
    if vote is not None:
        columns.append(["for", *(_counts(vote.in_favour[:, at]) for at in shown), ""])
        columns.append(["against", *(_counts(vote.against[:, at]) for at in shown), ""])
        in_long_run = "-" if vote.passes_in_long_run is None else _of_100(vote.passes_in_long_run)
        columns.append(["passes", *(_of_100(vote.passes[at]) for at in shown), in_long_run])
    text = f"8 of 10 draws lie within; {amount(found.draws)} draws, seed {found.seed}"
    if vote is not None and vote.quorum_met:
        error = max(odds.error for odds in vote.passes)
        text += f". Sampling error of the odds: up to {100 * error:.1f} of 100"
    return f"{aligned(columns)}\n{wrap(text + '.')}"


def _ranges(bands: Sequence[Floats], question: Question) -> list[str]:
    """ "48.1 to 52.0" for each."""
    ends = numbers([float(band[level]) for band in bands for level in (LOW, HIGH)], question)
    return [low if low == high else f"{low} to {high}" for low, high in zip(ends[::2], ends[1::2], strict=True)]


def _counts(band: Floats) -> str:
    low, high = amount(round(float(band[LOW]), 1)), amount(round(float(band[HIGH]), 1))
    return low if low == high else f"{low} to {high}"


def _of_100(odds: Odds) -> str:
    """ "62 of 100"; never rounded to none or to all."""
    hundredths = round(100 * odds.share)
    if hundredths == 0 and odds.share > 0:
        return "under 1 of 100"
    return "over 99 of 100" if hundredths == 100 and odds.share < 1 else f"{hundredths} of 100"


def _facts(found: Doubt, question: Question, present: int) -> str:
    within, draws = with_unit(found.tolerance, question), found.draws
    facts = [("View" if found.vote is None else "Vote", found.says)]
    if present > 1:  # one person alone has nobody to agree with
        facts.append(("Agree", f"within {within} of each other at the plan's end in {in_draws(found.agrees, draws)}"))
    if present:
        facts.append(("Settles", f"in {in_draws(found.settles, draws)}"))
    return labelled([*facts, ("Drawn", _drawn(found.concentration))])


def _drawn(concentration: Concentration) -> str:
    """How the guesses are drawn, by the example of one share."""
    settings = asdict(concentration)
    errors = [100 * math.sqrt(EXAMPLE * (1 - EXAMPLE) / (k + 1)) for k in settings.values()]
    varied = [
        f"{error:.0f} where {words}" for error, words in zip(errors, ("guessed", "stated", "observed"), strict=True)
    ]
    return (
        "starts within their margins, unknown ones on the whole scale; a share of"
        f" {100 * EXAMPLE:.0f} of 100 points give or take {listing(varied)}"
        f" (concentrations {', '.join(f'{k:g}' for k in settings.values())})"
    )


def _people(found: Doubt, variant: Variant, question: Question) -> str:
    """The people whose views at the plan's end are least sure."""
    ends = found.beliefs[:, -1]
    width = ends[HIGH] - ends[LOW]
    doubtful = [at for at in np.argsort(-width, kind="stable").tolist() if width[at] > 0]
    doubtful = [at for at in doubtful if variant.people[at].present]
    if not doubtful:
        return ""
    widest, names = doubtful[:SHOWN_PEOPLE], shown_names(variant)
    ranges = _ranges([ends[:, at] for at in widest], question)
    middles = numbers([float(ends[MIDDLE, at]) for at in widest], question)
    which = "the widest first" if widest == doubtful else f"the widest {len(widest)} of {len(doubtful)}"
    lines = [f"Views at the plan's end in 8 of 10 draws, {which}"]
    for at, between, middle in zip(widest, ranges, middles, strict=True):
        lines.append(wrap(f"{isolated(names[found.people[at]])}: {between}, half the draws below {middle}", "  "))
    return "\n".join(lines)


def _standing_out(found: Doubt) -> str:
    lines = ["What stands out, and in how many draws it does"] if found.findings else []
    for place, odds in enumerate(found.findings, 1):
        lines.append(wrap(odds.finding.says, f"{place:3}. "))
        lines.append(wrap(holds(odds, found.draws), " " * 5))
    return "\n".join(lines)


def _asking(found: Doubt) -> str:
    about = "the vote" if found.hangs_about == "vote" else "the mean view at the plan's end"
    if not found.hangs_on:
        return wrap(f"No single guess explains a telling part of the doubt about {about}.")
    error = max(guess.error for guess in found.hangs_on)
    lines = [f"Worth asking about again (sampling error of the shares: up to {100 * error:.1f} of 100)"]
    lines += [wrap(guess.says, f"{place:3}. ") for place, guess in enumerate(found.hangs_on, 1)]
    return "\n".join(lines)


def doubt_to_json(found: Doubt) -> dict[str, Any]:
    """Everything at full precision: plain dicts, lists, text and finite numbers (a concentration without end is
    null)."""
    return {
        "format": "deliberate-doubt",
        "version": 1,
        "variant": found.variant,
        "question": found.question,
        "people": list(found.people),
        "draws": found.draws,
        "seed": found.seed,
        "concentration": {basis: k if math.isfinite(k) else None for basis, k in asdict(found.concentration).items()},
        "levels": list(LEVELS),
        "beliefs": found.beliefs.tolist(),
        "long_run": found.long_run.tolist(),
        "mean": found.mean.tolist(),
        "mean_in_long_run": found.mean_in_long_run.tolist(),
        "spread": found.spread.tolist(),
        "spread_in_long_run": found.spread_in_long_run.tolist(),
        "settles": _odds(found.settles),
        "agrees": _odds(found.agrees),
        "tolerance": found.tolerance,
        "ballot": None if found.vote is None else list(_ballots(found)),
        "ballot_in_long_run": _ballot_in_long_run(found.vote),
        "findings": [_finding(odds) for odds in found.findings],
        "hangs_about": found.hangs_about,
        "hangs_on": [asdict(guess) for guess in found.hangs_on],
        "says": found.says,
        "notes": list(found.notes),
    }


def _ballots(found: Doubt) -> Iterator[dict[str, Any]]:
    for at, passes in enumerate(found.vote.passes):
        yield {
            "passes": _odds(passes),
            "for": found.vote.in_favour[:, at].tolist(),
            "against": found.vote.against[:, at].tolist(),
            "quorum_met": found.vote.quorum_met,
        }


def _ballot_in_long_run(vote: VoteDoubt | None) -> dict[str, Any] | None:
    """None without a vote, and where views swing."""
    if vote is None or vote.passes_in_long_run is None:
        return None
    return {"passes": _odds(vote.passes_in_long_run), "quorum_met": vote.quorum_met}


def _odds(odds: Odds | None) -> dict[str, float] | None:
    return None if odds is None else {"share": odds.share, "error": odds.error}


def _finding(odds: FindingOdds) -> dict[str, Any]:
    return {
        "kind": odds.finding.kind,
        "says": odds.finding.says,
        "holds": _odds(odds.odds),
        "by_structure": odds.by_structure,
    }
