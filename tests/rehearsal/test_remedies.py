"""Remedies: minimal where they claim to be, recomputed exactly, ranked, neutral, stoppable."""

from __future__ import annotations

import json
from itertools import combinations

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from meetings import IDS, meeting, meetings

from deliberate.errors import DeliberateError
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.remedies import AIMS, aims_here, best_for_each_aim, remedies
from deliberate.rehearsal.remedies.aims import ALL_OR_NOTHING
from deliberate.rehearsal.remedies.figures import Effort, effort, figures, price, sketch_for
from deliberate.rehearsal.remedies.grounds import Grounds
from deliberate.rehearsal.remedies.report import NOTHING_ASKED, remedies_summary, remedies_to_json
from deliberate.rehearsal.results import (
    GoBetween,
    GoRounds,
    Introduce,
    KeepOwnView,
    MixedTables,
    MovePoints,
    ReorderStages,
    SpeakFirst,
)
from deliberate.rehearsal.suggestions import apply
from deliberate.scenario import edits
from deliberate.scenario.values import Person, Plan, Stage, Variant

NOW = "As it stands"
CIRCLES = meeting(
    [[40, 60, 0, 0], [60, 40, 0, 0], [0, 0, 40, 60], [0, 0, 60, 40]],
    [80, 90, 20, 10],
    plan=Plan((Stage("Plenary", 6),)),
)
SWING = meeting([[0, 0, 1, 1], [0, 0, 1, 1], [1, 1, 0, 0], [1, 1, 0, 0]], [90, 80, 20, 10])
HUB = meeting(
    [[94, 2, 2, 2], [60, 30, 5, 5], [60, 5, 30, 5], [60, 5, 5, 30]],
    [90, 10, 20, 30],
    plan=Plan((Stage("Plenary", 6),)),
)


def test_any_own_view_ends_a_swing():
    found = remedies(SWING, None, None, "end-swing")
    assert found[0].suggestion == KeepOwnView(("a", "b", "c", "d"), 20.0)
    assert found[0].before.swings
    for remedy in found:
        tried = apply(SWING, NOW, remedy.suggestion)
        assert rehearse(tried, tried.variants[1].name).settles_from_any_start
    assert not rehearse(SWING).settles_from_any_start


@settings(max_examples=40)
@given(meetings(6))
def test_sides_are_all_who_take_part(scenario):
    grounds = Grounds(sketch_for(scenario, NOW, "q"))
    if len(grounds.sketch.here):
        assert sorted(np.concatenate(grounds.sides).tolist()) == grounds.sketch.here.tolist()


def test_two_swings_are_both_ended():
    two = meeting([[0, 1, 0, 0], [1, 0, 0, 0], [0, 0, 0, 1], [0, 0, 1, 0]], [90, 80, 20, 10])
    found = remedies(two, None, None, "end-swing")
    assert found
    assert all(not remedy.after.swings for remedy in found)
    own = next(remedy.suggestion for remedy in found if isinstance(remedy.suggestion, KeepOwnView))
    assert {"a", "b"} & set(own.people)
    assert {"c", "d"} & set(own.people)


# Aims and ranking


def test_aims_are_those_that_the_figures_ask_for():
    assert aims_here(CIRCLES) == ("common-view", "less-spread")
    assert aims_here(SWING) == ("end-swing", "less-spread")
    assert aims_here(HUB) == ("more-voices",)
    calm = meeting([[40, 30, 30], [30, 40, 30], [30, 30, 40]], [40, 50, 60])
    assert aims_here(calm) == ()
    assert best_for_each_aim(calm) == {}


def test_no_aim_is_an_outcome():
    assert set(AIMS) == {"common-view", "end-swing", "sooner", "more-voices", "outside-heard", "less-spread"}
    with pytest.raises(DeliberateError, match='there is no "pass"; the aims are common-view'):
        remedies(CIRCLES, None, None, "pass")


