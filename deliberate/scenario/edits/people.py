"""Edits on people.

Name and role belong to a person, so by default they change in every variant that she is in. Everything else is
part of how one variant is set up: `variant` names it, and None means every variant that she is in. `ids` is one id
or several.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping

from msgspec import UNSET

from deliberate.errors import DeliberateError
from deliberate.scenario.access import people_anywhere, question_with_id, variant_index, variant_named
from deliberate.scenario.edits._common import (
    Ids,
    as_ids,
    as_line,
    as_number,
    change_people,
    change_variant,
    changed,
    checked,
    forget_strangers,
    in_order,
    replaced,
    require_people,
    require_question,
)
from deliberate.scenario.ids import fresh_id
from deliberate.scenario.values import FrozenDict, Person, Scenario, Stage, Variant

Place = tuple[float, float]


def fresh_person_id(scenario: Scenario, name: str) -> str:
    """The id that `add_person` would give to somebody of this name: in no variant yet, and made from the name."""
    return fresh_id(as_line(name), "person", people_anywhere(scenario))


def add_person(
    scenario: Scenario,
    name: str = "",
    *,
    variant: str,
    person_id: str | None = None,
    place: Place | None = None,
    role: str = "",
) -> Scenario:
    """Add somebody as the last of the people in `variant`.

    She gets `person_id`, by default a fresh one made from her name. An id that another variant uses already
    means the same person. Without a name she goes by her id.
    """
    x, y = (None, None) if place is None else _coordinates(place)
    identity = fresh_person_id(scenario, name) if person_id is None else person_id
    if any(person.id == identity for person in variant_named(scenario, variant).people):
        raise DeliberateError(f'"{identity}" is in "{variant}" already')
    person = Person(id=identity, name=as_line(name) or UNSET, role=as_line(role), x=x, y=y)
    return change_variant(scenario, variant, lambda one: changed(one, people=(*one.people, person)))


def bring_people(scenario: Scenario, ids: Ids, *, source: str, variant: str) -> Scenario:
    """Let people of the variant `source` take part in `variant` too, with their settings but without arrows."""
    wanted = as_ids(ids)
    origin = variant_named(scenario, source)
    require_people(origin, wanted)

    def change(one: Variant) -> Variant:
        here = {person.id for person in one.people}
        newcomers = (person for person in origin.people if person.id in wanted and person.id not in here)
        return changed(one, people=(*one.people, *newcomers))

    return change_variant(scenario, variant, change)


def remove_people(scenario: Scenario, ids: Ids, *, variant: str) -> Scenario:
    """Take people out of `variant`, with their arrows and their places at tables, on panels and in pairs.

    Those who are then in no variant are taken out of the polls and the casting vote too.
    """
    gone = frozenset(as_ids(ids))
    index = variant_index(scenario, variant)
    before = scenario.variants[index]
    require_people(before, gone)
    stages = tuple(_without(stage, gone) for stage in before.plan.stages)
    after = changed(
        before,
        people=tuple(person for person in before.people if person.id not in gone),
        arrows=tuple(arrow for arrow in before.arrows if arrow.listener not in gone and arrow.source not in gone),
        plan=changed(before.plan, stages=stages),
    )
    left = forget_strangers(changed(scenario, variants=replaced(scenario.variants, index, after)))
    return checked(scenario, variants=left.variants, ballot=left.ballot, polls=left.polls)


def reorder_people(scenario: Scenario, order: Iterable[str], *, variant: str) -> Scenario:
    """List the people of `variant` in the `order` of these ids, which names each of them once."""
    keys = tuple(order)
    return change_variant(
        scenario, variant, lambda one: changed(one, people=in_order(one.people, keys, lambda person: person.id))
    )


def rename_person(scenario: Scenario, person_id: str, name: str, *, variant: str | None = None) -> Scenario:
    """Call a person `name`; with an empty name she goes by her id. The id stays."""
    line = as_line(name) or UNSET
    return change_people(scenario, person_id, lambda person: changed(person, name=line), variant=variant)


def set_role(scenario: Scenario, ids: Ids, role: str, *, variant: str | None = None) -> Scenario:
    """Note what part people have in the meeting ("chair", "observer")."""
    line = as_line(role)
    return change_people(scenario, ids, lambda person: changed(person, role=line), variant=variant)


def move_people(scenario: Scenario, places: Mapping[str, Place | None], *, variant: str | None) -> Scenario:
    """Put people at places (x, y) on the canvas; None leaves the place to the program."""

    def change(person: Person) -> Person:
        place = places[person.id]
        if place is None:
            return changed(person, x=None, y=None)
        x, y = _coordinates(place)
        return changed(person, x=x, y=y)

    return change_people(scenario, places, change, variant=variant)


def set_belief(scenario: Scenario, ids: Ids, question: str, belief: float | None, *, variant: str | None) -> Scenario:
    """Set where people start on `question`, on its scale; None means that it is not known."""
    return set_beliefs(scenario, dict.fromkeys(as_ids(ids), belief), question, variant=variant)


def set_beliefs(
    scenario: Scenario, beliefs: Mapping[str, float | None], question: str, *, variant: str | None
) -> Scenario:
    """Set starting beliefs on `question` by person id; None means not known."""
    asked = question_with_id(scenario, question)
    starts = {
        one: None if belief is None else as_number(belief, "a starting belief", asked.low, asked.high)
        for one, belief in beliefs.items()
    }

    def change(person: Person) -> Person:
        return changed(person, beliefs=_with_entry(person.beliefs, question, starts[person.id]))

    return change_people(scenario, starts, change, variant=variant)


def set_margin(scenario: Scenario, ids: Ids, question: str, margin: float | None, *, variant: str | None) -> Scenario:
    """Set by how much people's starting beliefs may be off, on the question's scale; None takes the margin away."""
    require_question(scenario, question)
    width = None if margin is None else as_number(margin, "a margin")
    return change_people(
        scenario,
        ids,
        lambda person: changed(person, margins=_with_entry(person.margins, question, width)),
        variant=variant,
    )


def set_firmness(scenario: Scenario, ids: Ids, firmness: float, *, variant: str | None) -> Scenario:
    """Set which part of their starting belief people bring back in every round: 0 none, 1 all of it."""
    part = as_number(firmness, "firmness", 0, 1)
    return change_people(scenario, ids, lambda person: changed(person, firmness=part), variant=variant)


def set_ballots(scenario: Scenario, ids: Ids, ballots: float, *, variant: str | None) -> Scenario:
    """Set how many votes people cast; 0 attends without a vote."""
    votes = as_number(ballots, "the number of votes")
    return change_people(scenario, ids, lambda person: changed(person, ballots=votes), variant=variant)


def set_presence(scenario: Scenario, ids: Ids, present: bool, *, variant: str | None) -> Scenario:
    """Say whether people are there. Whoever is not neither hears, is heard, nor votes."""
    return change_people(scenario, ids, lambda person: changed(person, present=bool(present)), variant=variant)


def set_own_weight(scenario: Scenario, ids: Ids, weight: float, *, variant: str | None) -> Scenario:
    """Set the weight of people's own views, in the same points as their arrows."""
    own = as_number(weight, "the weight of the own view")
    return change_people(scenario, ids, lambda person: changed(person, own_weight=own), variant=variant)


def _coordinates(place: Place) -> Place:
    x, y = (as_number(coordinate, "a place on the canvas", -math.inf) for coordinate in place)
    return x, y


def _with_entry(entries: Mapping[str, float], key: str, value: float | None) -> FrozenDict:
    if value is None:
        return FrozenDict({one: entry for one, entry in entries.items() if one != key})
    return FrozenDict({**entries, key: value})


def _without(stage: Stage, gone: frozenset[str]) -> Stage:
    """The stage without these people; a table that loses everybody goes too."""
    seated = ((table, tuple(one for one in table if one not in gone)) for table in stage.tables)
    return changed(
        stage,
        tables=tuple(left for table, left in seated if left or not table),
        speakers=tuple(one for one in stage.speakers if one not in gone),
        pairs=tuple(pair for pair in stage.pairs if gone.isdisjoint(pair)),
    )
