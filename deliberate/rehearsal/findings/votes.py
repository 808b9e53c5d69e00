"""The vote that the sketch gives under the body's own rule: vote, quorum."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from msgspec.structs import replace

from deliberate.rehearsal.findings.sketch import Indices, Mask, Sketch, is_are, round_name, since
from deliberate.rehearsal.results import Finding, Tally
from deliberate.rehearsal.words import amount, count, outcome, sentence, votes
from deliberate.scenario.rules import exact, rule_in_words


def vote(sketch: Sketch) -> Iterator[Finding]:
    """The vote at the plan's end, and when its outcome changes on the way there and after."""
    if sketch.rehearsal.ballot is None or not len(sketch.voters):
        return
    tallies = sketch.rehearsal.ballot[: sketch.end + 1]
    last = tallies[-1]
    sides = _sides(sketch)
    objecting = sides[-1]
    yield Finding(
        kind="vote",
        says=f"By the sketch the vote would be {votes(last)} {sketch.at_end}: it {outcome(last)}.",
        why=_why_vote(sketch, tallies, objecting),
        people=sketch.ids(objecting if len(objecting) else sketch.voters),
        figures={
            "for": last.in_favour,
            "against": last.against,
            "abstain": last.abstain,
            "objecting": last.objecting,
            "passes": float(last.passes),
        }
        | _changes_as_figures(tallies),
        groups=tuple(sketch.ids(side) for side in sides[:3] if len(side)),
    )


def _sides(sketch: Sketch) -> list[Indices]:
    """The voters for, against, abstaining, and objecting, at the plan's end."""
    sides = sketch.electorate.sides(sketch.ends[None, :])
    favour, against, objecting = (sides[side][0] for side in ("for", "against", "objecting"))
    return [sketch.voters[side] for side in (favour, against, ~favour & ~against, objecting)]


def _changes(tallies: tuple[Tally, ...]) -> list[int]:
    """The rounds at which the outcome becomes another."""
    passes = np.array([tally.passes for tally in tallies])
    return (np.flatnonzero(passes[1:] != passes[:-1]) + 1).tolist()


def _changes_as_figures(tallies: tuple[Tally, ...]) -> dict[str, float]:
    changes = _changes(tallies)
    figures: dict[str, float] = {"changes": len(changes)}
    passing = [at for at in changes if tallies[at].passes]
    stopping = [at for at in changes if not tallies[at].passes]
    if passing or tallies[0].passes:
        figures["first_passes"] = 0 if tallies[0].passes else passing[0]
    if stopping:
        figures["first_stops_passing"] = stopping[0]
    return figures


def _why_vote(sketch: Sketch, tallies: tuple[Tally, ...], objecting: Indices) -> str:
    parts = [_history(tallies)]
    limit = sketch.rehearsal.ballot_at_limit
    if limit is not None and limit.passes != tallies[-1].passes:
        parts.append(f"if talk went on it would {'pass' if limit.passes else 'not pass'} in the end")
    if len(objecting):
        mark = sketch.number(sketch.question.objection_mark)
        parts.append(f"{sketch.names(objecting)} {is_are(len(objecting))} below the objection mark of {mark}")
    rule = rule_in_words(replace(sketch.scenario.ballot, quorum=None, casting_vote=None))
    parts.append(f"by the rule it {rule[0].lower()}{rule[1:-1]}")
    return sentence(f"{'; '.join(parts)}.")


def _history(tallies: tuple[Tally, ...]) -> str:
    changes = _changes(tallies)
    verb = {True: "passes", False: "does not pass"}
    before, after = verb[tallies[0].passes], verb[tallies[-1].passes]
    if not changes:
        return f"it {after} at {'every' if tallies[-1].passes else 'any'} point of the plan"
    if len(changes) == 1:
        when = "at the start" if changes[0] == 1 else f"up to {round_name(changes[0] - 1)}"
        return f"it {before} {when} and {after} {since(changes[0])}"
    times = "twice" if len(changes) == 2 else f"{len(changes)} times"
    return f"the outcome changes {times}, the last time at {round_name(changes[-1])}"


def no_quorum(sketch: Sketch) -> Iterator[Finding]:
    """Too few people with a vote are present, so that nothing can pass."""
    seats = _seats(sketch)
    if seats is None or seats.missing <= 0:
        return
    absent = _absent_voters(sketch)
    more = count(seats.missing, "more person", "more people")
    yield Finding(
        kind="quorum",
        says=f"There is no quorum: {more} with a vote would have to be there.",
        why=f"{seats.in_words()}, so nothing can pass; {sketch.names(absent)} {is_are(len(absent))} absent.",
        people=sketch.ids(absent),
        figures=seats.figures(),
    )


def bare_quorum(sketch: Sketch) -> Iterator[Finding]:
    """Just enough people with a vote are present."""
    seats = _seats(sketch)
    if seats is None or seats.missing != 0 or not seats.needed or seats.eligible == 1:
        return
    yield Finding(
        kind="quorum",
        says="The quorum is just met: one more absence would break it.",
        why=f"{seats.in_words()}.",
        people=sketch.ids(sketch.voters),
        figures=seats.figures(),
    )


@dataclass(frozen=True)
class _Seats:
    """People with a vote: how many are present, how many there are, and how many the rule asks for."""

    present: int
    eligible: int
    needed: int

    @property
    def missing(self) -> int:
        return self.needed - self.present

    def in_words(self) -> str:
        present = amount(self.present) if self.present else "none"
        there = f"{present} of {amount(self.eligible)} people with a vote {is_are(self.present)} present"
        if self.eligible == 1:
            there = f"the only person with a vote is {'present' if self.present else 'absent'}"
        return sentence(f"{there} and the rule asks for {amount(self.needed)}")

    def figures(self) -> dict[str, float]:
        return {"present": self.present, "eligible": self.eligible, "needed": self.needed, "missing": self.missing}


def _seats(sketch: Sketch) -> _Seats | None:
    share, electorate = sketch.scenario.ballot.quorum, sketch.electorate
    if electorate is None or share is None:
        return None
    return _Seats(len(sketch.voters), electorate.eligible, math.ceil(exact(share) * electorate.eligible))


def _absent_voters(sketch: Sketch) -> Indices:
    votes: Mask = np.fromiter((person.ballots > 0 for person in sketch.variant.people), bool, len(sketch.present))
    return np.flatnonzero(votes & ~sketch.present)