def test_turning_the_scale_round_changes_no_remedy():
    """Neutral: with every start mirrored the same changes come in the same order, and the vote turns with them."""
    mirrored = edits.set_beliefs(
        HUB, {one.id: 100 - one.beliefs["q"] for one in HUB.variants[0].people}, "q", variant=NOW
    )
    for aim in AIMS:
        one, other = remedies(HUB, None, None, aim), remedies(mirrored, None, None, aim)
        assert [remedy.suggestion for remedy in one] == [remedy.suggestion for remedy in other]
        assert [remedy.worth for remedy in one] == pytest.approx([remedy.worth for remedy in other])


def test_the_best_comes_first_and_each_kind_once():
    found = remedies(HUB, None, None, "more-voices")
    around = next(remedy for remedy in found if isinstance(remedy.suggestion, GoRounds))
    assert around.after.voices == pytest.approx(4)
    worth = [remedy.worth for remedy in found]
    assert worth == sorted(worth, reverse=True)
    assert len({type(remedy.suggestion) for remedy in found}) == len(found)
    assert any(isinstance(remedy.suggestion, SpeakFirst) for remedy in found)


def test_moving_points_is_found_by_closed_form_and_is_the_best_move():
    """The best single move of ten points in the hub's rows, tried out one by one."""
    grounds = Grounds(sketch_for(HUB, NOW, "q"))
    moves = list(grounds.moves(grounds.pull_on_influence()))
    voices = {}
    for listener in IDS[:4]:
        points = edits.points_of(HUB.variants[0], listener)
        for away in points:
            for to in points:
                if away != to and points[away] > 10:
                    tried = apply(HUB, NOW, MovePoints(listener, away, to, 10.0))
                    after = figures(sketch_for(tried, tried.variants[1].name, "q"))
                    voices[listener, away, to] = after.voices
    best = max(voices.values())
    assert voices[moves[0].listener, moves[0].away, moves[0].to] == pytest.approx(best)


def test_an_introduction_found_by_closed_form_narrows_the_spread_most_for_its_listener():
    line = meeting(
        [[50, 50, 0, 0], [30, 40, 30, 0], [0, 30, 40, 30], [0, 0, 50, 50]],
        [90, 60, 40, 10],
        plan=Plan((Stage(rounds=3),)),
    )
    grounds = Grounds(sketch_for(line, NOW, "q"))
    chosen = next(grounds.introductions(grounds.pull_on_spread()))
    spreads = {}
    for listener, source in combinations(IDS[:4], 2):
        for pair in ((listener, source), (source, listener)):
            if pair[1] not in edits.points_of(line.variants[0], pair[0]):
                tried = apply(line, NOW, Introduce(*pair, 10.0))
                spreads[pair] = rehearse(tried, tried.variants[1].name).spread[-1]
    mine = spreads[chosen.listener, chosen.source]
    assert mine == min(spread for (listener, _), spread in spreads.items() if listener == chosen.listener)
    assert mine < rehearse(line).spread[-1]


@given(st.integers(0, 10_000), st.booleans())
@settings(max_examples=30)
def test_what_slows_the_pace_is_its_derivative(seed, firm):
    """The closed form for the pace against a small move of points."""
    random = np.random.default_rng(seed)
    points = random.uniform(5, 20, (4, 4)) + 20 * np.eye(4)
    scenario = meeting((100 * points / points.sum(axis=1, keepdims=True)).tolist(), [10, 40, 60, 90])
    if firm:
        scenario = edits.set_firmness(scenario, "b", 0.3, variant=NOW)
    firmness = np.array([person.firmness for person in scenario.variants[0].people])
    kept = (1 - firmness)[:, None] * points / points.sum(axis=1, keepdims=True)
    moduli = np.sort(np.abs(np.linalg.eigvals(kept)))[::-1][0 if firm else 1 :]
    assume(moduli[0] - moduli[1] > 0.02)  # where two parts are equally slow there is no derivative
    pull = Grounds(sketch_for(scenario, NOW, "q")).pull_on_pace()
    step = 1e-4
    rates = []
    for sign in (1, -1):
        moved = dict(edits.points_of(scenario.variants[0], "a"))
        moved["c"] += sign * 100 * step
        moved["d"] -= sign * 100 * step
        rates.append(rehearse(edits.give_points(scenario, "a", moved, variant=NOW)).rate)
    assert pull[0, 2] - pull[0, 3] == pytest.approx((rates[0] - rates[1]) / (2 * step), abs=1e-3)


