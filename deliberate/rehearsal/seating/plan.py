"""A seating in the plan of a variant."""

from __future__ import annotations

from deliberate.rehearsal.seating.told import variant_name
from deliberate.rehearsal.seating.wish import Seating, Tables, Wish
from deliberate.scenario import edits
from deliberate.scenario.values import Scenario


def add_to(scenario: Scenario, variant: str, wish: Wish, rotations: tuple[Tables, ...]) -> Scenario:
    """The scenario with the table stages in the plan of `variant`."""
    return edits.add_table_stages(
        scenario, rotations, variant=variant, rounds=wish.rounds, place=wish.place, unheard=wish.unheard
    )


def as_variant(scenario: Scenario, seating: Seating) -> tuple[Scenario, str]:
    """The scenario with one more variant, right behind the one the seating is for, and that variant's name."""
    wanted = variant_name(seating)
    if seating.variant != scenario.variants[0].name:
        wanted = f"{seating.variant}, {wanted[:1].lower()}{wanted[1:]}"
    name = edits.fresh_variant_name(scenario, wanted)
    scenario = edits.add_variant(scenario, copy_of=seating.variant, name=name)
    return add_to(scenario, name, seating.wish, seating.rotations), name
