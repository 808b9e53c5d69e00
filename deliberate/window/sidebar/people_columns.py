"""The columns of the table of people: what each shows, sorts by, and does with what is typed. Free of Qt."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from enum import IntEnum

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import amount, number
from deliberate.scenario import edits
from deliberate.scenario.values import Person, Question, Scenario
from deliberate.window.sidebar.numbers import hundredths, plain, typed_number

UNKNOWN = "?"
YES, NO = "yes", "no"
_YES = {YES, "y", "1", "x", "true", "here"}
_NO = {NO, "n", "0", "", "-", "false", "absent"}
Change = Callable[[Scenario], Scenario]


class Column(IntEnum):
    """The columns, left to right."""

    NAME = 0
    START = 1
    NOW = 2
    MARGIN = 3
    FIRMNESS = 4
    OWN = 5
    BALLOTS = 6
    PRESENT = 7
    ROLE = 8


@dataclass(frozen=True)
class Heading:
    """What stands over a column, what it means, what an edit of it is called, and the widest usual cell."""

    short: str
    meaning: str
    step: str
    sample: str


HEADINGS = {
    Column.NAME: Heading("Name", "Name of the person", "Rename", ""),
    Column.START: Heading(
        "starts", "Starting belief, on the question's scale; empty when it is not known", "Set the starting belief",
        "100.0",
    ),
    Column.NOW: Heading("now", "Belief at the round shown", "", "100.0"),
    Column.MARGIN: Heading(
        "±", "How far off the starting belief may be, on the question's scale", "Set the margin", "10.5"
    ),
    Column.FIRMNESS: Heading(
        "firm", "How much of the starting belief comes back in every round, in hundredths", "Set the firmness", "100"
    ),
    Column.OWN: Heading("own", "Points of 100 for the own view", "Set the own points", "33.3"),
    Column.BALLOTS: Heading("votes", "Votes cast; 0 attends without a vote", "Set the votes", "2.5"),
    Column.PRESENT: Heading(
        "here", "Present; who is not neither hears, is heard, nor votes", "Change the presence", ""
    ),
    Column.ROLE: Heading("role", "Part in the meeting: chair, observer", "Set the role", "observer"),
}  # fmt: skip


@dataclass(frozen=True)
class Row:
    """One person with what is known about her elsewhere: own points of 100, and the belief at the round shown."""

    person: Person
    own: float
    now: float


def shown(column: Column, row: Row, question: Question) -> str:
    """A cell as it is read."""
    person = row.person
    match column:
        case Column.START:
            belief = person.beliefs.get(question.id)
            return UNKNOWN if belief is None else amount(belief)
        case Column.NOW:
            return number(row.now, question)
        case Column.MARGIN:
            margin = person.margins.get(question.id)
            return "" if margin is None else amount(margin)
        case Column.FIRMNESS:
            return amount(round(person.firmness * 100, 6))
        case Column.OWN:
            return amount(round(row.own, 1))
        case Column.BALLOTS:
            return amount(person.ballots)
    return typed_over(column, row, question)


def typed_over(column: Column, row: Row, question: Question) -> str:
    """A cell as it is typed over and copied: exact, without thousands set off."""
    person = row.person
    match column:
        case Column.NAME:
            return person.shown_name
        case Column.ROLE:
            return person.role
        case Column.START:
            return _maybe(person.beliefs.get(question.id))
        case Column.NOW:
            return plain(row.now)
        case Column.MARGIN:
            return _maybe(person.margins.get(question.id))
        case Column.FIRMNESS:
            return hundredths(person.firmness)
        case Column.OWN:
            return plain(round(row.own, 9))
        case Column.BALLOTS:
            return plain(person.ballots)
        case Column.PRESENT:
            return YES if person.present else NO


def sort_key(column: Column, row: Row, question: Question) -> object:
    """What the column is sorted by; starts that are not known come first."""
    person = row.person
    below = question.low - 1 - abs(question.low)
    match column:
        case Column.NAME:
            return person.shown_name.casefold()
        case Column.ROLE:
            return person.role.casefold()
        case Column.START:
            return person.beliefs.get(question.id, below)
        case Column.NOW:
            return row.now
        case Column.MARGIN:
            return person.margins.get(question.id, -1.0)
        case Column.FIRMNESS:
            return person.firmness
        case Column.OWN:
            return row.own
        case Column.BALLOTS:
            return person.ballots
        case Column.PRESENT:
            return int(person.present)


def change(column: Column, ids: Sequence[str], text: str, *, question: str, variant: str) -> Change:
    """The edit that gives these people what was typed into a cell of `column`.

    Raises DeliberateError for what is no number; the edit itself raises for what does not fit.
    """
    empty = text.strip() in ("", UNKNOWN)
    match column:
        case Column.NAME:
            return lambda scenario: edits.rename_person(scenario, ids[0], text)
        case Column.ROLE:
            return lambda scenario: edits.set_role(scenario, ids, text)
        case Column.START:
            start = None if empty else typed_number(text, "a starting belief")
            return lambda scenario: edits.set_belief(scenario, ids, question, start, variant=variant)
        case Column.MARGIN:
            margin = None if empty else typed_number(text, "a margin")
            return lambda scenario: edits.set_margin(scenario, ids, question, margin, variant=variant)
        case Column.FIRMNESS:
            firmness = _firmness(text)
            return lambda scenario: edits.set_firmness(scenario, ids, firmness, variant=variant)
        case Column.OWN:
            points = typed_number(text.strip().removesuffix("%"), "own points")
            return lambda scenario: edits.set_own_points(scenario, ids, points, variant=variant)
        case Column.BALLOTS:
            votes = typed_number(text, "the number of votes")
            return lambda scenario: edits.set_ballots(scenario, ids, votes, variant=variant)
        case Column.PRESENT:
            present = _presence(text)
            return lambda scenario: edits.set_presence(scenario, ids, present, variant=variant)
    raise DeliberateError("what people think at a round follows from where they start and cannot be typed")


def _firmness(text: str) -> float:
    value = typed_number(text.strip().removesuffix("%"), "firmness")
    if not 0 <= value <= 100:
        raise DeliberateError(f"firmness must lie between 0 and 100, is {amount(value)}")
    return float(f"{value / 100:.15g}")


def _presence(text: str) -> bool:
    word = text.strip().casefold()
    if word not in _YES | _NO:
        raise DeliberateError(f"presence must be {YES} or {NO}, is “{text.strip()}”")
    return word in _YES


def _maybe(value: float | None) -> str:
    return "" if value is None else plain(value)
