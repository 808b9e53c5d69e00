"""Changes of process as edits: what they change and what they leave alone."""

from __future__ import annotations

import pytest
from harbour import AS_IT_STANDS, HARBOUR

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.access import arrow_between, person_with_id
from deliberate.scenario.edits import points_of
from deliberate.scenario.values import Plan, Stage

NOW = {"variant": AS_IT_STANDS}
BEFORE = HARBOUR.variants[0]


def planned(*stages: Stage):
    return edits.set_plan(HARBOUR, Plan(stages), **NOW)


def test_new_voices_get_points_and_known_ones_keep_theirs():
    after = edits.let_hear(HARBOUR, [("tomas", "noor"), ("tomas", "ines"), ("tomas", "noor")], 10, **NOW).variants[0]
    assert points_of(after, "tomas") == pytest.approx({"tomas": 54, "ines": 27, "wei": 9, "noor": 10})
    assert points_of(after, "noor") == points_of(BEFORE, "noor")
    assert edits.let_hear(HARBOUR, [("ines", "tomas"), ("ines", "ines")], 10, **NOW) is HARBOUR


def test_new_voices_must_leave_room():
    with pytest.raises(DeliberateError, match="less than 100 points"):
        edits.let_hear(HARBOUR, [("tomas", "noor")], 100, **NOW)


def test_voices_are_raised_to_so_many_points_at_least():
    after = edits.give_at_least(HARBOUR, [("tomas", "wei"), ("tomas", "ines"), ("tomas", "tomas")], 20, **NOW)
    assert points_of(after.variants[0], "tomas") == pytest.approx({"tomas": 160 / 3, "ines": 80 / 3, "wei": 20})
    assert edits.give_at_least(HARBOUR, [("tomas", "wei")], 10, **NOW) is HARBOUR


def test_people_in_a_circle_hear_each_other():
    after = edits.acquaint(HARBOUR, [("ines", "noor", "tomas"), ("wei",)], 5, **NOW).variants[0]
    for listener in ("ines", "noor", "tomas"):
        assert points_of(after, listener).keys() >= {"ines", "noor", "tomas"}
    assert points_of(after, "noor")["ines"] == 5


def test_points_are_moved_within_a_row():
    after = edits.move_points(HARBOUR, "tomas", "tomas", "ines", 10, **NOW).variants[0]
    assert points_of(after, "tomas") == pytest.approx({"tomas": 50, "ines": 40, "wei": 10})
    with pytest.raises(DeliberateError, match="must lie between 0 and 10"):
        edits.move_points(HARBOUR, "tomas", "wei", "ines", 11, **NOW)
    gone = edits.move_points(HARBOUR, "tomas", "wei", "noor", 10, **NOW).variants[0]
    assert arrow_between(gone, "tomas", "wei") is None


def test_all_who_are_present_hear_all_alike():
    after = edits.hear_all_alike(HARBOUR, 40, **NOW).variants[0]
    assert points_of(after, "noor") == {"noor": 40, "ines": 30, "tomas": 30}
    assert points_of(after, "wei") == points_of(BEFORE, "wei")


def test_a_go_between_adds_no_view_and_no_vote():
    after = edits.add_go_between(HARBOUR, ("ines", "tomas"), 10, **NOW).variants[0]
    newcomer = person_with_id(after, "go-between")
    assert newcomer.ballots == newcomer.own_weight == 0
    assert newcomer.beliefs == {"levy": pytest.approx(0.45), "days": 3}  # Ines has no start on the second question
    assert points_of(after, newcomer.id) == {newcomer.id: 0, "ines": 50, "tomas": 50}
    assert points_of(after, "ines")[newcomer.id] == points_of(after, "tomas")[newcomer.id] == 10
    assert points_of(after, "noor") == points_of(BEFORE, "noor")
    assert (newcomer.x, newcomer.y) == (50, 0)
    again = edits.add_go_between(edits.add_go_between(HARBOUR, ("ines",), 1, **NOW), ("ines",), 1, **NOW)
    assert len({person.id for person in again.variants[0].people}) == 6


def test_stages_are_put_in_at_equal_length():
    before = planned(Stage("Talk", 5), Stage("Close", 2))
    opened = edits.begin_with(before, Stage("Round", 3), **NOW).variants[0].plan
    assert [(stage.name, stage.rounds) for stage in opened.stages] == [("Round", 3), ("Talk", 2), ("Close", 2)]
    closed = edits.end_with(before, Stage("Round", 1), **NOW).variants[0].plan
    assert [(stage.name, stage.rounds) for stage in closed.stages] == [("Talk", 4), ("Close", 2), ("Round", 1)]


def test_what_cannot_be_taken_from_other_stages_is_added():
    plan = edits.begin_with(planned(Stage("Talk", 2)), Stage("Round", 4), **NOW).variants[0].plan
    assert [stage.rounds for stage in plan.stages] == [4, 1]


def test_stages_in_another_order():
    before = planned(Stage("One", 1), Stage("Two", 2), Stage("Three", 3))
    after = edits.reorder_stages(before, (2, 0, 1), **NOW).variants[0].plan
    assert [stage.name for stage in after.stages] == ["Three", "One", "Two"]
    with pytest.raises(DeliberateError, match="each of them once"):
        edits.reorder_stages(before, (0, 0, 1), **NOW)
