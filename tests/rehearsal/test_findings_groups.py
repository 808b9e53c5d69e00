"""Closed groups, people outside, people nobody hears, people apart."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from meetings import meeting
from telling import after, all_told, kinds, share_rows, sketch, talk, told

from deliberate.rehearsal.results import Introductions, JointRound
from deliberate.scenario.values import Plan, Question, Stage

# Two blocks (DeGroot 1974, from memory): the first settles on the mean, the second with influence (1/3, 2/3).
CIRCLES = [[1, 1, 0, 0], [1, 1, 0, 0], [0, 0, 2, 2], [0, 0, 1, 3]]
STARTS = [80, 90, 20, 50]
ALL = [[1] * 4] * 4
TABLES = (("a", "b"), ("c", "d"))


def reach(points) -> np.ndarray:
    """(n, n) who hears whom directly or through others, by squaring."""
    people = len(points)
    linked = np.linalg.matrix_power(np.eye(people, dtype=int) + (np.array(points) > 0), people)
    return linked > 0


def groups_that_hear_only_themselves(points) -> set[frozenset[str]]:
    linked = reach(points)
    return {
        frozenset("abcdefgh"[at] for at in np.flatnonzero(row))
        for row in linked
        if all(linked[at, row].all() for at in np.flatnonzero(row))
    }


def test_two_circles() -> None:
    finding = told(meeting(CIRCLES, STARTS), "closed-groups")
    assert finding.says == "Two groups hear only themselves and end 45 apart."
    assert finding.why == "a and b end at 85; c and d at 40; no arrow that counts leads across."
    assert finding.figures == pytest.approx({"groups": 2, "gap": 45, "view_1": 85, "view_2": 40})
    assert finding.groups == TABLES


def test_the_introduction_makes_one_group_in_which_every_start_counts() -> None:
    scenario = meeting(CIRCLES, STARTS)
    finding = told(scenario, "closed-groups")
    assert finding.suggestion == Introductions((("d", "a"), ("a", "d")), 10)
    sketch = after(scenario, finding)
    assert len(sketch.closed) == 1
    assert (sketch.influence > 0).all()


def test_circles_that_meet_are_no_matter() -> None:
    joined = [[1, 1, 0, 0], [1, 1, 0.1, 0], *CIRCLES[2:]]
    assert "closed-groups" not in kinds(meeting(joined, STARTS))


def test_groups_that_happen_to_end_together() -> None:
    finding = told(meeting(CIRCLES, [40, 40, 20, 50]), "closed-groups")
    assert finding.says == "Two groups hear only themselves, though they happen to end together."


def test_tables_at_the_end_keep_groups_apart() -> None:
    plan = Plan((Stage("Plenary", 1), Stage("Home tables", 2, "tables", tables=TABLES)))
    rows = [[9, 1, 1, 1], [1, 9, 1, 1], [1, 1, 9, 1], [1, 1, 1, 9]]
    finding = told(meeting(rows, [100, 100, 0, 0], plan=plan), "closed-groups")
    # After the plenary: (10 * 100) / 12 and (2 * 100) / 12.
    assert finding.figures["gap"] == pytest.approx(800 / 12)
    assert finding.says == 'Two groups hear only themselves for as long as "Home tables" goes on and end 66.7 apart.'


def test_a_joint_round_brings_tables_nearer() -> None:
    plan = Plan((Stage("Home tables", 2, "tables", tables=TABLES),))
    scenario = meeting(ALL, STARTS, plan=plan)
    finding = told(scenario, "closed-groups")
    assert finding.suggestion == JointRound(1)
    later = after(scenario, finding)
    assert later.spread(later.long_run) < finding.figures["gap"]


def test_tables_again_and_again() -> None:
    stages = (Stage("One", 1, "tables", tables=TABLES), Stage("Two", 1, "tables", tables=TABLES))
    finding = told(meeting(ALL, STARTS, plan=Plan(stages, "repeat")), "closed-groups")
    assert finding.says == "Two groups hear only themselves for as long as the plan goes on and end 50 apart."


def test_tables_after_views_have_met_are_no_matter() -> None:
    plan = Plan((Stage("Plenary", 1), Stage("Home tables", 2, "tables", tables=TABLES)))
    assert "closed-groups" not in kinds(meeting(ALL, STARTS, plan=plan))


def test_views_too_far_apart() -> None:
    question = Question("q", "What is asked?", 0, 100, hearing_range=30)
    finding = told(meeting(ALL, [0, 10, 80, 100], question=question), "closed-groups")
    assert finding.says == "Views too far apart are not heard: two groups form and end 85 apart."
    assert finding.why.endswith("in the sketch nobody takes in a view more than 30 away.")
    assert finding.suggestion is None


def test_many_groups_are_summed_up() -> None:
    points = np.kron(np.eye(5), np.ones((2, 2)))
    finding = told(meeting(points, [0, 0, 10, 10, 40, 40, 70, 70, 100, 100]), "closed-groups")
    assert finding.says == "Five groups hear only themselves and end up to 100 apart."
    assert finding.why == (
        "a and b end at 0; c and d at 10; e and f at 40; two more groups at 70 and 100;"
        " no arrow that counts leads across."
    )


@given(st.integers(2, 7), st.data())
def test_groups_are_those_that_reach_nobody_else(size: int, data: st.DataObject) -> None:
    row = st.lists(st.sampled_from([0, 0, 0, 1]), min_size=size, max_size=size)
    points = np.array(data.draw(st.lists(row, min_size=size, max_size=size)))
    np.fill_diagonal(points, 1)
    starts = [100 * at / size for at in range(size)]
    expected = groups_that_hear_only_themselves(points)
    heard_or_hearing = (points.sum(axis=0) > 1) | (points.sum(axis=1) > 1)
    assume(heard_or_hearing.all())
    found = [finding for finding in all_told(meeting(points, starts)) if finding.kind == "closed-groups"]
    if len(expected) > 1 and max(map(len, expected)) > 1:
        assert {frozenset(group) for finding in found for group in finding.groups} == expected
    else:
        assert not found


# Outside: rows of DeGroot 1974 (from memory) with two more who hear and are not heard

OUTSIDE = [[2, 2, 0, 0], [1, 3, 0, 0], [1, 0, 2, 1], [0, 0, 1, 1]]


def test_what_starts_outside_fades() -> None:
    scenario = meeting(OUTSIDE, [30, 60, 90, 10])
    finding = told(scenario, "outside")
    assert finding.says == "What c and d start with no longer counts in the end."
    assert finding.why == (
        "In the end all depends on a and b, whose views reach the others, directly or through others;"
        " nothing comes back."
    )
    assert finding.people == ("c", "d")
    in_the_end = np.linalg.matrix_power(share_rows(OUTSIDE), 500)
    assert in_the_end[:, 2:] == pytest.approx(np.zeros((4, 2)))
    assert after(scenario, finding).influence.min() > 0.01


def test_nobody_is_outside_where_all_are_heard() -> None:
    assert "outside" not in kinds(meeting(ALL, STARTS))


def test_firm_views_outlast_the_others_and_no_introduction_mends_it() -> None:
    points = [[0, 0, 1], [1, 1, 0], [1, 1, 0]]
    scenario = meeting(points, [80, 20, 50], people={"a": {"firmness": 0.3}})
    finding = told(scenario, "outside")
    assert finding.people == ("b", "c")
    assert finding.why == "In the end all depends on a, who brings back the start, or a part of it, in every round."
    assert finding.suggestion is None
    # x = (I - (I - F) T)^-1 F b(0) (Friedkin and Johnsen 1990) is 80 for all: only the firm start is left.
    rest = np.diag([0.7, 1, 1]) @ share_rows(points)
    assert np.linalg.solve(np.eye(3) - rest, [0.3 * 80, 0, 0]) == pytest.approx([80] * 3)


def test_a_person_nobody_hears() -> None:
    scenario = meeting([[2, 2, 0], [1, 3, 0], [1, 1, 1]], [30, 60, 90])
    finding = told(scenario, "unheard")
    assert finding.says == "Nobody hears c, so that start does not count in the end."
    assert "outside" not in kinds(scenario)
    assert after(scenario, finding).influence[2] > 0.01


def test_a_firm_person_nobody_hears() -> None:
    points = [[2, 2, 0], [1, 3, 0], [1, 1, 1]]
    finding = told(meeting(points, [30, 60, 90], people={"c": {"firmness": 0.5}}), "unheard")
    assert finding.says == "Nobody hears c."
    assert finding.why.startswith("c hears others, but no arrow that counts leads back")
    assert "unheard" not in kinds(meeting(ALL, STARTS, people={"c": {"firmness": 0.5}}))


def test_a_person_apart() -> None:
    scenario = meeting([[1, 1, 0], [1, 1, 0], [0, 0, 1]], [30, 60, 90])
    finding = told(scenario, "hears-nobody")
    assert finding.says == "c is apart from the talk: neither hearing nor heard."
    assert finding.people == ("c",)
    assert not after(scenario, finding).apart.any()
    assert sketch(scenario).common_view == pytest.approx(45)


def test_in_silence_nobody_is_singled_out() -> None:
    assert "hears-nobody" not in kinds(meeting(ALL, STARTS, plan=Plan((Stage("Silence", 1, "silence"),))))
    assert "hears-nobody" not in kinds(meeting(ALL, STARTS, plan=talk(1)))
