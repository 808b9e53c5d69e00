"""Edits on the plan of one variant. Stages are counted from 0.

Tables, speakers and pairs stay with a stage whatever its setting, so that switching back and forth loses nothing.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from typing import Any

from deliberate.errors import DeliberateError
from deliberate.scenario.access import stage_at, variant_named
from deliberate.scenario.edits._common import (
    Ids,
    Pair,
    as_ids,
    as_line,
    change_variant,
    changed,
    inserted,
    moved,
    replaced,
    require_people,
)
from deliberate.scenario.shape import shown
from deliberate.scenario.values import Afterwards, Plan, Scenario, Setting, Stage, Variant


def add_stage(scenario: Scenario, stage: Stage, *, variant: str, at: int | None = None) -> Scenario:
    """Put a stage before place `at` of the plan, or at its end."""
    return _change_stages(scenario, variant, lambda stages: inserted(stages, at, stage))


def change_stage(scenario: Scenario, index: int, *, variant: str, **fields: Any) -> Scenario:
    """Change fields of a stage by name: name, rounds, setting, unheard, tables, speakers, pairs."""
    if "name" in fields:
        fields["name"] = as_line(fields["name"])
    return _change_stage(scenario, index, variant, lambda stage: changed(stage, **fields))


def remove_stage(scenario: Scenario, index: int, *, variant: str) -> Scenario:
    """Drop a stage. The last one stays."""
    before = variant_named(scenario, variant)
    stage_at(before, index)
    if len(before.plan.stages) == 1:
        raise DeliberateError("a plan needs at least one stage")
    return _change_stages(scenario, variant, lambda stages: (*stages[:index], *stages[index + 1 :]))


def move_stage(scenario: Scenario, index: int, to: int, *, variant: str) -> Scenario:
    """Put the stage at `index` at place `to`."""
    stage_at(variant_named(scenario, variant), index)
    return _change_stages(scenario, variant, lambda stages: moved(stages, index, to))


def set_setting(scenario: Scenario, index: int, setting: Setting, *, variant: str) -> Scenario:
    """Say who can hear whom in a stage. Tables that were never laid begin as one table of everybody."""

    def change(one: Variant) -> Variant:
        stage = stage_at(one, index)
        tables = stage.tables
        if setting == "tables" and not tables and one.people:
            tables = (tuple(person.id for person in one.people),)
        return _with_stage(one, index, changed(stage, setting=setting, tables=tables))

    return change_variant(scenario, variant, change)


def set_tables(scenario: Scenario, index: int, tables: Iterable[Iterable[str]], *, variant: str) -> Scenario:
    """Let a stage take place at these tables. Whoever sits at none hears nobody."""
    laid = tuple(tuple(table) for table in tables)
    return _change_stage(scenario, index, variant, lambda stage: changed(stage, setting="tables", tables=laid))


def seat_people(scenario: Scenario, index: int, ids: Ids, table: int | None, *, variant: str) -> Scenario:
    """Seat people at a table, counted from 0, taking them from where they sat; None seats them nowhere.

    The number after the last table's makes a new table. A table that everybody leaves goes.
    """
    movers = as_ids(ids)
    require_people(variant_named(scenario, variant), movers)

    def change(stage: Stage) -> Stage:
        if table is not None and not 0 <= table <= len(stage.tables):
            raise DeliberateError(f"there is no table {table + 1}: there are {len(stage.tables)}")
        seats = [[one for one in seated if one not in movers] for seated in (*stage.tables, ())]
        if table is not None:
            seats[table].extend(movers)
        return changed(stage, tables=tuple(tuple(seated) for seated in seats if seated))

    return _change_stage(scenario, index, variant, change)


def set_speakers(scenario: Scenario, index: int, speakers: Iterable[str], *, variant: str) -> Scenario:
    """Let a stage be a panel on which only these people are heard."""
    panel = as_ids(speakers)
    return _change_stage(scenario, index, variant, lambda stage: changed(stage, setting="panel", speakers=panel))


def set_pairs(scenario: Scenario, index: int, pairs: Iterable[Pair], *, variant: str) -> Scenario:
    """Let a stage be talks between these two and two; each couple once, in either order."""
    couples = tuple({frozenset(pair): (pair[0], pair[1]) for pair in pairs}.values())
    return _change_stage(scenario, index, variant, lambda stage: changed(stage, setting="pairs", pairs=couples))


def set_afterwards(scenario: Scenario, afterwards: Afterwards, *, variant: str) -> Scenario:
    """Say what goes on after the last round: the last stage, or the whole plan again."""
    return change_variant(scenario, variant, lambda one: changed(one, plan=changed(one.plan, afterwards=afterwards)))


def set_plan(scenario: Scenario, plan: Plan, *, variant: str) -> Scenario:
    """Replace the whole plan, for instance by that of another variant."""
    return change_variant(scenario, variant, lambda one: changed(one, plan=plan))


def dealt(ids: Sequence[str], count: int, shift: int = 0) -> tuple[tuple[str, ...], ...]:
    """`ids` dealt out to `count` tables of about equal size, in turn, as one deals cards.

    Another `shift` moves each next table's worth of people on by that many tables, which mixes them anew.
    """
    if not 1 <= count <= max(len(ids), 1):
        raise DeliberateError(f"{len(ids)} people cannot sit at {shown(count)} tables")
    tables: list[list[str]] = [[] for _ in range(count)]
    for place, one in enumerate(ids):
        tables[(place + shift * (place // count)) % count].append(one)
    return tuple(map(tuple, tables))


def _with_stage(variant: Variant, index: int, stage: Stage) -> Variant:
    return changed(variant, plan=changed(variant.plan, stages=replaced(variant.plan.stages, index, stage)))


def _change_stage(scenario: Scenario, index: int, variant: str, change: Callable[[Stage], Stage]) -> Scenario:
    return change_variant(scenario, variant, lambda one: _with_stage(one, index, change(stage_at(one, index))))


def _change_stages(
    scenario: Scenario, variant: str, change: Callable[[tuple[Stage, ...]], tuple[Stage, ...]]
) -> Scenario:
    return change_variant(
        scenario, variant, lambda one: changed(one, plan=changed(one.plan, stages=change(one.plan.stages)))
    )
