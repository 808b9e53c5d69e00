"""Whether views settle, on what, and how soon."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from meetings import meeting
from telling import after, kinds, sketch, talk, told

from deliberate.rehearsal.results import JointRound
from deliberate.scenario.values import Plan, Question, Stage

# Influence (1/3, 2/3), and from (0, 1) a spread of 4^-t (DeGroot 1974, from memory)
TWO = [[1, 1], [1, 3]]
EVEN = [[1] * 4] * 4
STARTS = [80, 60, 40, 20]


def test_two_people_settle() -> None:
    finding = told(meeting(TWO, [0, 90], plan=talk(12)), "settles")
    rounds = next(t for t in range(99) if Fraction(90, 4**t) <= 1)
    assert finding.figures == pytest.approx({"view": 60, "rounds_to_agree": rounds})
    assert finding.says == "All settle on 60 in the sketch, within 1 of each other from round 4 on."
    assert finding.why == "Both hear each other, so views draw together round by round."


def test_two_even_people() -> None:
    finding = told(meeting([[1, 1], [1, 1]], [0, 90]), "settles")
    assert finding.why == "Both hear each other, and both starts count alike."


def test_every_start_counts_alike() -> None:
    finding = told(meeting(EVEN, STARTS), "settles")
    assert finding.says == "All settle on 50 in the sketch, within 1 of each other from round 1 on."
    assert finding.why == (
        "Everybody hears everybody, directly or through others, and every start counts for as much as any other."
    )


def test_the_largest_share_is_never_rounded_down() -> None:
    # Strength over total (random walk on an undirected graph): 6/24, 5/24, 6/24 and 7/24, and 7/24 is 29.2 %.
    points = [[1, 1, 2, 2], [1, 2, 1, 1], [2, 1, 1, 2], [2, 1, 2, 2]]
    finding = told(meeting(points, STARTS), "settles")
    assert finding.why.endswith("and no start makes up more than 30 %.")


def test_all_start_near_each_other() -> None:
    finding = told(meeting(EVEN, [50, 50.4, 50.6, 51]), "settles")
    assert finding.says == "All start within 1 of each other, and they settle on 50.5."


def test_a_unit_follows_the_view() -> None:
    question = Question("q", "What is it worth?", 0, 800, unit="thousand euros")
    assert told(meeting(EVEN, [800, 600, 400, 200], question=question), "settles").says == (
        "All settle on 500 thousand euros in the sketch, within 8 of each other from round 1 on."
    )


def test_one_person_settles_what_the_others_come_to() -> None:
    stages = (Stage("All", 1), Stage("Panel", 9, "panel", speakers=("a",)))
    finding = told(meeting([[1, 1, 1]] * 3, [10, 40, 70], plan=Plan(stages)), "settles")
    assert finding.why == "In the end all others hear a, directly or through others, so their views draw to that one."


def test_there_is_no_common_view_to_settle_on() -> None:
    assert "settles" not in kinds(meeting([[1, 0], [0, 1]], [0, 90]))
    assert "settles" not in kinds(meeting([[0, 1], [1, 0]], [0, 90]))


# The plan ends first


def test_the_plan_ends_before_views_meet() -> None:
    scenario = meeting(TWO, [0, 100], plan=talk(2))
    finding = told(scenario, "unfinished")
    assert finding.figures == pytest.approx({"spread": 100 / 4**2, "plan_rounds": 2, "rounds_to_agree": 4})
    assert finding.says == "The plan ends before views meet: at the plan's end they are still 6.2 apart."
    # After two rounds: T^2 = [[6, 10], [5, 11]] / 16.
    assert finding.why == (
        "a and b then hold 62.5 and 68.8; if talk went on all would be within 1 of each other only from round 4 on,"
        " and the plan has 2 rounds."
    )
    assert told(scenario, "settles").says == "If they talked on, all would settle on 66.7 in the sketch."


def test_a_joint_round_is_offered_where_it_helps() -> None:
    line = [[3, 1, 0, 0], [1, 2, 1, 0], [0, 1, 2, 1], [0, 0, 1, 3]]
    scenario = meeting(line, STARTS, plan=talk(2))
    finding = told(scenario, "unfinished")
    assert finding.suggestion == JointRound(1)
    later = after(scenario, finding)
    assert later.spread(later.ends) < finding.figures["spread"]
    assert told(meeting(TWO, [0, 100], plan=talk(2)), "unfinished").suggestion is None


def test_the_plan_is_long_enough() -> None:
    assert "unfinished" not in kinds(meeting(TWO, [0, 100], plan=talk(4)))
    assert "unfinished" in kinds(meeting(TWO, [0, 100], plan=talk(3)))


def test_views_still_on_the_move_without_a_common_view() -> None:
    points = [[1, 0, 0], [0, 1, 0], [1, 1, 2]]
    finding = told(meeting(points, [0, 40, 100], plan=talk(1)), "unfinished")
    assert finding.says == "The plan ends before views settle: 1 view is still on the move at the plan's end."
    assert finding.why == "The view of c is at 60 then and would settle on 20 if talk went on."
    assert finding.figures == pytest.approx({"furthest": 40, "plan_rounds": 1})


# A gap that stays

# Friedkin and Johnsen 1999 (quoted): firmness is the diagonal, the limit prints as (60, 60, 75, 75).
FOUR = [[0.220, 0.120, 0.360, 0.300], [0.147, 0.215, 0.344, 0.294], [0, 0, 1, 0], [0.090, 0.178, 0.446, 0.286]]


def test_firm_people_keep_a_gap() -> None:
    people = {one: {"firmness": row[at]} for at, (one, row) in enumerate(zip("abcd", FOUR, strict=True))}
    finding = told(meeting(FOUR, [25, 25, 75, 85], people=people), "lasting-gap")
    assert finding.figures == pytest.approx({"gap": 75 - 59.9840, "lowest": 59.9840, "highest": 75}, abs=1e-4)
    assert finding.says == "No common view, however long they talk: a gap of 15 stays in the sketch."
    assert finding.why == (
        "a, b and d bring back 22 to 29 % of the start in every round; in the end b and c hold 60 and 75."
    )


def test_two_firm_people() -> None:
    # x = (1 - f) (x + y) / 2 + f * start with f = 1/2: 0.75 x - 0.25 y = 0, 0.75 y - 0.25 x = 50.
    people = {one: {"firmness": 0.5} for one in "ab"}
    finding = told(meeting([[1, 1], [1, 1]], [0, 100], people=people), "lasting-gap")
    x, y = np.linalg.solve([[0.75, -0.25], [-0.25, 0.75]], [0, 50])
    assert finding.figures["gap"] == pytest.approx(y - x)
    assert finding.why == "Both bring back 50 % of the start in every round; in the end a and b hold 25 and 75."


def test_nobody_hears_anybody() -> None:
    finding = told(meeting([[1, 0], [0, 1]], [10, 70]), "lasting-gap")
    assert finding.why == (
        "Nobody hears anybody in any stage, so every view stays where it starts; in the end a and b hold 10 and 70."
    )
    assert finding.suggestion is None or after(meeting([[1, 0], [0, 1]], [10, 70]), finding).common_view is not None


def test_a_gap_closes_where_nobody_is_firm() -> None:
    assert "lasting-gap" not in kinds(meeting(FOUR[:2] + FOUR[3:] + FOUR[3:], [25, 25, 75, 85]))
    assert "lasting-gap" not in kinds(meeting(EVEN, STARTS))


# Slow


def test_views_draw_together_slowly() -> None:
    # Second modulus 0.9: halves every log(1/2) / log(0.9) = 6.58 rounds.
    finding = told(meeting([[95, 5], [5, 95]], [0, 100], plan=talk(6)), "slow")
    assert finding.figures == pytest.approx({"rounds_to_halve": np.log(0.5) / np.log(0.9), "plan_rounds": 6})
    assert finding.says == "Views draw together slowly: what is left of the gap halves every 6.6 rounds."
    assert finding.why == "Everybody keeps most of the 100 points for the own view, so little is heard."
    assert "slow" not in kinds(meeting([[95, 5], [5, 95]], [0, 100], plan=talk(7)))


def test_a_short_plan_does_not_make_views_slow() -> None:
    # The gap halves in every round (second modulus 1/2), as long as the plan is.
    assert "slow" not in kinds(meeting([[3, 1], [1, 3]], [0, 100], plan=talk(1)))


def test_who_keeps_most_is_never_rounded_up() -> None:
    # 888 of 1000 is 88.8, so "89 or more" would be untrue.
    finding = told(meeting([[888, 56, 56], [28, 944, 28], [500, 500, 0]], [0, 50, 100], plan=talk(2)), "slow")
    assert finding.people == ("a", "b")
    assert finding.why.startswith("a and b keep 88 or more of 100 points for the own view")


# Somebody away or apart does not count


@pytest.mark.parametrize("apart", [{"present": False}, {}])
def test_agreement_is_that_of_those_who_take_part(apart: dict[str, bool]) -> None:
    scenario = meeting([[1, 1, 0], [1, 3, 0], [0, 0, 1]], [0, 90, 100], people={"c": apart}, plan=talk(2))
    assert sketch(scenario).agreed == 4
    assert told(scenario, "unfinished").figures["rounds_to_agree"] == 4
