"""A seating in plain words."""

from __future__ import annotations

from typing import Literal

from deliberate.rehearsal.seating.wish import Seating, Wish
from deliberate.rehearsal.words import amount, count, in_words, listing, names, number, sentence
from deliberate.scenario.values import Question, Variant

GOALS = {
    "less-spread": "Bring views closer by the plan's end",
    "more-voices": "Let more starts count by the plan's end",
}
ALIKE = 1e-9  # of the scale's width: a spread that is called 0
TIMES = {1: "once", 2: "twice"}


def condition_words(
    kind: Literal["together", "apart", "role", "linked"], about: tuple[str, ...] | str, variant: Variant
) -> str:
    """A condition as part of a sentence: "Amina and Jun at one table"."""
    match kind, about:
        case "together", tuple():
            return f"{names(about, variant)} at one table"
        case "apart", tuple():
            return f"{names(about, variant)} never at one table"
        case "role", str():
            return f'somebody with the role "{about}" at every table'
    return "everybody hears or is heard at their table"


def summary(seating: Seating, question: Question) -> str:
    """What the seating does, beside the plan as it is and beside seatings at random: one sentence."""
    wish = seating.wish
    laid = f"{in_words(wish.rotations, 'rotation', 'rotations')} at {_tables(seating)}"
    result, told = ("views are", " apart") if wish.goal == "less-spread" else ("the average is carried as if by", "")
    after = figure_words(seating.after, wish, question)
    before, mean, best = (
        figure_in_short(value, wish, question) for value in (seating.before, seating.random_mean, seating.random_best)
    )
    if changes_nothing(seating, question):
        return (
            f"Who sits with whom changes nothing that shows: however people are seated in {laid}, {result} "
            f"{after}{told} at the plan's end, and {before} by the plan as it is."
        )
    draws = f"{seating.random_count:,} seatings at random" if seating.random_count > 1 else "one seating at random"
    return (
        f"With {laid} {result} {after}{told} at the plan's end, instead of {before} by the plan as it is; "
        f"with {draws} it is {mean} on average and {best} at best."
    )


def changes_nothing(seating: Seating, question: Question) -> bool:
    """Whether the figure for the best seating reads like that for one at random."""
    best, random = (figure_in_short(one, seating.wish, question) for one in (seating.after, seating.random_mean))
    return best == random


def figure_words(value: float, wish: Wish, question: Question) -> str:
    """A spread with its unit, or a number of equal voices."""
    short = figure_in_short(value, wish, question)
    if wish.goal == "more-voices":
        return f"{short} equal voices"
    return f"{short} {question.unit}" if question.unit else short


def figure_in_short(value: float, wish: Wish, question: Question) -> str:
    """The bare number, a spread never rounded down to 0."""
    if wish.goal == "more-voices":
        return f"{value:.1f}"
    return number(value, question, beside=0.0 if value > ALIKE * question.width else value)


def standing(seating: Seating) -> str:
    """How far the search can vouch for it: one sentence."""
    if seating.every is not None:
        if seating.every == 1:
            return "No seating does more: there is one way only to seat everybody."
        return f"No seating does more: all {amount(seating.every)} ways to seat everybody were looked at."
    if not seating.finished:
        return "The search was stopped; this is the best seating so far."
    starts = count(seating.starts, "start", "starts")
    if seating.as_good > 1:
        return f"The best of {starts}, {seating.as_good} of which came equally far; a better one may exist."
    return f"The best of {starts}; a better one may exist."


def company(seating: Seating) -> str:
    """How many others people come to sit with: one sentence."""
    met: dict[str, set[str]] = {}
    for tables in seating.rotations:
        for table in tables:
            for one in table:
                met.setdefault(one, set()).update(other for other in table if other != one)
    mean = sum(map(len, met.values())) / len(met)
    together = "In all, everybody" if len(seating.rotations) > 1 else "Everybody"
    return f"{together} sits with {mean:.2g} of {len(met) - 1} others on average."


def cautions(seating: Seating, variant: Variant) -> tuple[str, ...]:
    """What a facilitator should know before she lays the tables; a sentence each."""
    told = []
    if seating.apart_groups > 1:
        groups = in_words(seating.apart_groups, "group", "groups")
        told.append(
            f"The sketch falls into {groups} without an arrow between them. Sitting at one table lets arrows count "
            "but draws none: draw who would begin to hear whom, or views of different groups do not mix."
        )
    alone = list(dict.fromkeys(one for there in seating.hear_nobody for one in there))
    if alone:
        hears = "hears" if len(alone) == 1 else "hear"
        told.append(f"{names(alone, variant)} {hears} nobody at the table in at least one rotation.")
    if len(seating.rotations) > 1 and len(set(seating.rotations)) == 1:
        told.append("The tables are the same each time: in this sketch seating people anew gains nothing.")
    return tuple(told)


def stage_names(seating: Seating) -> tuple[str, ...]:
    """What each rotation is called: "Mixed tables 1"."""
    if len(seating.rotations) == 1:
        return ("Mixed tables",)
    return tuple(f"Mixed tables {number}" for number in range(1, len(seating.rotations) + 1))


def table_names(seating: Seating) -> tuple[str, ...]:
    """What each table is called on paper."""
    return tuple(f"Table {number}" for number in range(1, len(seating.rotations[0]) + 1))


def variant_name(seating: Seating) -> str:
    """How the variant with these tables is called: "Five tables, twice mixed"."""
    times = seating.wish.rotations
    return f"{sentence(_tables(seating))}, {TIMES.get(times, f'{times} times')} mixed"


def _tables(seating: Seating) -> str:
    return in_words(len(seating.rotations[0]), "table", "tables")


def conditions_listed(wish: Wish, variant: Variant) -> str:
    """All conditions of a wish in one line; empty where there is none."""
    parts = [condition_words("together", pair, variant) for pair in wish.together]
    parts += [condition_words("apart", pair, variant) for pair in wish.apart]
    parts += [condition_words("role", role, variant) for role in wish.roles]
    if wish.linked:
        parts.append(condition_words("linked", "", variant))
    return sentence(listing(parts))
