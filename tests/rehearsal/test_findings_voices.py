"""Views that do not move, and starts that make up much of the result."""

from __future__ import annotations

from itertools import permutations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from meetings import meeting
from telling import after, all_told, kinds, talk, told

from deliberate.scenario.values import Arrow, Person, Question, Scenario, Variant


def star(people: int) -> list[list[int]]:
    """The first is the hub; everybody gives equal points to herself and each neighbour."""
    return [[1] * people] + [[1] + [int(i == j) for j in range(1, people)] for i in range(1, people)]


# One view that does not move

ONE_STILL = [[4, 0, 0], [1, 2, 1], [1, 1, 2]]


def test_all_others_come_to_a_view_that_does_not_move() -> None:
    scenario = meeting(ONE_STILL, [10, 70, 90], plan=talk(3))
    finding = told(scenario, "fixed-view")
    assert finding.says == "The view of a stays at 10 in the sketch, and all others come to it."
    # b and c each give a a quarter, so the mean of the two comes nearer by a quarter a round; their own gap quarters.
    # 70 and 90: distance from 10 is 70 * 0.75^t at the mean, 10 * 0.25^t to either side; within 1 from round 15 on.
    assert 70 * 0.75**14 > 1 > 70 * 0.75**15 + 10 * 0.25**15
    assert finding.why == (
        "a hears nobody in the sketch, while the others give a 25 of 100 points on average;"
        " all are within 1 of each other from round 15 on."
    )
    assert finding.arrows == (("b", "a"), ("c", "a"))
    assert after(scenario, finding).hears[0]
    assert "settles" not in kinds(scenario)


def test_several_views_that_do_not_move() -> None:
    points = [[1, 0, 0], [0, 1, 0], [1, 1, 2]]
    finding = told(meeting(points, [10, 70, 90], people={"a": {"firmness": 1}, "b": {"firmness": 1}}), "fixed-view")
    assert finding.says == "The views of a and b do not move in the sketch: they stay at 10 and 70."
    assert finding.why == (
        "a and b bring the start back in full in every round, while the others give a and b together 50 of 100"
        " points on average."
    )


def test_views_that_move() -> None:
    assert "fixed-view" not in kinds(meeting([[9, 1, 0], *ONE_STILL[1:]], [10, 70, 90]))


def test_a_view_that_nobody_hears_pulls_nobody() -> None:
    assert "fixed-view" not in kinds(meeting([[1, 0, 0], [0, 1, 1], [0, 1, 1]], [10, 70, 90]))


# Much of the result

# Hub n / (3n - 2), by the theorem that influence is degree over total: 6/16 of six and 5/13 of five.


def test_the_hub_of_a_star() -> None:
    scenario = meeting(star(6), [80, 20, 20, 20, 20, 20])
    finding = told(scenario, "carries")
    assert finding.people == ("a",)
    assert finding.figures == pytest.approx({"share": 6 / 16, "largest": 6 / 16, "equal": 1 / 6})
    assert finding.says == "38 % of where the sketch ends comes from the start of a."
    assert finding.why == (
        "An equal share would be 17 %; the others give a 50 of 100 points on average,"
        " and a keeps 17 for the own view."
    )
    assert finding.arrows == tuple((one, "a") for one in "bcdef")


def test_less_than_twice_an_equal_share_is_not_told() -> None:
    assert 5 / 13 < 2 / 5
    assert "carries" not in kinds(meeting(star(5), [80, 20, 20, 20, 20]))


@pytest.mark.parametrize(("points", "worth_telling"), [(2.6, False), (4.0, True)])
def test_a_trifle_in_a_crowd_is_not_told(points: float, worth_telling: bool) -> None:
    """All give the first so many points and everybody else one: influence is points over their sum."""
    ids = [f"p{at}" for at in range(60)]
    people = tuple(Person(one, own_weight=points if one == "p0" else 1.0, beliefs={"q": 50.0}) for one in ids)
    arrows = tuple(Arrow(one, other, points if other == "p0" else 1.0) for one, other in permutations(ids, 2))
    crowd = Scenario(
        title="Crowd",
        questions=(Question("q", "What is asked?", 0, 100),),
        variants=(Variant(name="v", people=people, arrows=arrows),),
    )
    share = points / (points + 59)
    assert share > 2 / 60
    assert (share > 0.05) == worth_telling
    assert ("carries" in kinds(crowd)) == worth_telling


@given(st.lists(st.integers(1, 60), min_size=3, max_size=6), st.data())
def test_whose_start_counts_is_seen_by_moving_it(kept: list[int], data: st.DataObject) -> None:
    """Everybody named moves the result by more than twice an equal share, or by half, when her start moves by one."""
    people = len(kept)
    points = np.array(
        data.draw(
            st.lists(st.lists(st.integers(1, 9), min_size=people, max_size=people), min_size=people, max_size=people)
        ),
        dtype=float,
    )
    points[np.diag_indices(people)] = kept
    rows = points / points.sum(axis=1, keepdims=True)
    moved = np.linalg.matrix_power(rows, 4096)[0]
    bar = min(2 / people, 0.5)
    if np.abs(moved - bar).min() < 1e-6:
        return
    found = [finding for finding in all_told(meeting(points, [50.0] * people)) if finding.kind == "carries"]
    named = {"abcdef".index(one) for finding in found for one in finding.people}
    assert named == set(np.flatnonzero(moved > bar).tolist())
    for finding in found:
        assert finding.figures["share"] == pytest.approx(moved[sorted(named)].sum())
