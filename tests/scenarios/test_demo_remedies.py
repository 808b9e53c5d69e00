"""The program finds the change that each demo's notes speak of, and does what it said, to the digit."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from demo import DEMOS, NOW, load
from plain_rounds import plain_rounds

from deliberate.files import decode, encode
from deliberate.rehearsal.ballots import Electorate
from deliberate.rehearsal.remedies import AIMS, Remedy, aims_here, remedies
from deliberate.rehearsal.remedies.figures import figures, sketch_for
from deliberate.rehearsal.results import (
    EndInPlenary,
    GoBetween,
    GoRounds,
    Introductions,
    KeepOwnView,
    MixedTables,
    PairTalks,
    SpeakFirst,
)
from deliberate.rehearsal.suggestions import apply
from deliberate.rehearsal.words import number

# What the notes say, the aim, and the kinds that come first.
NAMED = {
    "air-sensor-label": [("mixed tables by itself", "common-view", [MixedTables])],
    "canal-house": [("go-rounds first and mixed tables next", "less-spread", [GoRounds, MixedTables])],
    "choir-handbook": [("everybody's own view count, and names mixed", "end-swing", [KeepOwnView, MixedTables])],
    "dock-roster": [("to go-rounds by itself", "more-voices", [GoRounds])],
    "ferry-timetable": [("too lets everybody's own view count", "end-swing", [KeepOwnView])],
    "festival-route": [("a go-between and nothing else", "common-view", [GoBetween])],
    "mountain-path": [("lets the five speak first", "outside-heard", [SpeakFirst])],
    "night-market": [("a plenary at the end and mixed tables", "less-spread", [EndInPlenary, MixedTables])],
    "open-ground": [
        ("to mixed tables by itself", "less-spread", [MixedTables]),
        ("to a plenary at the end", "common-view", [EndInPlenary]),
    ],
    "reservoir-board": [("go-rounds first and to the chair heard last", "more-voices", [GoRounds, SpeakFirst])],
    "riverbank-panel": [("lets the residents speak first", "outside-heard", [SpeakFirst])],
    "seabed-survey": [("to talks of Vilhelm with each of the others", "sooner", [PairTalks])],
    "two-clinics": [("to talks in pairs by itself", "sooner", [PairTalks])],
}
NO_AIM = ("fever-guideline", "school-kitchen")


@cache
def found(slug: str, aim: str) -> tuple[Remedy, ...]:
    return remedies(load(slug), NOW, None, aim)


def test_every_demo_is_spoken_of():
    assert set(DEMOS) == {*NAMED, *NO_AIM}


@pytest.mark.parametrize("slug", NAMED)
def test_the_program_finds_what_the_notes_say(slug):
    for phrase, aim, kinds in NAMED[slug]:
        assert phrase in load(slug).notes
        assert [type(remedy.suggestion) for remedy in found(slug, aim)[: len(kinds)]] == kinds


def test_people_are_those_whom_the_notes_name():
    assert len(found("festival-route", "common-view")) == 1
    assert len(found("choir-handbook", "end-swing")[0].suggestion.people) == 6
    assert len(found("ferry-timetable", "end-swing")[0].suggestion.people) == 6
    path = found("mountain-path", "outside-heard")
    five = [person.id for person in load("mountain-path").variants[0].people if person.name != "Ioan"]
    assert list(path[0].suggestion.speakers) == five
    heard = next(one.suggestion for one in path if isinstance(one.suggestion, Introductions))
    assert heard.arrows == tuple(("ioan", one) for one in five)
    residents = [person.id for person in load("riverbank-panel").variants[0].people][4:]
    assert sorted(found("riverbank-panel", "outside-heard")[0].suggestion.speakers) == sorted(residents)
    assert {pair[0] for pair in found("seabed-survey", "sooner")[0].suggestion.pairs} == {"vilhelm"}
    assert "ngozi" not in found("reservoir-board", "more-voices")[1].suggestion.speakers
    clinics = [person.id for person in load("two-clinics").variants[0].people]
    for one, other in found("two-clinics", "sooner")[0].suggestion.pairs:
        assert (clinics.index(one) < 5) != (clinics.index(other) < 5)


@pytest.mark.parametrize("slug", NO_AIM)
def test_no_aim_where_the_notes_say_so(slug):
    assert aims_here(load(slug)) == ()
    assert "No aim of the program asks for a change" in load(slug).notes


@pytest.mark.parametrize("slug", NAMED)
def test_mixed_tables_seat_every_side_alike(slug):
    scenario = load(slug)
    groups = sketch_for(scenario, NOW, scenario.questions[0].id).closed
    for aim in aims_here(scenario):
        for remedy in found(slug, aim):
            if isinstance(remedy.suggestion, MixedTables) and len(groups) > 1:
                people = [person.id for person in scenario.variants[0].people]
                side = {people[at]: number for number, group in enumerate(groups) for at in group}
                counts = [[side.get(one) for one in table] for table in remedy.suggestion.tables]
                assert all(max(map(row.count, row)) <= -(-len(row) // len(groups)) for row in counts)


@pytest.mark.parametrize("slug", DEMOS)
def test_trying_it_gives_what_was_said(slug):
    scenario = load(slug)
    question = scenario.questions[0]
    for aim in aims_here(scenario):
        for remedy in found(slug, aim):
            saved = decode(encode(apply(scenario, NOW, remedy.suggestion)))
            tried = saved.variants[1]
            sketch = sketch_for(saved, tried.name, question.id)
            assert vars(figures(sketch)) == vars(remedy.after)
            played = plain_rounds(saved, tried.name, question.id, tried.plan.rounds)[-1]
            present = np.array([person.present for person in tried.people])
            spread, mean = float(np.ptp(played[present])), float(played[present].mean())
            assert remedy.after.spread_at_end == pytest.approx(spread, abs=1e-9)
            assert remedy.after.mean_at_end == pytest.approx(mean, abs=1e-9)
            assert f"mean would be {number(mean, question)}" in remedy.outcome or (
                f"mean stays at {number(mean, question)}" in remedy.outcome
            )
            if question.pass_mark is not None:
                (vote,) = Electorate(question, saved.ballot, tried.people).tally(played[None, :])
                assert remedy.after.vote_at_end == vote
            if aim in ("common-view", "less-spread"):
                shown = number(spread, question)
                assert f"views would be {shown} apart" in remedy.does or (shown == "0" and "under 0." in remedy.does)


@pytest.mark.parametrize("slug", DEMOS)
def test_what_is_said_describes_arrangements(slug):
    for aim in AIMS:
        for remedy in found(slug, aim):
            text = " ".join((remedy.says, remedy.does, remedy.asks, remedy.outcome)).lower()
            assert not {"stubborn", "blocker", "weak", "forecast", "win", "convince"} & set(text.split())
            assert remedy.does.endswith(".")
            assert remedy.outcome.endswith(".")
            assert remedy.way > 0
