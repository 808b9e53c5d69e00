"""Go-rounds: everybody hears everybody."""

from __future__ import annotations

import pytest
from harbour import AS_IT_STANDS, HARBOUR, MIXED

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.access import arrow_between, variant_named
from deliberate.scenario.edits import linked_groups, points_of
from deliberate.scenario.values import Arrow, Person, Plan, Question, Scenario, Stage, Variant

CIRCLES = (("ada", "bao", "chi"), ("dov", "eno", "fay"))


def circles(*later: Stage) -> Scenario:
    """Two circles of three without an arrow between them: own view 40, the others 30 each."""
    people = tuple(Person(id=one, own_weight=40.0) for circle in CIRCLES for one in circle)
    arrows = tuple(Arrow(a, b, 30.0) for circle in CIRCLES for a in circle for b in circle if a != b)
    variant = Variant(name="Apart", people=people, arrows=arrows, plan=Plan(stages=later or (Stage(),)))
    return Scenario(
        title="Two circles", questions=(Question(id="q", text="Q?", low=0.0, high=1.0),), variants=(variant,)
    )


def heard_shares(variant: Variant, listener: str, table: tuple[str, ...]) -> dict[str, float]:
    """Shares at a table where what is not heard is spread over the rest (`rescale`), as formats.md defines it."""
    points = {one: part for one, part in points_of(variant, listener).items() if one in table}
    return {one: part / sum(points.values()) for one, part in points.items()}


def test_everybody_present_hears_everybody_else_who_is_present() -> None:
    after = edits.add_go_round(HARBOUR, variant=AS_IT_STANDS, points=5).variants[0]
    for listener in ("ines", "tomas", "noor"):
        assert points_of(after, listener).keys() >= {"ines", "tomas", "noor"}
    assert points_of(after, "tomas") == pytest.approx({"tomas": 57, "ines": 28.5, "wei": 9.5, "noor": 5})
    assert arrow_between(after, "ines", "wei") is None  # Wei is not there
    assert points_of(after, "ines") == points_of(HARBOUR.variants[0], "ines")  # heard both already
    assert after.arrows[0] is HARBOUR.variants[0].arrows[0]


def test_a_go_round_can_be_limited_to_some() -> None:
    after = edits.add_go_round(HARBOUR, variant=AS_IT_STANDS, ids=["noor", "wei"]).variants[0]
    assert points_of(after, "wei") == {"wei": 98, "noor": 2}
    assert points_of(after, "tomas") == points_of(HARBOUR.variants[0], "tomas")


def test_a_second_go_round_changes_nothing() -> None:
    once = edits.add_go_round(HARBOUR, variant=MIXED)
    assert edits.add_go_round(once, variant=MIXED) is once


@pytest.mark.parametrize(
    ("points", "said"),
    [
        (50, "ada would hear 3 more people: give each of them less than 33.333 points"),
        (0, "must be more than 0, or nobody would be heard"),
        (-1, "must lie between 0 and 100"),
    ],
)
def test_new_voices_need_room(points, said) -> None:
    with pytest.raises(DeliberateError, match=said):
        edits.add_go_round(circles(), variant="Apart", points=points)


def test_linked_groups_hang_together_by_arrows_among_those_present() -> None:
    assert tuple(linked_groups(circles().variants[0])) == CIRCLES
    assert tuple(linked_groups(HARBOUR.variants[0])) == (("ines", "tomas", "noor"),)
    assert tuple(linked_groups(HARBOUR.variants[1])) == (("ines", "tomas"), ("noor",))
    away = edits.set_presence(circles(), "bao", False, variant="Apart").variants[0]
    assert tuple(linked_groups(away)) == (("ada", "chi"), CIRCLES[1])


def test_before_separate_groups_a_joint_round_lets_all_be_heard_about_alike() -> None:
    after = edits.add_joint_round(circles(), 2, variant="Apart").variants[0]
    front, later = after.plan.stages
    assert (front.name, front.rounds, front.setting) == ("Go-round", 2, "plenary")
    points = points_of(after, "ada")
    assert points.keys() == {one for circle in CIRCLES for one in circle}
    assert all(points[one] == pytest.approx(100 / 6) for one in CIRCLES[1])
    assert later.rounds == 12


def test_after_a_joint_round_separate_groups_go_on_exactly_as_before() -> None:
    before = circles(Stage(name="Talk", rounds=4), Stage(name="Writing", setting="silence"))
    after = edits.add_joint_round(before, variant="Apart").variants[0]
    _, talk, writing = after.plan.stages
    assert (talk.setting, talk.tables, talk.unheard) == ("tables", CIRCLES, "rescale")
    assert writing is before.variants[0].plan.stages[1]
    for circle in CIRCLES:
        for listener in circle:
            assert heard_shares(after, listener, circle) == pytest.approx(
                heard_shares(before.variants[0], listener, circle), rel=1e-12
            )


def test_a_joint_round_adds_small_arrows_where_the_sketch_hangs_together() -> None:
    before = edits.add_arrow(circles(), "ada", "dov", 1, variant="Apart")
    after = edits.add_joint_round(before, variant="Apart", name="All round").variants[0]
    assert [stage.setting for stage in after.plan.stages] == ["plenary", "plenary"]
    assert after.plan.stages[0].name == "All round"
    assert points_of(after, "bao") == pytest.approx(
        {"bao": 37.6, "ada": 28.2, "chi": 28.2, "dov": 2, "eno": 2, "fay": 2}
    )


def test_people_who_hear_nobody_each_make_a_joint_round_possible() -> None:
    scattered = edits.remove_arrows(
        circles(), [(a.listener, a.source) for a in circles().variants[0].arrows], variant="Apart"
    )
    after = variant_named(edits.add_joint_round(scattered, variant="Apart"), "Apart")
    assert points_of(after, "ada") == pytest.approx(dict.fromkeys((*CIRCLES[0], *CIRCLES[1]), 100 / 6))
    assert after.plan.stages[1].setting == "tables"
    assert all(heard_shares(after, table[0], table) == {table[0]: 1} for table in after.plan.stages[1].tables)
