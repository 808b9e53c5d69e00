"""What a change of process may aim at. Every aim is about how people hear each other; none is about the outcome."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, get_args

from deliberate.errors import DeliberateError
from deliberate.rehearsal.remedies.figures import Figures
from deliberate.rehearsal.words import listing

Aim = Literal["common-view", "end-swing", "sooner", "more-voices", "outside-heard", "less-spread"]
AIMS: tuple[Aim, ...] = get_args(Aim)

IN_WORDS: dict[Aim, str] = {
    "common-view": "reach a common view from any start",
    "end-swing": "end a swing",
    "sooner": "settle in fewer rounds",
    "more-voices": "more even influence",
    "outside-heard": "people outside heard again",
    "less-spread": "less spread at the plan's end",
}
# A change reaches these or does not; every kind that does is told, whatever it asks.
ALL_OR_NOTHING: tuple[Aim, ...] = ("common-view", "end-swing")
FEW_VOICES = 0.5  # of those present: fewer equal voices than this ask for more
WIDE = 0.1  # of the scale: a larger spread at the plan's end asks for less
LEAST_WAY = 0.1  # a change that goes less of the way is not told


@dataclass(frozen=True)
class Meeting:
    """What the aims need to know of a meeting besides its figures."""

    people: int  # present
    rounds: int  # of the plan
    width: float  # of the scale


def as_aim(name: str) -> Aim:
    """The aim of that name. Raises DeliberateError that says which there are."""
    if name not in AIMS:
        raise DeliberateError(f'there is no "{name}"; the aims are {listing(AIMS)}', "aim")
    return name


def asked_for(aim: Aim, now: Figures, meeting: Meeting) -> bool:
    """Whether the figures as they are ask for this aim; none is asked for where nobody has anybody to talk with."""
    if meeting.people < 2:
        return False
    match aim:
        case "common-view":
            return not now.common_view and not now.swings and now.firm < 2
        case "end-swing":
            return now.swings
        case "sooner":
            return now.rounds_to_agree is not None and now.rounds_to_agree > meeting.rounds
        case "more-voices":
            return now.voices < FEW_VOICES * meeting.people
        case "outside-heard":
            return bool(now.left_out)
        case "less-spread":
            return now.spread_at_end > WIDE * meeting.width


def reached(aim: Aim, before: Figures, after: Figures) -> bool:
    """Whether a change serves the aim at all."""
    match aim:
        case "common-view":
            return after.common_view and not before.common_view
        case "end-swing":
            return before.swings and not after.swings
        case "sooner":
            return _way_to_agreeing(before, after) > LEAST_WAY
        case "more-voices":
            return after.voices - before.voices > LEAST_WAY * len(before.influence)
        case "outside-heard":
            return bool(before.left_out) and way(aim, before, after) > LEAST_WAY
        case _:
            return way(aim, before, after) > LEAST_WAY


def way(aim: Aim, before: Figures, after: Figures) -> float:
    """How much of the way to the aim a change goes, at most 1."""
    match aim:
        case "common-view" | "less-spread":
            return _closed(before.spread_at_end, after.spread_at_end)
        case "end-swing":
            return _closed(before.still_moving, after.still_moving)
        case "sooner":
            return _way_to_agreeing(before, after)
        case "more-voices":
            missing = len(before.influence) - before.voices
            return min((after.voices - before.voices) / missing, 1.0) if missing > 1e-9 else 0.0
        case "outside-heard":
            share = sum(after.influence.get(person, 0.0) for person in before.left_out)
            equal = len(before.left_out) / max(len(before.influence), 1)
            return min(share / equal, 1.0) if equal else 0.0


def _closed(before: float, after: float) -> float:
    return 1 - after / before if before > 0 else 0.0


def _way_to_agreeing(before: Figures, after: Figures) -> float:
    if not before.rounds_to_agree or after.rounds_to_agree is None:
        return 0.0
    return 1 - after.rounds_to_agree / before.rounds_to_agree
