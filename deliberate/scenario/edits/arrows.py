"""Edits on arrows. A pair is (listener, source): the listener hears the source."""

from __future__ import annotations

from collections.abc import Callable, Iterable

from deliberate.errors import DeliberateError
from deliberate.scenario.access import arrow_between, arrows_of, person_with_id, variant_named
from deliberate.scenario.edits._common import (
    Pair,
    as_number,
    change_variant,
    changed,
    replaced,
    require_people,
    shown_name,
)
from deliberate.scenario.shape import shown
from deliberate.scenario.values import Arrow, Basis, Scenario, Variant


def usual_weight(variant: Variant, listener: str) -> float:
    """The weight a new arrow gets: what the listener's other sources have on average, so that it fits her points.

    Where she hears nobody yet it is as much as her own view has, and 1 where that has nothing.
    """
    weights = [arrow.weight for arrow in arrows_of(variant, listener)]
    if weights:
        return sum(weight / len(weights) for weight in weights)
    return person_with_id(variant, listener).own_weight or 1.0


def add_arrow(
    scenario: Scenario,
    listener: str,
    source: str,
    weight: float | None = None,
    *,
    variant: str,
    basis: Basis | None = None,
) -> Scenario:
    """Let `listener` hear `source`, by default with `usual_weight`.

    Where she does already, her arrow gets the weight and the basis that are given.
    """
    before = variant_named(scenario, variant)
    require_people(before, (listener, source))
    if listener == source:
        raise DeliberateError("an arrow leads to somebody else; the own view counts by its own points")
    given = None if weight is None else _positive(weight)
    arrow = arrow_between(before, listener, source)
    if arrow is not None:
        kept = changed(arrow, weight=given or arrow.weight, basis=basis or arrow.basis)
        arrows = replaced(before.arrows, before.arrows.index(arrow), kept)
    else:
        arrows = (*before.arrows, Arrow(listener, source, given or usual_weight(before, listener), basis or "guess"))
    return change_variant(scenario, variant, lambda one: changed(one, arrows=arrows))


def set_weight(scenario: Scenario, pairs: Iterable[Pair], weight: float, *, variant: str) -> Scenario:
    """Give these arrows `weight`, in their listeners' own points."""
    given = _positive(weight)
    return _change_arrows(scenario, pairs, lambda arrow: changed(arrow, weight=given), variant)


def scale_weights(scenario: Scenario, pairs: Iterable[Pair], factor: float, *, variant: str) -> Scenario:
    """Multiply the weights of these arrows by `factor`."""
    by = _positive(factor, "a factor")
    return _change_arrows(scenario, pairs, lambda arrow: changed(arrow, weight=_positive(arrow.weight * by)), variant)


def set_basis(scenario: Scenario, pairs: Iterable[Pair], basis: Basis, *, variant: str) -> Scenario:
    """Say where the weights of these arrows come from."""
    return _change_arrows(scenario, pairs, lambda arrow: changed(arrow, basis=basis), variant)


def turn_arrows(scenario: Scenario, pairs: Iterable[Pair], *, variant: str) -> Scenario:
    """Let the sources of these arrows hear the listeners instead; two arrows between the same two trade places."""
    wanted = set(pairs)
    before = variant_named(scenario, variant)
    for arrow in before.arrows:
        pair, back = (arrow.listener, arrow.source), (arrow.source, arrow.listener)
        if back in wanted and pair not in wanted:
            listener, source = shown_name(before, arrow.listener), shown_name(before, arrow.source)
            raise DeliberateError(f"{listener} listens to {source} already: turn both arrows round, or remove one")
    return _change_arrows(
        scenario, wanted, lambda arrow: changed(arrow, listener=arrow.source, source=arrow.listener), variant
    )


def remove_arrows(scenario: Scenario, pairs: Iterable[Pair], *, variant: str) -> Scenario:
    """Let these listeners no longer hear these sources."""
    return _change_arrows(scenario, pairs, lambda _: None, variant)


def _positive(weight: float, what: str = "the weight of an arrow") -> float:
    number = as_number(weight, what)
    if number == 0:
        raise DeliberateError(f"{what} must be more than 0, is {shown(number)}; remove the arrow instead")
    return number


def _change_arrows(
    scenario: Scenario, pairs: Iterable[Pair], change: Callable[[Arrow], Arrow | None], variant: str
) -> Scenario:
    """Replace each of these arrows by `change(arrow)`, or drop it where that is None.

    Raises DeliberateError where a pair has no arrow.
    """
    missing = set(pairs)
    listeners = {listener for listener, _ in missing}  # a look at the listener alone spares most arrows a tuple
    before = variant_named(scenario, variant)
    arrows: list[Arrow] = []
    for arrow in before.arrows:
        if arrow.listener in listeners and (pair := (arrow.listener, arrow.source)) in missing:
            missing.remove(pair)
            if (after := change(arrow)) is not None:
                arrows.append(after)
        else:
            arrows.append(arrow)
    for listener, source in sorted(missing):
        raise DeliberateError(f"{shown_name(before, listener)} does not listen to {shown_name(before, source)}")
    return change_variant(scenario, variant, lambda one: changed(one, arrows=tuple(arrows)))
