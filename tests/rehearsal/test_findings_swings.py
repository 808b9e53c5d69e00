"""Views that change places for ever."""

from __future__ import annotations

import numpy as np
import pytest
from meetings import meeting
from telling import after, kinds, share_rows, talk, told

from deliberate.rehearsal.results import KeepOwnView
from deliberate.scenario.values import Question

SIDES = [[0, 0, 1, 1], [0, 0, 1, 1], [1, 1, 0, 0], [1, 1, 0, 0]]


def ring(people: int) -> list[list[int]]:
    """Everybody hears only the next one."""
    return np.roll(np.eye(people, dtype=int), 1, axis=1).tolist()


def test_two_sides_swap() -> None:
    scenario = meeting(SIDES, [90, 70, 30, 10])
    finding = told(scenario, "swing")
    assert finding.says == "Two sides swap views for ever in the sketch: 20 and 80 change places in every round."
    assert finding.why == (
        "a and b take over only what c and d held before, and the other way round; nobody's own view counts."
    )
    assert finding.groups == (("a", "b"), ("c", "d"))
    assert finding.figures["period"] == 2
    even = np.linalg.matrix_power(share_rows(SIDES), 100) @ [90, 70, 30, 10]
    assert {finding.figures["view_1"], finding.figures["view_2"]} == set(even.tolist())
    assert finding.suggestion == KeepOwnView(("a", "b", "c", "d"), 20)
    assert after(scenario, finding).rehearsal.settles_from_any_start


def test_the_two_views_are_told_in_the_order_of_the_sides() -> None:
    low_first = told(meeting(SIDES, [10, 10, 90, 90]), "swing")
    assert low_first.says.endswith("10 and 90 change places in every round.")


def test_three_in_a_ring() -> None:
    finding = told(meeting(ring(3), [80, 30, 58]), "swing")
    assert finding.figures["period"] == 3
    assert finding.says == (
        "Views travel round three parts for ever in the sketch: 80, 30 and 58 move on by one in every round."
    )
    assert finding.why == "a takes over from b, b from c, and c from a; nobody's own view counts."


def test_many_in_a_ring() -> None:
    question = Question("q", "How many days?", 0, 100, unit="days")
    finding = told(meeting(ring(5), [80, 30, 58, 10, 90], question=question), "swing")
    assert finding.says == (
        "Views travel round five parts for ever in the sketch, between 10 and 90 days, one step in every round."
    )
    assert finding.why == (
        "The 5 parts stand in a ring, and each takes over only what the next one held before;"
        " nobody's own view counts."
    )


def test_over_a_whole_pass() -> None:
    finding = told(meeting([[0, 1], [1, 0]], [80, 20], plan=talk(1, "repeat")), "swing")
    assert finding.says.endswith("change places in every pass through the plan.")
    assert finding.why.startswith("Over a whole pass through the plan: a takes over only what b held before")


@pytest.mark.parametrize("points", [[[1, 9], [9, 0]], [[0, 1, 0], [1, 0, 1], [0, 1, 1]]])
def test_any_own_view_ends_a_swing(points) -> None:
    assert "swing" not in kinds(meeting(points, [80, 20, 50][: len(points)]))


def test_starts_that_do_not_swing() -> None:
    assert "swing" not in kinds(meeting(SIDES, [40, 60, 60, 40]))
    assert "swing" not in kinds(meeting(SIDES, [50] * 4))
