"""Finding things in a scenario by the names people use for them; what is not there is said in words."""

from __future__ import annotations

from deliberate.errors import DeliberateError
from deliberate.scenario.values import Arrow, Person, Question, Scenario, Stage, Variant


def variant_index(scenario: Scenario, name: str) -> int:
    """Place of the variant called `name`. Raises DeliberateError where there is none."""
    for index, variant in enumerate(scenario.variants):
        if variant.name == name:
            return index
    raise DeliberateError(f'there is no variant called "{name}"')


def variant_named(scenario: Scenario, name: str) -> Variant:
    """The variant called `name`. Raises DeliberateError where there is none."""
    return scenario.variants[variant_index(scenario, name)]


def question_index(scenario: Scenario, question_id: str) -> int:
    """Place of the question with this id. Raises DeliberateError where there is none."""
    for index, question in enumerate(scenario.questions):
        if question.id == question_id:
            return index
    raise DeliberateError(f'there is no question with the id "{question_id}"')


def question_with_id(scenario: Scenario, question_id: str) -> Question:
    """The question with this id. Raises DeliberateError where there is none."""
    return scenario.questions[question_index(scenario, question_id)]


def person_with_id(variant: Variant, person_id: str) -> Person:
    """The person with this id in `variant`. Raises DeliberateError where there is none."""
    for person in variant.people:
        if person.id == person_id:
            return person
    raise DeliberateError(f'there is nobody with the id "{person_id}" in "{variant.name}"')


def arrow_between(variant: Variant, listener: str, source: str) -> Arrow | None:
    """The arrow ``listener -> source``, or None where the listener does not hear the source."""
    for arrow in variant.arrows:
        if arrow.listener == listener and arrow.source == source:
            return arrow
    return None


def arrows_of(variant: Variant, listener: str) -> tuple[Arrow, ...]:
    """The arrows to those whom `listener` hears, in the order of the file."""
    return tuple(arrow for arrow in variant.arrows if arrow.listener == listener)


def stage_at(variant: Variant, index: int) -> Stage:
    """The stage at `index`, counted from 0. Raises DeliberateError where there is none."""
    stages = variant.plan.stages
    if not 0 <= index < len(stages):
        raise DeliberateError(f"there is no stage {index + 1}: the plan has {len(stages)}")
    return stages[index]


def people_anywhere(scenario: Scenario) -> frozenset[str]:
    """Ids of everybody who is in at least one variant."""
    return frozenset(person.id for variant in scenario.variants for person in variant.people)
