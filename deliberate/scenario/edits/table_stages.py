"""Stages at tables, seated anew from one to the next."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Literal

from deliberate.errors import DeliberateError
from deliberate.scenario.access import variant_named
from deliberate.scenario.edits._common import as_line, change_variant, changed
from deliberate.scenario.values import Plan, Scenario, Stage, Unheard, Variant

Place = Literal["before", "after", "instead"]
Tables = tuple[tuple[str, ...], ...]


def add_table_stages(
    scenario: Scenario,
    seatings: Iterable[Iterable[Iterable[str]]],
    *,
    variant: str,
    rounds: int,
    place: Place = "before",
    unheard: Unheard = "rescale",
    name: str = "Mixed tables",
) -> Scenario:
    """Put one stage of `rounds` at tables into the plan for each of `seatings`, a seating being a list of tables.

    They go before the plan's stages, after them, or instead of the table stages it has (where the first of these
    stood; before all where there is none).
    """
    laid = [tuple(tuple(table) for table in tables if table) for tables in seatings]
    if not laid:
        raise DeliberateError("there is no seating to put into the plan")
    stages = tuple(
        Stage(as_line(name if len(laid) == 1 else f"{name} {number}"), rounds, "tables", unheard, tables=tables)
        for number, tables in enumerate(laid, start=1)
    )

    def change(one: Variant) -> Variant:
        before, after = around_tables(one.plan, place)
        return changed(one, plan=changed(one.plan, stages=(*before, *stages, *after)))

    variant_named(scenario, variant)
    return change_variant(scenario, variant, change)


def around_tables(plan: Plan, place: Place) -> tuple[Sequence[Stage], Sequence[Stage]]:
    """The stages that stay, before and after the place where table stages are put."""
    stages = plan.stages
    if place == "after":
        return stages, ()
    at_tables = [at for at, stage in enumerate(stages) if stage.setting == "tables"]
    if place == "before" or not at_tables:
        return (), stages
    first = at_tables[0]
    return stages[:first], [stage for stage in stages[first:] if stage.setting != "tables"]
