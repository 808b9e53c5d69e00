"""Changes of process to try: a suggestion becomes a variant beside the one it was made for."""

from __future__ import annotations

from collections.abc import Mapping

from deliberate.rehearsal.results import (
    EndInPlenary,
    GoBetween,
    GoRounds,
    Introduce,
    Introductions,
    JointRound,
    KeepOwnView,
    MixedTables,
    MovePoints,
    PairTalks,
    ReorderStages,
    SpeakFirst,
    Suggestion,
)
from deliberate.rehearsal.words import amount, count, in_words, listing, names, shown_names, without_marks
from deliberate.scenario import edits
from deliberate.scenario.access import variant_named
from deliberate.scenario.values import Scenario, Stage, Variant

MOST_NAMED_PAIRS = 3


def apply(scenario: Scenario, variant_name: str, suggestion: Suggestion) -> Scenario:
    """The scenario with one more variant right behind `variant_name`: a copy of it with the change.

    Its name says what differs, after the name it builds on unless that is the first variant's, and its notes say
    it in full, in place of notes that were true of the other set-up. What each change does is told where it is
    defined, in `results`. Raises DeliberateError for unknown names and ids, and where a change cannot be made.
    """
    before = variant_named(scenario, variant_name)
    change = without_marks(_in_short(suggestion, before))
    wanted = change if before is scenario.variants[0] else f"{before.name}, {change}"
    name = edits.fresh_variant_name(scenario, wanted)
    scenario = edits.add_variant(scenario, copy_of=variant_name, name=name)
    scenario = edits.set_variant_notes(scenario, name, f"{without_marks(words(suggestion, before))}.")
    return change_in_place(scenario, name, suggestion)


def change_in_place(scenario: Scenario, name: str, suggestion: Suggestion) -> Scenario:
    """The scenario with the change made in the variant called `name` itself."""
    match suggestion:
        case Introduce(listener, source, points):
            return edits.set_points(scenario, listener, source, points, variant=name)
        case Introductions(arrows, points):
            return edits.let_hear(scenario, arrows, points, variant=name)
        case KeepOwnView(people, points):
            return edits.set_own_points(scenario, people, points, variant=name)
        case MovePoints(listener, away, to, points):
            return edits.move_points(scenario, listener, away, to, points, variant=name)
        case GoBetween(people, points):
            return edits.add_go_between(scenario, people, points, variant=name)
        case JointRound(rounds):
            return edits.add_joint_round(scenario, rounds, variant=name, name="Joint round")
        case SpeakFirst(speakers, rounds, points):
            stage = Stage("Heard first", rounds, "panel", "rescale", speakers=speakers)
            listeners = [person.id for person in variant_named(scenario, name).people if person.present]
            arrows = [(listener, speaker) for listener in listeners for speaker in speakers]
            return edits.begin_with(edits.give_at_least(scenario, arrows, points, variant=name), stage, variant=name)
        case PairTalks(pairs, rounds, points):
            stage = Stage("Talks in pairs", rounds, "pairs", "rescale", pairs=pairs)
            arrows = [arrow for one, other in pairs for arrow in ((one, other), (other, one))]
            return edits.begin_with(edits.give_at_least(scenario, arrows, points, variant=name), stage, variant=name)
        case MixedTables(tables, rounds, points):
            stage = Stage("Mixed tables", rounds, "tables", "rescale", tables=tables)
            return edits.begin_with(edits.acquaint(scenario, tables, points, variant=name), stage, variant=name)
        case GoRounds(own_points):
            return edits.hear_all_alike(scenario, own_points, variant=name)
        case EndInPlenary(rounds):
            return edits.end_with(scenario, Stage("Plenary", rounds), variant=name)
        case ReorderStages(order):
            return edits.reorder_stages(scenario, order, variant=name)


