import pytest
from meetings import meeting

from deliberate.errors import DeliberateError
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import Introduce, JointRound, KeepOwnView
from deliberate.rehearsal.suggestions import apply, words
from deliberate.scenario.checks import validate
from deliberate.scenario.edits.points import points_of
from deliberate.scenario.values import Plan, Stage

CIRCLES = meeting(
    [[40, 60, 0, 0], [60, 40, 0, 0], [0, 0, 40, 60], [0, 0, 60, 40]],
    [80, 90, 20, 10],
    people={"a": {"name": "Amina"}, "c": {"name": "Chidi"}, "d": {"name": "Dolores"}},
    plan=Plan((Stage("Plenary", 6),)),
)
SWING = meeting([[0, 1], [1, 0]], [80, 20])


def test_an_introduction_is_a_variant_beside_the_old_one():
    after = apply(CIRCLES, "As it stands", Introduce("a", "c", 10))
    assert [variant.name for variant in after.variants] == ["As it stands", "Amina hears Chidi"]
    assert after.variants[0] == CIRCLES.variants[0]
    assert points_of(after.variants[1], "a") == {"a": 36, "b": 54, "c": 10}
    assert points_of(after.variants[1], "b") == points_of(CIRCLES.variants[0], "b")
    assert validate(after) == after


def test_the_right_introduction_brings_circles_together():
    assert not rehearse(CIRCLES).consensus_from_any_start
    after = apply(CIRCLES, "As it stands", Introduce("a", "c", 10))
    assert rehearse(after, "Amina hears Chidi").consensus_from_any_start


def test_own_views_end_a_swing():
    assert not rehearse(SWING).settles
    after = apply(SWING, "As it stands", KeepOwnView(("a", "b"), 20))
    assert points_of(after.variants[1], "a") == {"a": 20, "b": 80}
    assert rehearse(after, after.variants[1].name).settles_from_any_start


def test_a_joint_round_lets_circles_meet_and_leaves_later_rounds_alone():
    after = apply(CIRCLES, "As it stands", JointRound(2))
    variant = after.variants[1]
    assert variant.name == "2 joint rounds first"
    assert [stage.rounds for stage in variant.plan.stages] == [2, 6]
    before, rehearsal = rehearse(CIRCLES), rehearse(after, variant.name)
    assert rehearsal.spread[2] < 0.2 * before.spread[2]
    assert len(rehearsal.closed_groups) == len(before.closed_groups)


def test_names_are_fresh_and_tell_what_they_build_on():
    once = apply(CIRCLES, "As it stands", Introduce("a", "c", 10))
    twice = apply(once, "As it stands", Introduce("a", "c", 20))
    assert twice.variants[1].name == "Amina hears Chidi (2)"
    further = apply(once, "Amina hears Chidi", Introduce("d", "b", 5))
    assert further.variants[2].name == "Amina hears Chidi, Dolores hears b"


def test_very_long_names_still_make_a_valid_variant():
    long = meeting([[1, 0], [0, 1]], [0, 1], people={"a": {"name": "A" * 200}, "b": {"name": "B" * 200}})
    for _ in range(2):
        long = apply(long, long.variants[-1].name, Introduce("a", "b", 10))
    assert validate(long) == long
    assert len({variant.name for variant in long.variants}) == 3


def test_unknown_names_are_refused():
    with pytest.raises(DeliberateError):
        apply(CIRCLES, "Nowhere", JointRound(1))
    with pytest.raises(DeliberateError):
        apply(CIRCLES, "As it stands", Introduce("a", "nobody", 10))


@pytest.mark.parametrize(
    ("suggestion", "said"),
    [
        (Introduce("a", "c", 10), "Let Amina hear Chidi: 10 of 100 points"),
        (KeepOwnView(("a",), 20), "Let the own view of Amina count for 20 of 100 points"),
        (KeepOwnView(("a", "d"), 12.5), "Let the own views of Amina and Dolores count for 12.5 of 100 points each"),
        (JointRound(1), "Begin with 1 round in which everybody hears everybody"),
        (JointRound(2), "Begin with 2 rounds in which everybody hears everybody"),
    ],
)
def test_suggestions_in_words(suggestion, said):
    assert words(suggestion, CIRCLES.variants[0]) == said
