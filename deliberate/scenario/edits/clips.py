"""Copy and paste: people and the arrows among them, as a value that can travel between meetings."""

from __future__ import annotations

from collections.abc import Mapping

from msgspec.structs import replace

from deliberate.scenario.access import people_anywhere, variant_named
from deliberate.scenario.edits._common import Ids, as_ids, change_variant, changed, require_people
from deliberate.scenario.ids import fresh_id
from deliberate.scenario.values import Arrow, FrozenDict, Person, Question, Scenario, Value, Variant

NO_OFFSET = (0.0, 0.0)


class Clip(Value):
    """People, and the arrows among them."""

    people: tuple[Person, ...]
    arrows: tuple[Arrow, ...] = ()


def extract(variant: Variant, ids: Ids) -> Clip:
    """Copy people with the arrows among them, in the order of the variant. Raises DeliberateError for strangers."""
    wanted = frozenset(as_ids(ids))
    require_people(variant, wanted)
    return Clip(
        people=tuple(person for person in variant.people if person.id in wanted),
        arrows=tuple(arrow for arrow in variant.arrows if arrow.listener in wanted and arrow.source in wanted),
    )


def with_ids(clip: Clip, new_ids: Mapping[str, str]) -> Clip:
    """The same people under other ids."""
    return Clip(
        people=tuple(replace(person, id=new_ids[person.id]) for person in clip.people),
        arrows=tuple(
            changed(arrow, listener=new_ids[arrow.listener], source=new_ids[arrow.source]) for arrow in clip.arrows
        ),
    )


def paste(scenario: Scenario, clip: Clip, offset: tuple[float, float] = NO_OFFSET, *, variant: str) -> Scenario:
    """Add the clip's people to `variant` as new people, moved by `offset`, with the arrows among them.

    They are the last ones of the variant, in the clip's order, with fresh ids made from their names. Of their
    beliefs those are kept that the meeting asks for and whose scale they fit.
    """
    variant_named(scenario, variant)
    questions = {question.id: question for question in scenario.questions}
    taken = set(people_anywhere(scenario))
    new_ids: dict[str, str] = {}
    people = []
    for person in clip.people:
        new_ids[person.id] = fresh_id(person.shown_name, "person", taken)
        taken.add(new_ids[person.id])
        people.append(_newcomer(person, new_ids[person.id], offset, questions))
    arrows = tuple(
        changed(arrow, listener=new_ids[arrow.listener], source=new_ids[arrow.source])
        for arrow in clip.arrows
        if arrow.listener in new_ids and arrow.source in new_ids
    )
    return change_variant(
        scenario,
        variant,
        lambda one: changed(one, people=(*one.people, *people), arrows=(*one.arrows, *arrows)),
    )


def _newcomer(person: Person, new_id: str, offset: tuple[float, float], questions: Mapping[str, Question]) -> Person:
    placed = person.x is not None and person.y is not None
    beliefs = {
        key: belief
        for key, belief in person.beliefs.items()
        if key in questions and questions[key].low <= belief <= questions[key].high
    }
    return replace(
        person,
        id=new_id,
        x=person.x + offset[0] if placed else None,
        y=person.y + offset[1] if placed else None,
        beliefs=FrozenDict(beliefs),
        margins=FrozenDict({key: margin for key, margin in person.margins.items() if key in questions}),
    )
