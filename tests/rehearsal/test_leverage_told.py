"""Leverage of a meeting: what each lever says is what a rehearsal with that change gives."""

from __future__ import annotations

import json
import math

import numpy as np
import pytest
from hypothesis import assume, given, settings
from meetings import IDS, meeting, meetings
from msgspec.structs import replace

from deliberate.errors import DeliberateError
from deliberate.rehearsal.leverage import Lever, leverage, step_of
from deliberate.rehearsal.leverage_report import leverage_summary, leverage_to_json
from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario import edits
from deliberate.scenario.values import Arrow, Person, Plan, Question, Scenario, Stage, Variant

NOW = "As it stands"
HUB = meeting(
    [[80, 10, 10], [50, 30, 20], [50, 10, 40]],
    [80, 30, 20],
    plan=Plan((Stage("Plenary", 4),)),
    people={"a": {"name": "Amina"}, "b": {"name": "Jun"}},
)


def results(scenario: Scenario) -> tuple[float, float]:
    """The mean of those present at the plan's end and in the long run."""
    rehearsal = rehearse(scenario)
    present = [person.present for person in scenario.variants[0].people]
    return float(rehearsal.rounds[-1][present].mean()), float(rehearsal.long_run_average[present].mean())


def widened(scenario: Scenario) -> Scenario:
    """With room on the scale for every start to be 10 higher."""
    return replace(scenario, questions=(replace(scenario.questions[0], high=110.0),))


def with_change(scenario: Scenario, lever: Lever) -> Scenario:
    """The meeting in which the lever's change is made by hand."""
    variant, person = scenario.variants[0], lever.people[0]
    points = dict(edits.points_of(variant, person))
    before = next(one for one in variant.people if one.id == person)
    match lever.kind:
        case "start":
            belief = before.beliefs["q"] + lever.amount
            return edits.set_belief(scenario, person, "q", belief, variant=NOW)
        case "firmness":
            return edits.set_firmness(scenario, person, before.firmness + lever.amount / 100, variant=NOW)
        case "own-view":
            return edits.set_own_points(scenario, person, points[person] + lever.amount, variant=NOW)
        case "move":
            to, away = lever.says.split(" of 100 points to ")[1].split(",")[0].split(" instead of ")
            named = {one.shown_name: one.id for one in variant.people} | {"the own view": person}
            points[named[to]] = points.get(named[to], 0) + lever.amount
            points[named[away]] -= lever.amount
            return edits.give_points(scenario, person, points, variant=NOW)


@settings(max_examples=60)
@given(meetings(5))
def test_every_lever_is_what_a_rehearsal_with_it_gives(scenario):
    variant = scenario.variants[0]
    assume(any(person.present for person in variant.people))
    unknown = [person.id for person in variant.people if "q" not in person.beliefs]
    scenario = edits.set_belief(scenario, unknown, "q", 50, variant=NOW)
    scenario = edits.change_question(scenario, "q", hearing_range=None)
    wide = widened(scenario)
    found, before = leverage(scenario), results(wide)
    assert (found.result_at_end, found.result_in_long_run) == pytest.approx(before, abs=1e-9)
    for lever in found.levers:
        after = results(with_change(wide, lever))
        assert lever.at_end == pytest.approx(after[0] - before[0], abs=1e-7)
        assert lever.in_long_run == pytest.approx(after[1] - before[1], abs=1e-4)


@pytest.mark.parametrize("plan", [Plan((Stage("Plenary", 2),), "repeat"), Plan((Stage("Plenary", 2),))])
def test_a_repeated_plan_of_one_stage_has_the_same_leverage(plan):
    found = leverage(edits.set_plan(HUB, plan, variant=NOW))
    assert found.levers[0].says.startswith("If Amina started 10 higher, the mean would be ")
    moved = {lever.says.split(", the mean")[0]: (lever.at_end, lever.in_long_run) for lever in found.levers}
    once = leverage(edits.set_plan(HUB, Plan((Stage("Plenary", 2),)), variant=NOW))
    for lever in once.levers:
        assert moved[lever.says.split(", the mean")[0]] == pytest.approx((lever.at_end, lever.in_long_run), abs=1e-9)


def test_with_a_hearing_range_changes_are_played():
    near = edits.change_question(HUB, "q", hearing_range=60)
    assert rehearse(near).rounds[-1] == pytest.approx(rehearse(HUB).rounds[-1])
    far = {lever.says: lever.at_end for lever in leverage(HUB).levers if lever.kind != "firmness"}
    for lever in leverage(near).levers:
        if lever.says in far:
            assert lever.at_end == pytest.approx(far[lever.says])
    assert leverage(near).arrows_at_end is None


@pytest.mark.parametrize("across", [1e-3, 1e-7, 1e-12])
def test_circles_that_hardly_hear_each_other(across):
    """Levers are right also where the closed forms lose their digits."""
    circles = meeting(
        [[40, 60 - across, across, 0], [60, 40, 0, 0], [0, 2 * across, 40, 60 - 2 * across], [0, 0, 60, 40]],
        [80, 80, 20, 10],
    )
    before = results(circles)
    for lever in leverage(circles).levers:
        after = results(with_change(circles, lever))
        assert lever.at_end == pytest.approx(after[0] - before[0], abs=1e-7)
        assert lever.in_long_run == pytest.approx(after[1] - before[1], abs=1e-7)


def test_equal_people_have_equal_leverage():
    alike = meeting([[40, 20, 20, 20], [20, 40, 20, 20], [20, 20, 40, 20], [20, 20, 20, 40]], [30, 30, 70, 70])
    by_kind: dict[str, list[float]] = {}
    for lever in leverage(alike).levers:
        by_kind.setdefault(lever.kind, []).append(round(abs(lever.at_end), 9))
    assert by_kind["start"] == [2.5] * 4
    assert all(len(set(sizes)) == 1 for sizes in by_kind.values())