def words(suggestion: Suggestion, variant: Variant) -> str:
    """The suggestion as a request, without a full stop: "Let Amina hear Emeka: 10 of 100 points"."""
    known = shown_names(variant)
    match suggestion:
        case Introduce(listener, source, points):
            return f"Let {names([listener], known)} hear {names([source], known)}: {_of_100(points)}"
        case Introductions(arrows, points):
            return _introductions(arrows, points, known)
        case KeepOwnView((one,), points):
            return f"Let the own view of {names([one], known)} count for {_of_100(points)}"
        case KeepOwnView(people, points):
            return f"Let the own views of {names(people, known)} count for {_of_100(points)} each"
        case MovePoints(listener, away, to, points):
            whom, instead = ("the own view" if one == listener else names([one], known) for one in (to, away))
            return f"Let {names([listener], known)} give {_of_100(points)} to {whom} instead of {instead}"
        case GoBetween(people, points):
            return (
                f"Bring in a go-between without a vote or a view of her own, who hears {names(people, known)} alike;"
                f" each gives her {_of_100(points)}"
            )
        case JointRound(rounds):
            return f"Begin with {_rounds(rounds)} in which everybody hears everybody"
        case SpeakFirst(speakers, rounds, points):
            them = "each of them" if len(speakers) > 1 else names(speakers, known)
            given = f"; all give {them} {_of_100(points)} or more" if points else ""
            return f"Begin with {_rounds(rounds)} in which {_only(speakers, variant, known)} heard{given}"
        case PairTalks(pairs, rounds, points):
            given = f"; the two give each other {_of_100(points)} or more"
            return f"Begin with {_rounds(rounds)} of talks in pairs: {_pairs(pairs, known)}{given}"
        case MixedTables(tables, rounds, points):
            first = names(tables[0], known, most=5)
            laid = in_words(len(tables), "mixed table", "mixed tables")
            given = f"; those new to each other give each other {_of_100(points)}" if points else ""
            return f"Begin with {_rounds(rounds)} at {laid}, the first for {first}{given}"
        case GoRounds(own_points):
            return f"Go round in every round: everybody hears all others alike, own view {_of_100(own_points)}"
        case EndInPlenary(rounds):
            return f"End with {_rounds(rounds)} in plenary, in which all are heard who are heard at all"
        case ReorderStages(order):
            return f"Take the stages in another order: {listing([variant.plan.stages[at].name for at in order])}"


def _in_short(suggestion: Suggestion, variant: Variant) -> str:
    """The change in a few words, as a variant's name."""
    known = shown_names(variant)
    match suggestion:
        case Introduce(listener, source):
            return f"{names([listener], known)} hears {names([source], known)}"
        case Introductions(arrows):
            both = _mutual(arrows)
            if both is not None and len(both) == 1:
                return f"{names(both[0], known)} hear each other"
            return f"{in_words(len(arrows), 'introduction', 'introductions').capitalize()}"
        case KeepOwnView(people, points):
            return f"Own views {amount(points)}: {names(people, known, most=3)}"
        case MovePoints(listener, away, to):
            whom, instead = ("own view" if one == listener else names([one], known) for one in (to, away))
            return f"{names([listener], known)}: {whom} for {instead}"
        case GoBetween():
            return "A go-between"
        case JointRound(rounds):
            return f"{count(rounds, 'joint round', 'joint rounds')} first"
        case SpeakFirst(speakers):
            return f"{names(speakers, known, most=3)} heard first"
        case PairTalks():
            return "Talks in pairs first"
        case MixedTables():
            return "Mixed tables first"
        case GoRounds():
            return "Go-rounds"
        case EndInPlenary():
            return "Plenary at the end"
        case ReorderStages(order):
            return f"{variant.plan.stages[order[0]].name} first"


def _of_100(points: float) -> str:
    return f"{amount(points)} of 100 points"


def _rounds(rounds: int) -> str:
    return in_words(rounds, "round", "rounds")


def _introductions(arrows: tuple[tuple[str, str], ...], points: float, known: Mapping[str, str]) -> str:
    given = f"{_of_100(points)} each"
    both = _mutual(arrows)
    if both is not None:
        return f"Let {listing([names(pair, known) for pair in both])} hear each other: {given}"
    listeners, sources = (tuple(dict.fromkeys(side)) for side in zip(*arrows, strict=True))
    if len(arrows) == len(listeners) * len(sources):
        return f"Let {names(listeners, known)} hear {names(sources, known)}: {given}"
    shown = [f"{names([listener], known)} hear {names([source], known)}" for listener, source in arrows]
    more = len(shown) - MOST_NAMED_PAIRS
    if more > 1:
        shown = [*shown[:MOST_NAMED_PAIRS], f"{amount(more)} more listen to somebody new"]
    return f"Let {listing(shown)}: {given}"


def _mutual(arrows: tuple[tuple[str, str], ...]) -> list[tuple[str, str]] | None:
    """The pairs who hear each other, where all arrows come in such pairs of people who are in no other."""
    pairs = list({frozenset(arrow): arrow for arrow in reversed(arrows)}.values())
    people = [one for pair in pairs for one in pair]
    back = {(source, listener) for listener, source in arrows}
    return pairs[::-1] if back == set(arrows) and len(set(people)) == len(people) else None


def _only(speakers: tuple[str, ...], variant: Variant, known: Mapping[str, str]) -> str:
    """Who is heard, or where that is shorter, who is not."""
    silent = [person.id for person in variant.people if person.present and person.id not in speakers]
    if 0 < len(silent) < min(len(speakers), 3):
        return f"all but {names(silent, known)} are"
    return f"only {names(speakers, known)} {'is' if len(speakers) == 1 else 'are'}"


def _pairs(pairs: tuple[tuple[str, str], ...], known: Mapping[str, str]) -> str:
    shown = [f"{names([one], known)} with {names([other], known)}" for one, other in pairs]
    more = len(shown) - MOST_NAMED_PAIRS
    if more > 1:
        shown = [*shown[:MOST_NAMED_PAIRS], f"{amount(more)} more pairs"]
    return listing(shown)
