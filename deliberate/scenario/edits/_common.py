"""What all edits share: replace only what differs, then check the whole.

An edit that changes nothing gives back the very same scenario, and what it does not touch keeps its identity, so
that a history of thousands of scenarios costs little more than one.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from typing import TypeVar

from msgspec.structs import replace

from deliberate.errors import DeliberateError
from deliberate.scenario.access import people_anywhere, person_with_id, question_with_id, variant_index
from deliberate.scenario.checks import validate
from deliberate.scenario.shape import shown
from deliberate.scenario.values import Person, Scenario, Value, Variant

V = TypeVar("V", bound=Value)
T = TypeVar("T")

Ids = str | Iterable[str]
Pair = tuple[str, str]  # (listener, source)


def as_ids(ids: Ids) -> tuple[str, ...]:
    """One id or several as a tuple without repetition, in the order given."""
    return (ids,) if isinstance(ids, str) else tuple(dict.fromkeys(ids))


def as_line(text: str) -> str:
    """`text` as one line: line breaks and tabs that came with pasting become single spaces."""
    return " ".join(text.split())


def as_number(value: float, what: str, low: float = 0.0, high: float = math.inf) -> float:
    """`value` as a float within [low, high]; `what` begins the message where it is not."""
    number = float(value)
    if low <= number <= high and math.isfinite(number):
        return number
    if not math.isfinite(number):
        wanted = "must be a finite number"
    elif high < math.inf:
        wanted = f"must lie between {shown(low)} and {shown(high)}"
    else:
        wanted = f"must be at least {shown(low)}"
    raise DeliberateError(f"{what} {wanted}, is {shown(number)}")


def changed(value: V, **changes: object) -> V:
    """`value` with these fields replaced, or `value` itself where they hold that already."""
    if all(getattr(value, field) == new for field, new in changes.items()):
        return value
    return replace(value, **changes)


def replaced(items: tuple[T, ...], index: int, item: T) -> tuple[T, ...]:
    """`items` with the one at `index` replaced."""
    return items if items[index] is item else (*items[:index], item, *items[index + 1 :])


def inserted(items: tuple[T, ...], index: int | None, item: T) -> tuple[T, ...]:
    """`items` with `item` put before place `index`, or at the end where that is None."""
    place = len(items) if index is None else min(max(index, 0), len(items))
    return (*items[:place], item, *items[place:])


def moved(items: tuple[T, ...], index: int, to: int) -> tuple[T, ...]:
    """`items` with the one at `index` taken out and put back so that it stands at `to`."""
    rest = (*items[:index], *items[index + 1 :])
    return inserted(rest, to, items[index])


def in_order(items: tuple[T, ...], keys: Iterable[str], key_of: Callable[[T], str]) -> tuple[T, ...]:
    """`items` in the order of `keys`, which names each of them once."""
    wanted = tuple(keys)
    by_key = {key_of(item): item for item in items}
    if len(wanted) != len(items) or set(wanted) != by_key.keys():
        raise DeliberateError("a new order must name each of them once")
    return tuple(by_key[key] for key in wanted)


def checked(before: Scenario, **changes: object) -> Scenario:
    """`before` with these fields replaced, validated; `before` itself where nothing differs.

    Arrows that `before` has too were validated with it, and there may be thousands, so only new ones are looked at
    again. That no two of them double and none leads to somebody who is gone is up to each edit.
    """
    after = changed(before, **changes)
    if after is before:
        return before
    slim = replace(after, variants=tuple(_with_new_arrows_only(variant, before) for variant in after.variants))
    # Another value coming back had lists for tuples or the like in it: then the whole is cleaned.
    return after if validate(slim) is slim else validate(after)


def change_variant(scenario: Scenario, name: str, change: Callable[[Variant], Variant]) -> Scenario:
    """The scenario with the variant called `name` replaced by `change(variant)`."""
    index = variant_index(scenario, name)
    return checked(scenario, variants=replaced(scenario.variants, index, change(scenario.variants[index])))


def change_people(
    scenario: Scenario, ids: Ids, change: Callable[[Person], Person], *, variant: str | None
) -> Scenario:
    """The scenario with each of these people replaced by `change(person)`.

    They must be in `variant`; with None they are changed in every variant that they are in.
    """
    wanted = frozenset(as_ids(ids))
    if variant is not None:
        return change_variant(scenario, variant, lambda one: _with_people(one, wanted, change, all_here=True))
    for stranger in sorted(wanted - people_anywhere(scenario)):
        raise DeliberateError(f'there is nobody with the id "{stranger}"')
    changed_variants = (_with_people(one, wanted, change, all_here=False) for one in scenario.variants)
    return checked(scenario, variants=tuple(changed_variants))


def require_people(variant: Variant, ids: Iterable[str]) -> None:
    """Raise DeliberateError unless all of `ids` are in `variant`."""
    strangers = set(ids) - {person.id for person in variant.people}
    if strangers:
        person_with_id(variant, min(strangers))


def require_question(scenario: Scenario, question: str) -> None:
    """Raise DeliberateError unless the scenario asks `question`."""
    question_with_id(scenario, question)


def shown_name(variant: Variant, person_id: str) -> str:
    """How the person is called in messages."""
    return person_with_id(variant, person_id).shown_name


def forget_strangers(scenario: Scenario) -> Scenario:
    """Take those who are in no variant any more out of polls and casting vote. Not validated."""
    if not scenario.polls and scenario.ballot.casting_vote is None:
        return scenario
    known = people_anywhere(scenario)
    ballot = scenario.ballot
    if ballot.casting_vote is not None and ballot.casting_vote not in known:
        ballot = changed(ballot, casting_vote=None)
    polls = []
    for poll in scenario.polls:
        kept = changed(poll, beliefs={one: belief for one, belief in poll.beliefs.items() if one in known})
        if kept.beliefs or kept is poll:  # a poll that has lost everybody says nothing
            polls.append(kept)
    return changed(scenario, ballot=ballot, polls=tuple(polls))


def _with_new_arrows_only(variant: Variant, before: Scenario) -> Variant:
    if any(variant.arrows is known.arrows for known in before.variants):
        return replace(variant, arrows=())
    known_ids: set[int] = set()
    for known in before.variants:
        known_ids.update(map(id, known.arrows))
    return replace(variant, arrows=tuple(arrow for arrow in variant.arrows if id(arrow) not in known_ids))


def _with_people(
    variant: Variant, wanted: frozenset[str], change: Callable[[Person], Person], *, all_here: bool
) -> Variant:
    if all_here:
        require_people(variant, wanted)
    people = tuple(change(person) if person.id in wanted else person for person in variant.people)
    return changed(variant, people=people)