def test_leaving_people_out_is_said_and_costs():
    one_way = next(
        remedy for remedy in remedies(CIRCLES, None, None, "common-view") if isinstance(remedy.suggestion, Introduce)
    )
    assert "would no longer count in the end" in one_way.does
    assert len(one_way.after.left_out) == 2
    assert one_way.worth < one_way.way - 0.1


def test_people_outside_are_heard_again():
    outside = meeting([[60, 40, 0], [40, 60, 0], [30, 30, 40]], [80, 70, 10], plan=Plan((Stage("Plenary", 6),)))
    assert "outside-heard" in aims_here(outside)
    for remedy in remedies(outside, None, None, "outside-heard"):
        assert remedy.before.left_out == ("c",)
        assert remedy.after.influence["c"] > 0
        assert "of the long run would come from the starts of c instead of none" in remedy.does


def test_effort_counts_points_people_and_rounds():
    def asked(suggestion) -> Effort:
        tried = apply(CIRCLES, NOW, suggestion)
        return effort(tried.variants[0], tried.variants[1], suggestion)

    assert asked(Introduce("a", "c", 10)) == Effort(pytest.approx(10), 1, 0)
    assert asked(MovePoints("a", "a", "b", 10)) == Effort(pytest.approx(10), 1, 0)
    assert asked(GoBetween(("a", "c"), 10)) == Effort(pytest.approx(20), 3, 0)
    assert asked(MixedTables((("a", "c"), ("b", "d")), 2, 10)) == Effort(pytest.approx(40), 4, 0)
    assert asked(MixedTables((("a", "c"), ("b", "d")), 9, 10)).rounds == 4
    assert price(Effort(0, 0, 0), 4, 6) == 0
    assert price(Effort(200, 4, 6), 4, 6) == pytest.approx(1)


def test_own_meetings_come_before_the_plenary():
    """With the circles' own meetings last, they part for ever; the other order costs nothing and mends it."""
    tables = Stage("Own meetings", 3, "tables", "rescale", tables=(("a", "b"), ("c", "d")))
    parted = meeting([[40, 40, 20, 0], [40, 40, 0, 20], [20, 0, 40, 40], [0, 20, 40, 40]], [90, 80, 20, 10])
    parted = edits.set_plan(parted, Plan((Stage("Plenary", 3), tables)), variant=NOW)
    found = remedies(parted, None, None, "common-view")
    order = next(remedy for remedy in found if isinstance(remedy.suggestion, ReorderStages))
    assert order.suggestion == ReorderStages((1, 0))
    assert order.effort == Effort(0, 0, 0)
    assert order.asks == "Only the order changes."
    assert order.does.endswith("from any start; at the plan's end views would still be 15.1 apart.")
    assert order.says == "Take the stages in another order: Own meetings and Plenary"


def test_with_a_hearing_range_a_go_between_brings_camps_together():
    far = edits.change_question(
        meeting([[25, 25, 25, 25]] * 4, [10, 20, 60, 70], plan=Plan((Stage("Plenary", 8),))), "q", hearing_range=35
    )
    assert aims_here(far) == ("common-view", "less-spread")
    found = remedies(far, None, None, "common-view")
    assert [type(remedy.suggestion) for remedy in found] == [GoBetween]
    assert "any start" not in found[0].does


def test_firm_starts_leave_nothing_to_arrange_for_a_common_view():
    firm = edits.set_firmness(CIRCLES, IDS[:4], 0.3, variant=NOW)
    assert "common-view" not in aims_here(firm)
    assert remedies(firm, None, None, "common-view") == ()


# The rest


