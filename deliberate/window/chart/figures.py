"""Beliefs by round as text for a sheet. Free of Qt."""

from __future__ import annotations

import csv
import io

from deliberate.rehearsal.results import Rehearsal
from deliberate.rehearsal.words import shown_names
from deliberate.scenario.values import Variant

RISKY = ("=", "+", "-", "@", "\t", "\r")


def safe_cell(text: str) -> str:
    """`text` with a leading quote where a sheet would take it for a formula (common practice)."""
    return f"'{text}" if text.startswith(RISKY) else text


def as_csv(rehearsal: Rehearsal, variant: Variant) -> str:
    """One row per round: the round, every person's belief, the spread; with the ballot where there is one."""
    return _sheet(rehearsal, variant, ",")


def as_tabs(rehearsal: Rehearsal, variant: Variant) -> str:
    """The same, with tabs between the cells, as sheets paste it."""
    return _sheet(rehearsal, variant, "\t")


def _sheet(rehearsal: Rehearsal, variant: Variant, between: str) -> str:
    names = shown_names(variant)
    text = io.StringIO()
    rows = csv.writer(text, delimiter=between)
    header = ["round", *(safe_cell(names.get(one, one)) for one in rehearsal.people), "spread"]
    ballot = rehearsal.ballot
    rows.writerow(header + ["for", "against", "abstaining", "objecting", "passes"] * (ballot is not None))
    for at, beliefs in enumerate(rehearsal.rounds.tolist()):
        row = [at, *beliefs, float(rehearsal.spread[at])]
        if ballot is not None:
            tally = ballot[at]
            counts = [tally.in_favour, tally.against, tally.abstain, tally.objecting]
            row += [f"{value:g}" for value in counts] + ["yes" if tally.passes else "no"]
        rows.writerow(row)
    return text.getvalue()
