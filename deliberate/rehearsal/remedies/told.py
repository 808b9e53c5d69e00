"""Remedies in words: what a change would do, what it asks, and what the vote would be, whichever way it goes."""

from __future__ import annotations

from deliberate.rehearsal.findings.sketch import Sketch, ending
from deliberate.rehearsal.remedies.aims import Aim
from deliberate.rehearsal.remedies.figures import Effort, Figures
from deliberate.rehearsal.results import (
    GoBetween,
    Introduce,
    Introductions,
    KeepOwnView,
    MixedTables,
    MovePoints,
    PairTalks,
    SpeakFirst,
    Suggestion,
    Tally,
)
from deliberate.rehearsal.words import amount, count, decimals, in_words, names, percent, sentence, with_unit

ROUNDING = 1e-9  # of the scale's width


def does(aim: Aim, sketch: Sketch, before: Figures, after: Figures) -> str:
    """What the change would do for the aim, and whose starts it would leave out."""
    served = _served(aim, sketch, before, after)
    newly_out = [one for one in after.left_out if one in before.influence and one not in before.left_out]
    if not newly_out:
        return f"{served}."
    whose = names(newly_out, sketch.shown_names)
    return f"{served}; what {whose} start{ending(len(newly_out))} with would no longer count in the end."


def _served(aim: Aim, sketch: Sketch, before: Figures, after: Figures) -> str:
    match aim:
        case "common-view":
            start = "" if sketch.question.hearing_range is not None else " from any start"
            return f"All would come to one view{start}; {_spread(sketch, before, after)}"
        case "end-swing":
            moves = (sketch.number(size) for size in (after.still_moving, before.still_moving))
            return "No swing would last; after the plan's end views would move by {} in a round, not by {}".format(
                *moves
            )
        case "sooner":
            first, now = (amount(one.rounds_to_agree) for one in (after, before))
            return (
                f"All would be within {sketch.tolerance} of each other from round {first} on instead of round {now}"
            )
        case "more-voices":
            voices, now = (amount(round(one.voices, 1)) for one in (after, before))
            return f"The result would be carried as if by {voices} equal voices instead of {now}"
        case "outside-heard":
            share = sum(after.influence.get(one, 0.0) for one in before.left_out)
            whose = names(before.left_out, sketch.shown_names)
            still = sum(one in after.left_out for one in before.left_out)
            rest = f"; {in_words(still, 'start', 'starts')} would still not count" if still else ""
            return f"{percent(share)} of the long run would come from the starts of {whose} instead of none{rest}"
        case "less-spread":
            return sentence(_spread(sketch, before, after))


def _spread(sketch: Sketch, before: Figures, after: Figures) -> str:
    apart, now = (_distance(sketch, one.spread_at_end) for one in (after, before))
    if apart == now:
        return f"at the plan's end views would still be {now} apart"
    return f"at the plan's end views would be {apart} apart instead of {now}"


def _distance(sketch: Sketch, size: float) -> str:
    """A distance between views; one too small to show is not told as none."""
    text = sketch.number(size)
    tiny = size > ROUNDING * sketch.question.width and text == "0"
    return f"under {sketch.number(10.0 ** -decimals(sketch.question))}" if tiny else text


def outcome(sketch: Sketch, before: Figures, after: Figures) -> str:
    """Mean and vote at the plan's end, before and after."""
    first, now = (with_unit(one.mean_at_end, sketch.question) for one in (after, before))
    mean = f"the mean stays at {now}" if first == now else f"the mean would be {first} instead of {now}"
    if before.vote_at_end is None or after.vote_at_end is None:
        return f"At the plan's end {mean}."
    return f"At the plan's end {mean}; {_votes(before.vote_at_end, after.vote_at_end)}."


def _votes(now: Tally, then: Tally) -> str:
    """Both counts, and whether the vote passes with either."""
    either = "passes" if now.passes else "does not pass"
    if _counts(now) == _counts(then) and now.passes == then.passes:
        return f"the vote stays {_counts(now)} and {either}"
    if now.passes == then.passes:
        return f"the vote would be {_counts(then)} instead of {_counts(now)} and {either} either way"
    would, is_now = ("pass", "does not") if then.passes else ("not pass", "passes")
    return f"the vote would {would} with {_counts(then)}; as it stands it {is_now} with {_counts(now)}"


def _counts(tally: Tally) -> str:
    counts = f"{amount(tally.in_favour)} for, {amount(tally.against)} against"
    if tally.abstain:
        counts += f", {amount(tally.abstain)} abstaining"
    return f"{counts}, {amount(tally.objecting)} objecting" if tally.objecting else counts


def asks(effort: Effort) -> str:
    """What the change asks of people."""
    parts = []
    if effort.people:
        parts.append(in_words(effort.people, "person does something new", "people do something new"))
    if effort.points >= 0.05:
        parts.append(f"{count(round(effort.points, 1), 'point moves', 'points move')}")
    if effort.rounds > 0:
        parts.append(f"{in_words(effort.rounds, 'round more', 'rounds more')}")
    text = ", ".join(parts) or "Only the order changes"
    return f"{sentence(text)}."


def concerned(suggestion: Suggestion) -> tuple[str, ...]:
    """The people whom the change names, each once."""
    match suggestion:
        case Introduce(listener, source):
            found = [listener, source]
        case Introductions(arrows):
            found = [one for pair in arrows for one in pair]
        case MovePoints(listener, away, to):
            found = [listener, away, to]
        case KeepOwnView(people) | GoBetween(people):
            found = list(people)
        case SpeakFirst(speakers):
            found = list(speakers)
        case PairTalks(pairs):
            found = [one for pair in pairs for one in pair]
        case MixedTables(tables):
            found = [one for table in tables for one in table]
        case _:
            found = []
    return tuple(dict.fromkeys(found))


def arrows_of(suggestion: Suggestion) -> tuple[tuple[str, str], ...]:
    """The arrows (listener, source) that the change names."""
    match suggestion:
        case Introduce(listener, source):
            return ((listener, source),)
        case Introductions(arrows):
            return arrows
        case MovePoints(listener, away, to):
            return tuple((listener, one) for one in (away, to) if one != listener)
        case PairTalks(pairs):
            return tuple(arrow for one, other in pairs for arrow in ((one, other), (other, one)))
        case _:
            return ()