def test_arrows_carry_the_rate_of_their_first_points():
    found = leverage(HUB)
    variant = HUB.variants[0]
    for at, arrow in enumerate(variant.arrows):
        points = edits.points_of(variant, arrow.listener)[arrow.source]
        little = edits.set_points(HUB, arrow.listener, arrow.source, points + 1e-4, variant=NOW)
        slopes = [(after - before) * 1e5 for after, before in zip(results(little), results(HUB), strict=True)]
        assert (found.arrows_at_end[at], found.arrows_in_long_run[at]) == pytest.approx(slopes, rel=1e-4, abs=1e-5)


def test_it_is_sorted_and_lights_up_people_and_arrows():
    found = leverage(HUB)
    sizes = [abs(lever.at_end) for lever in found.levers]
    assert sizes == sorted(sizes, reverse=True)
    move = next(lever for lever in found.levers if lever.kind == "move")
    assert move.arrows
    assert {one for pair in move.arrows for one in pair} == set(move.people)
    assert {lever.kind for lever in found.levers} == {"start", "move", "own-view", "firmness"}


def test_words_and_json():
    found = leverage(HUB)
    text = leverage_summary(HUB, found)
    assert "  1. If Amina started 10 higher, the mean would be " in text
    assert text.endswith("A sketch, not a forecast of people.\n")
    assert max(map(len, text.splitlines())) < 80
    told = json.loads(json.dumps(leverage_to_json(HUB, found), allow_nan=False))
    assert (told["format"], told["version"]) == ("deliberate-leverage", 1)
    assert [lever["at_end"] for lever in told["levers"]] == [lever.at_end for lever in found.levers]
    assert len(told["arrows"]) == len(told["arrows_at_end"]) == 6


def test_nobody_present_and_nobody_at_all():
    absent = edits.set_presence(HUB, IDS[:3], False, variant=NOW)
    assert leverage(absent).levers == ()
    assert "Nobody is present" in leverage_summary(absent, leverage(absent))
    assert "mean" not in leverage_summary(absent, leverage(absent))
    assert leverage(meeting([], [])).levers == ()


def test_arrows_without_a_rate_are_null():
    apart = meeting([[50, 50, 0, 0], [50, 50, 0, 0], [1e-310, 0, 50, 50], [0, 0, 50, 50]], [10, 20, 80, 90])
    told = leverage_to_json(apart, leverage(apart))
    json.dumps(told, allow_nan=False)
    assert all(math.isfinite(lever["in_long_run"]) for lever in told["levers"])
    assert None in told["arrows_in_long_run"]
    assert None not in told["arrows_at_end"]


@pytest.mark.parametrize("unheard", ["own", "rescale"])
def test_weights_at_the_ends_of_double_range(unheard):
    plan = Plan((Stage("Tables", 2, "tables", unheard, tables=(("a", "b"), ("c",))), Stage("Plenary", 2)))
    odd = meeting([[1.7e308, 5e-324, 1.7e308], [5e-324, 0, 1.7e308], [1.7e308, 1.7e308, 0]], [10, 50, 90], plan=plan)
    told = leverage_to_json(odd, leverage(odd))
    json.dumps(told, allow_nan=False)
    assert all(math.isfinite(lever["at_end"]) for lever in told["levers"])


def test_an_arrow_that_is_hardly_heard_counts_where_it_is_alone():
    at_tables = Plan((Stage("Tables", 2, "tables", "rescale", tables=(("a",), ("b", "c"))),))
    odd = meeting([[1, 0, 0], [1.7e308, 0, 1e-17], [0, 0, 1]], [75, 50, 10], plan=at_tables)
    (firmer,) = (one for one in leverage(odd).levers if one.kind == "firmness" and one.people == ("b",))
    assert firmer.in_long_run == pytest.approx((0.1 * 50 + 0.9 * 10 - 10) / 3)


def test_large_meetings_in_which_groups_hardly_hear_each_other_are_refused():
    people = tuple(Person(f"p{at}", own_weight=50.0) for at in range(102))
    in_pairs = tuple(Arrow(f"p{at}", f"p{at ^ 1}", 50.0) for at in range(102))
    variant = Variant(NOW, people, arrows=(*in_pairs, Arrow("p2", "p0", 1e-20)))
    large = Scenario("A test", (Question("q", "What is asked?", 0, 100),), (variant,))
    with pytest.raises(DeliberateError, match="hardly hear each other leverage is worked out for up to 100 people"):
        leverage(large)


def test_too_large_meetings_are_refused():
    many = Plan((Stage("Plenary", 1),), "repeat")
    large = meeting([], [], plan=many)
    people = tuple(type(HUB.variants[0].people[0])(f"p{at}") for at in range(101))
    large = edits.replace_variant(large, NOW, type(HUB.variants[0])(NOW, people, plan=many))
    with pytest.raises(DeliberateError, match="up to 100 people"):
        leverage(large)


@pytest.mark.parametrize(
    ("low", "high", "step"), [(0, 100, 10), (1, 9, 1), (0, 1, 0.1), (0, 24, 1), (0, 800, 100), (0, 50, 10)]
)
def test_steps_suit_the_scale(low, high, step):
    assert step_of(Question("q", "?", low, high)) == pytest.approx(step)


def test_names_from_the_file_are_in_the_sentence_as_they_are():
    odd = edits.rename_person(HUB, "a", "<b>A</b> & {0}", variant=NOW)
    assert "If <b>A</b> & {0} started" in leverage(odd).levers[0].says
    assert not np.isnan(leverage(odd).levers[0].at_end)
