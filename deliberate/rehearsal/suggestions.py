"""Changes of process to try: a suggestion becomes a variant beside the one it was made for."""

from __future__ import annotations

from deliberate.rehearsal.results import Introduce, JointRound, KeepOwnView, Suggestion
from deliberate.rehearsal.words import amount, count, names
from deliberate.scenario import edits
from deliberate.scenario.access import variant_named
from deliberate.scenario.values import Scenario, Variant


def apply(scenario: Scenario, variant_name: str, suggestion: Suggestion) -> Scenario:
    """The scenario with one more variant right behind `variant_name`: a copy of it with the change.

    Its name says what differs, after the name it builds on unless that is the first variant's. What a joint round
    does to arrows and later stages is told in `JointRound`. Raises DeliberateError for unknown names and ids.
    """
    before = variant_named(scenario, variant_name)
    change = _in_short(suggestion, before)
    wanted = change if before is scenario.variants[0] else f"{before.name}, {change}"
    name = edits.fresh_variant_name(scenario, wanted)
    scenario = edits.add_variant(scenario, copy_of=variant_name, name=name)
    match suggestion:
        case Introduce(listener, source, points):
            return edits.set_points(scenario, listener, source, points, variant=name)
        case KeepOwnView(people, points):
            return edits.set_own_points(scenario, people, points, variant=name)
        case JointRound(rounds):
            return edits.add_joint_round(scenario, rounds, variant=name, name="Joint round")


def words(suggestion: Suggestion, variant: Variant) -> str:
    """The suggestion as a request, without a full stop: "Let Amina hear Emeka: 10 of 100 points"."""
    match suggestion:
        case Introduce(listener, source, points):
            return f"Let {names([listener], variant)} hear {names([source], variant)}: {amount(points)} of 100 points"
        case KeepOwnView((one,), points):
            return f"Let the own view of {names([one], variant)} count for {amount(points)} of 100 points"
        case KeepOwnView(people, points):
            return f"Let the own views of {names(people, variant)} count for {amount(points)} of 100 points each"
        case JointRound(rounds):
            return f"Begin with {count(rounds, 'round', 'rounds')} in which everybody hears everybody"


def _in_short(suggestion: Suggestion, variant: Variant) -> str:
    """The change in a few words, as a variant's name."""
    match suggestion:
        case Introduce(listener, source):
            return f"{names([listener], variant)} hears {names([source], variant)}"
        case KeepOwnView(people, points):
            return f"Own views {amount(points)}: {names(people, variant, most=3)}"
        case JointRound(rounds):
            return f"{count(rounds, 'joint round', 'joint rounds')} first"
