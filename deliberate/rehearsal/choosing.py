"""Which variant and which question: by name, or the first ones."""

from __future__ import annotations

from typing import TypeVar

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import listing
from deliberate.scenario.values import Question, Scenario, Variant

Named = TypeVar("Named", Variant, Question)


def pick_variant(scenario: Scenario, name: str | None = None) -> Variant:
    """The variant called `name`, or the first one. Raises DeliberateError that says which there are."""
    return _pick({variant.name: variant for variant in scenario.variants}, name, "variant", "variants")


def pick_question(scenario: Scenario, id: str | None = None) -> Question:
    """The question with that id, or the first one. Raises DeliberateError that says which there are."""
    return _pick({question.id: question for question in scenario.questions}, id, "question", "questions")


def _pick(known: dict[str, Named], wanted: str | None, one: str, several: str) -> Named:
    if wanted is None:
        return next(iter(known.values()))
    if wanted not in known:
        there = listing([f'"{name}"' for name in known])
        verb = f"the only {one} is" if len(known) == 1 else f"the {several} are"
        raise DeliberateError(f'there is no "{wanted}"; {verb} {there}', one)
    return known[wanted]
