import pytest
from meetings import meeting

from deliberate.errors import DeliberateError
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import (
    EndInPlenary,
    GoBetween,
    GoRounds,
    Introduce,
    Introductions,
    JointRound,
    KeepOwnView,
    MixedTables,
    MovePoints,
    PairTalks,
    ReorderStages,
    SpeakFirst,
)
from deliberate.rehearsal.suggestions import apply, words
from deliberate.scenario import edits
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


def test_what_is_kept_of_a_change_has_no_invisible_marks():
    name = "\u05de\u05e8\u05d9\u05dd"
    before = meeting([[1, 0], [0, 1]], [80, 20], people={"a": {"name": name}})
    change = Introduce("a", "b", 10)
    assert words(change, before.variants[0]) == f"Let \u2068{name}\u2069 hear b: 10 of 100 points"
    tried = apply(before, "As it stands", change).variants[1]
    assert (tried.name, tried.notes) == (f"{name} hears b", f"Let {name} hear b: 10 of 100 points.")


def test_very_long_names_still_make_a_valid_variant():
    long = meeting([[1, 0], [0, 1]], [0, 1], people={"a": {"name": "A" * 200}, "b": {"name": "B" * 200}})
    for _ in range(2):
        long = apply(long, long.variants[-1].name, Introduce("a", "b", 10))
    assert validate(long) == long
    assert len({variant.name for variant in long.variants}) == 3


PAIRS = (("a", "c"), ("b", "d"))
CHANGES = [
    (
        Introductions((("a", "c"), ("c", "a")), 10),
        "Let Amina and Chidi hear each other: 10 of 100 points each",
        "Amina and Chidi hear each other",
    ),
    (
        Introductions((("a", "c"), ("d", "b")), 10),
        "Let Amina hear Chidi and Dolores hear b: 10 of 100 points each",
        "Two introductions",
    ),
    (
        Introductions((("a", "c"), ("a", "d")), 2.5),
        "Let Amina hear Chidi and Dolores: 2.5 of 100 points each",
        "Two introductions",
    ),
    (
        MovePoints("a", "a", "b", 10),
        "Let Amina give 10 of 100 points to b instead of the own view",
        "Amina: b for own view",
    ),
    (
        MovePoints("a", "b", "a", 10),
        "Let Amina give 10 of 100 points to the own view instead of b",
        "Amina: own view for b",
    ),
    (
        GoBetween(("a", "c"), 10),
        "Bring in a go-between without a vote or a view of her own, who hears Amina and Chidi alike; each gives her"
        " 10 of 100 points",
        "A go-between",
    ),
    (
        SpeakFirst(("b", "c", "d"), 2, 0.0),
        "Begin with two rounds in which all but Amina are heard",
        "b, Chidi and Dolores heard first",
    ),
    (
        SpeakFirst(("a",), 1, 5),
        "Begin with one round in which only Amina is heard; all give Amina 5 of 100 points or more",
        "Amina heard first",
    ),
    (
        PairTalks(PAIRS, 2, 10),
        "Begin with two rounds of talks in pairs: Amina with Chidi and b with Dolores; the two give each other"
        " 10 of 100 points or more",
        "Talks in pairs first",
    ),
    (
        MixedTables(PAIRS, 3, 10),
        "Begin with three rounds at two mixed tables, the first for Amina and Chidi; those new to each other give"
        " each other 10 of 100 points",
        "Mixed tables first",
    ),
    (
        GoRounds(40),
        "Go round in every round: everybody hears all others alike, own view 40 of 100 points",
        "Go-rounds",
    ),
    (
        EndInPlenary(1),
        "End with one round in plenary, in which all are heard who are heard at all",
        "Plenary at the end",
    ),
]


@pytest.mark.parametrize(("suggestion", "said", "name"), CHANGES)
def test_changes_of_process_in_words_and_as_variants(suggestion, said, name):
    assert words(suggestion, CIRCLES.variants[0]) == said
    after = apply(CIRCLES, "As it stands", suggestion)
    assert [variant.name for variant in after.variants] == ["As it stands", name]
    assert after.variants[0] is CIRCLES.variants[0]
    assert after.variants[1].notes == f"{said}."
    assert validate(after) is after
    assert after.variants[1].plan.rounds == 6  # at equal length


def test_people_who_meet_go_on_hearing_each_other():
    tables = apply(CIRCLES, "As it stands", MixedTables(PAIRS, 3, 10)).variants[1]
    assert [(stage.setting, stage.rounds) for stage in tables.plan.stages] == [("tables", 3), ("plenary", 3)]
    assert points_of(tables, "a") == {"a": 36, "b": 54, "c": 10}
    talks = apply(CIRCLES, "As it stands", PairTalks((("a", "b"), ("c", "d")), 2, 70)).variants[1]
    assert points_of(talks, "b") == pytest.approx({"b": 30, "a": 70})
    assert points_of(talks, "d") == pytest.approx({"d": 30, "c": 70})
    with pytest.raises(DeliberateError):  # 70 points for each of two partners
        apply(CIRCLES, "As it stands", PairTalks((("a", "b"), ("c", "a")), 2, 70))


def test_speaking_first_changes_points_only_where_some_are_given():
    kept = apply(CIRCLES, "As it stands", SpeakFirst(("a", "c"), 2, 0.0)).variants[1]
    assert kept.arrows == CIRCLES.variants[0].arrows
    assert kept.plan.stages[0].speakers == ("a", "c")
    heard = apply(CIRCLES, "As it stands", SpeakFirst(("a", "c"), 2, 5)).variants[1]
    assert points_of(heard, "d")["a"] == points_of(heard, "a")["c"] == 5
    assert points_of(heard, "b") == pytest.approx({"b": 38, "a": 57, "c": 5})


def test_stages_in_another_order_in_words_and_as_a_variant():
    two = edits.set_plan(CIRCLES, Plan((Stage("Talk", 3), Stage("Quiet", 1, "silence"))), variant="As it stands")
    assert words(ReorderStages((1, 0)), two.variants[0]) == "Take the stages in another order: Quiet and Talk"
    after = apply(two, "As it stands", ReorderStages((1, 0))).variants[1]
    assert (after.name, [stage.name for stage in after.plan.stages]) == ("Quiet first", ["Quiet", "Talk"])


def test_long_lists_are_shortened():
    many = meeting([[1] * 12] * 12, [50] * 12)
    ids = [person.id for person in many.variants[0].people]
    pairs = tuple(zip(ids[:6], ids[6:], strict=True))
    assert "a with g, b with h, c with i and 3 more pairs" in words(PairTalks(pairs, 1, 10), many.variants[0])
    said = words(Introductions(pairs, 10), many.variants[0])
    assert said == "Let a hear g, b hear h, c hear i and 3 more listen to somebody new: 10 of 100 points each"


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
        (JointRound(1), "Begin with one round in which everybody hears everybody"),
        (JointRound(2), "Begin with two rounds in which everybody hears everybody"),
    ],
)
def test_suggestions_in_words(suggestion, said):
    assert words(suggestion, CIRCLES.variants[0]) == said