@settings(max_examples=25)
@given(meetings(5))
def test_any_meeting_can_be_asked_for_any_aim(scenario):
    for aim in AIMS:
        for remedy in remedies(scenario, None, None, aim):
            tried = apply(scenario, NOW, remedy.suggestion)
            sketch = sketch_for(tried, tried.variants[1].name, "q")
            assert vars(figures(sketch)) == vars(remedy.after)
            assert remedy.way > 0 or aim in ALL_OR_NOTHING
    told = best_for_each_aim(scenario)
    json.dumps(remedies_to_json(scenario, None, None, told), allow_nan=False)
    assert max(map(len, remedies_summary(scenario, None, None, told).splitlines())) < 80


def test_it_can_be_watched_and_stopped():
    parts: list[float] = []
    whole = remedies(CIRCLES, None, None, "less-spread", progress=parts.append)
    assert parts == sorted(set(parts))
    assert (parts[0], parts[-1]) == (0, 1)
    looks = iter([False] * 4 + [True] * 2)
    part = remedies(CIRCLES, None, None, "less-spread", stopped=lambda: next(looks))
    assert len(part) < len(whole)


@pytest.mark.parametrize("present", [0, 1])
def test_where_nobody_talks_with_anybody_no_aim_asks_for_a_change(present):
    absent = [person.id for person in CIRCLES.variants[0].people[present:]]
    quiet = edits.set_presence(CIRCLES, absent, False, variant=NOW)
    assert aims_here(quiet) == ()
    assert NOTHING_ASKED in remedies_summary(quiet, None, None, best_for_each_aim(quiet))


def test_it_is_the_same_every_time():
    one, other = (remedies(HUB, None, None, "less-spread") for _ in range(2))
    assert [(remedy.suggestion, remedy.worth) for remedy in one] == [
        (remedy.suggestion, remedy.worth) for remedy in other
    ]


def test_the_scenario_and_other_variants_are_left_alone():
    more = edits.add_variant(CIRCLES, copy_of=NOW, name="Other")
    more = edits.add_arrow(more, "a", "c", 10, variant="Other")
    now, other = remedies(more, NOW, "q", "common-view"), remedies(more, "Other", "q", "common-view")
    assert [remedy.suggestion for remedy in now] == [
        remedy.suggestion for remedy in remedies(CIRCLES, None, None, "common-view")
    ]
    assert other == ()


def test_words_and_json():
    text = remedies_summary(CIRCLES, None, None, best_for_each_aim(CIRCLES))
    assert "Aim: reach a common view from any start\nAim: less spread at the plan's end\n  1. " in text
    assert " ".join(text.lower().split()).count("at the plan's end views would be") == 1  # once for both aims
    assert text.endswith("A sketch, not a forecast of people.\n")
    told = json.loads(json.dumps(remedies_to_json(CIRCLES, None, None, best_for_each_aim(CIRCLES))))
    assert (told["format"], told["version"], told["variant"], told["question"]) == (
        "deliberate-remedies",
        1,
        NOW,
        "q",
    )
    assert [one["aim"] for one in told["aims"]] == ["common-view", "less-spread"]
    best = told["aims"][0]["remedies"][0]
    assert best["before"]["closed_groups"] == 2
    assert best["after"]["closed_groups"] == 1
    assert "-" in best["change"]["kind"]
    calm = meeting([[50, 50], [50, 50]], [40, 50])
    assert NOTHING_ASKED in remedies_summary(calm, None, None, best_for_each_aim(calm))
    assert "do not ask for it" in remedies_summary(calm, None, None, {"end-swing": ()})


def test_nobody_present():
    absent = edits.set_presence(CIRCLES, IDS[:4], False, variant=NOW)
    assert all(remedies(absent, None, None, aim) == () for aim in AIMS)
    assert all(remedies(meeting([], []), None, None, aim) == () for aim in AIMS)


def test_crowds_are_refused_in_words():
    people = tuple(Person(f"p{at}") for at in range(1_001))
    crowd = edits.replace_variant(CIRCLES, NOW, Variant(NOW, people))
    with pytest.raises(DeliberateError, match="among up to 1,000 people, there are 1,001"):
        remedies(crowd, None, None, "sooner")
