"""Edits on the list of variants."""

from __future__ import annotations

from msgspec.structs import replace

from deliberate.errors import DeliberateError
from deliberate.scenario.access import variant_index
from deliberate.scenario.checks import validate
from deliberate.scenario.edits._common import (
    as_line,
    change_variant,
    changed,
    checked,
    forget_strangers,
    inserted,
    moved,
    replaced,
)
from deliberate.scenario.ids import fresh_name
from deliberate.scenario.values import Scenario, Variant

_LONGEST = 190  # leaves room for a number within the 200 characters of a name


def fresh_variant_name(scenario: Scenario, wanted: str) -> str:
    """`wanted`, with a number behind it where a variant is called that already: "Mixed tables (2)"."""
    line = as_line(wanted)[:_LONGEST].rstrip() or "Variant"
    return fresh_name(line, {variant.name for variant in scenario.variants})


def add_variant(scenario: Scenario, *, copy_of: str, name: str | None = None) -> Scenario:
    """Add a copy of the variant `copy_of` right after it, under `fresh_variant_name` of `name` (or its own)."""
    index = variant_index(scenario, copy_of)
    copy = replace(scenario.variants[index], name=fresh_variant_name(scenario, copy_of if name is None else name))
    return checked(scenario, variants=inserted(scenario.variants, index + 1, copy))


def rename_variant(scenario: Scenario, variant: str, name: str) -> Scenario:
    """Call the variant `name`, which no other may have."""
    line = as_line(name)
    if not line:
        raise DeliberateError("a variant needs a name")
    if line != variant and any(one.name == line for one in scenario.variants):
        raise DeliberateError(f'there is a variant called "{line}" already')
    return change_variant(scenario, variant, lambda one: changed(one, name=line))


def set_variant_notes(scenario: Scenario, variant: str, notes: str) -> Scenario:
    """Replace the notes on a variant."""
    return change_variant(scenario, variant, lambda one: changed(one, notes=notes))


def remove_variant(scenario: Scenario, variant: str) -> Scenario:
    """Drop a variant, and those who were in no other from polls and casting vote. The last variant stays."""
    index = variant_index(scenario, variant)
    if len(scenario.variants) == 1:
        raise DeliberateError("a meeting needs at least one variant")
    return _with_variants(scenario, (*scenario.variants[:index], *scenario.variants[index + 1 :]))


def move_variant(scenario: Scenario, variant: str, to: int) -> Scenario:
    """Put a variant at place `to` in the list."""
    return checked(scenario, variants=moved(scenario.variants, variant_index(scenario, variant), to))


def replace_variant(scenario: Scenario, variant: str, by: Variant) -> Scenario:
    """Put another value, such as one built from a sheet, in the place of the variant."""
    index = variant_index(scenario, variant)
    return validate(_with_variants(scenario, replaced(scenario.variants, index, by)))


def _with_variants(scenario: Scenario, variants: tuple[Variant, ...]) -> Scenario:
    left = forget_strangers(changed(scenario, variants=variants))
    return checked(scenario, variants=left.variants, ballot=left.ballot, polls=left.polls)
