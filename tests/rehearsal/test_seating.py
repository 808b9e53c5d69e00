from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from meetings import meeting, meetings

from deliberate import files
from deliberate.errors import DeliberateError
from deliberate.files.resources import demo_scenarios
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.seating import sheet, told
from deliberate.rehearsal.seating.plan import as_variant
from deliberate.rehearsal.seating.seat import figure, seat
from deliberate.rehearsal.seating.wish import Wish, table_sizes
from deliberate.scenario import edits
from deliberate.scenario.values import Plan, Question, Stage

# Two circles of four who all hear everybody a little: 80 and more on one side, 30 and less on the other.
CIRCLES = meeting(
    [[20 if i == j else 15 if i // 4 == j // 4 else 5 for j in range(8)] for i in range(8)],
    [95, 90, 85, 80, 30, 20, 10, 5],
    people={
        "a": {"name": "Amina", "role": "speaker"},
        "b": {"name": "Bilal", "role": "scribe"},
        "e": {"name": "Emeka", "role": "speaker"},
        "f": {"name": "Farah <b>", "role": "scribe"},
    },
    plan=Plan((Stage("Plenary", 1),)),
)
NAME, Q = "As it stands", CIRCLES.questions[0]
DEMOS = {path.name.split(".")[0]: files.read(path) for path in demo_scenarios()}


def test_mixed_tables_bring_circles_closer():
    found = seat(CIRCLES, None, None, Wish(tables=2, rotations=1, rounds=2))
    assert found.every == 35
    assert found.after < found.random_mean < found.before
    assert found.after <= found.random_best + 1e-9
    for table in found.rotations[0]:
        assert sum(person in "abcd" for person in table) == 2
    assert told.summary(found, Q) == (
        f"With one rotation at two tables views are {found.after:.1f} apart at the plan's end, instead of "
        f"{found.before:.1f} by the plan as it is; with 1,000 seatings at random it is {found.random_mean:.1f} on "
        f"average and {found.random_best:.1f} at best."
    )
    assert told.standing(found) == "No seating does more: all 35 ways to seat everybody were looked at."
    one_table = seat(CIRCLES, None, None, Wish(tables=1, rotations=1))
    assert told.standing(one_table) == "No seating does more: there is one way only to seat everybody."
    assert told.cautions(found, CIRCLES.variants[0]) == ()


def test_weights_at_the_ends_of_double_range_after_the_tables():
    plan = Plan((Stage("Panel", 2, "panel", speakers=("a",)),))
    question = Question("q", "What is asked?", 0, 100, hearing_range=60.0)
    heavy = meeting(np.full((4, 4), 1.7e308).tolist(), [10, 50, 60, 90], plan=plan, question=question)
    light = meeting(np.ones((4, 4)).tolist(), [10, 50, 60, 90], plan=plan, question=question)
    wish = Wish(tables=2, rotations=1)
    assert seat(heavy, None, None, wish).after == pytest.approx(seat(light, None, None, wish).after)


@pytest.mark.parametrize("goal", ["less-spread", "more-voices"])
@pytest.mark.parametrize("place", ["before", "after", "instead"])
def test_the_variant_does_what_was_told_to_the_digit(goal, place):
    tables = Stage("Home tables", 2, "tables", tables=(("a", "b", "c", "d"), ("e", "f", "g", "h")))
    plan = Plan((Stage("Opening", 1), tables, Stage("Plenary", 1)))
    scenario = edits.set_plan(CIRCLES, plan, variant=NAME)
    found = seat(scenario, None, None, Wish(size=4, goal=goal, place=place, rotations=2))
    after, name = as_variant(scenario, found)
    assert name == "Two tables, twice mixed"
    assert [variant.name for variant in after.variants] == [NAME, name]
    assert after.variants[0] == scenario.variants[0]
    assert figure(goal, after.variants[1], Q) == found.after
    if goal == "less-spread":
        assert rehearse(after, name).spread[-1] == found.after
        assert rehearse(scenario).spread[-1] == found.before


@pytest.mark.parametrize("name", ["open-ground", "riverbank-panel", "night-market", "festival-route"])
def test_a_demo_gains_and_random_figures_are_those_of_the_engine(name):
    scenario = DEMOS[name]
    question = scenario.questions[0]
    found = seat(scenario, None, None, Wish(size=4, rotations=1, rounds=1), effort=0.03)
    assert found.after <= found.random_best + 1e-9 * question.width
    after, added = as_variant(scenario, found)
    shown = rehearse(after, added).rounds[-1]
    present = [person.present for person in scenario.variants[0].people]
    assert np.ptp(shown[present]) == pytest.approx(found.after, abs=1e-12 * question.width)


@settings(max_examples=30)
@given(scenario=meetings(most=7), wish=st.builds(
    Wish,
    size=st.sampled_from([2, 3]),
    rotations=st.integers(1, 2),
    rounds=st.integers(1, 2),
    goal=st.sampled_from(["less-spread", "more-voices"]),
    place=st.sampled_from(["before", "after", "instead"]),
    unheard=st.sampled_from(["own", "rescale"]),
))  # fmt: skip
def test_whatever_the_meeting_the_best_is_at_least_as_good_as_any_at_random(scenario, wish):
    present = sum(person.present for person in scenario.variants[0].people)
    assume(present >= 2 and not (wish.goal == "more-voices" and scenario.questions[0].hearing_range))
    found = seat(scenario, None, None, wish)
    slack = 1e-9 * scenario.questions[0].width
    if wish.goal == "less-spread":
        assert found.after <= found.random_best + slack
        assert found.random_best <= found.random_mean + slack
    else:
        assert found.after >= found.random_best - 1e-9
    after, name = as_variant(scenario, found)
    assert figure(wish.goal, after.variants[1], scenario.questions[0]) == found.after
    seated = sorted(person for table in found.rotations[0] for person in table)
    assert seated == sorted(person.id for person in scenario.variants[0].people if person.present)
    assert told.summary(found, scenario.questions[0])
    assert name in told.variant_name(found)


def test_conditions_are_kept_in_every_rotation():
    wish = Wish(
        tables=2, rotations=3, together=(("a", "e"),), apart=(("b", "c"), ("g", "h")), roles=("speaker", "scribe")
    )
    # Amina and Emeka, the two speakers, cannot sit together when each table needs a speaker.
    with pytest.raises(DeliberateError) as refused:
        seat(CIRCLES, None, None, wish)
    assert str(refused.value) == (
        "these cannot all be met with 2 tables of 4: Amina and Emeka at one table and "
        'somebody with the role "speaker" at every table'
    )
    wish = Wish(tables=2, rotations=3, together=(("a", "f"),), apart=wish.apart, roles=wish.roles)
    found = seat(CIRCLES, None, None, wish)
    for tables in found.rotations:
        for table in tables:
            assert ("a" in table) == ("f" in table)
            assert not {"b", "c"} <= set(table)
            assert not {"g", "h"} <= set(table)
            assert {"a", "e"} & set(table)
            assert {"b", "f"} & set(table)
    assert told.conditions_listed(wish, CIRCLES.variants[0]) == (
        "Amina and Farah <b> at one table, Bilal and c never at one table, g and h never at one table, somebody with "
        'the role "speaker" at every table and somebody with the role "scribe" at every table'
    )


@pytest.mark.parametrize(
    ("wish", "why"),
    [
        (Wish(tables=5), "five tables for eight people would leave somebody alone at one: lay at most 4"),
        (Wish(tables=0), "there must be at least one table, not 0"),
        (Wish(), "give either the number of tables or the number of people at one"),
        (Wish(size=1), "at a table sit at least two, not 1"),
        (Wish(tables=2, rotations=0), "people are seated 1 to 20 times, not 0"),
        (Wish(tables=2, rounds=0), "a stage at tables has 1 to 1,000 rounds, not 0"),
        (
            Wish(tables=3, roles=("speaker",)),
            'somebody with the role "speaker" at every table: for 3 tables there are 2 with that role present',
        ),
        (Wish(tables=2, apart=(("a", "nobody"),)), 'there is nobody with the id "nobody" in "As it stands"'),
        (
            Wish(tables=2, apart=(("a", "b"), ("b", "c"), ("a", "c"))),
            "these cannot all be met with 2 tables of 4: Amina and Bilal never at one table, Bilal and c never at "
            "one table and Amina and c never at one table",
        ),
    ],
)
def test_a_wish_that_cannot_be_met_says_why(wish, why):
    with pytest.raises(DeliberateError) as refused:
        seat(CIRCLES, None, None, wish)
    assert str(refused.value) == why


def test_one_condition_alone_can_be_too_much():
    lonely = edits.remove_arrows(CIRCLES, [("a", other) for other in "bcdefgh"], variant=NAME)
    lonely = edits.remove_arrows(lonely, [(other, "a") for other in "bcdefgh"], variant=NAME)
    with pytest.raises(DeliberateError) as refused:
        seat(lonely, None, None, Wish(tables=2, linked=True))
    assert str(refused.value) == ("this cannot be met with 2 tables of 4: everybody hears or is heard at their table")


def test_no_arrow_is_invented():
    found = seat(DEMOS["air-sensor-label"], None, None, Wish(tables=2))
    assert found.apart_groups == 2
    assert told.changes_nothing(found, DEMOS["air-sensor-label"].questions[0])
    assert "changes nothing that shows" in told.summary(found, DEMOS["air-sensor-label"].questions[0])
    caution, same = told.cautions(found, DEMOS["air-sensor-label"].variants[0])
    assert found.rotations[0] == found.rotations[1]
    assert same == "The tables are the same each time: in this sketch seating people anew gains nothing."
    assert caution.startswith("The sketch falls into two groups without an arrow between them.")
    after, name = as_variant(DEMOS["air-sensor-label"], found)
    assert after.variants[1].arrows == after.variants[0].arrows
    assert after.variants[1].name == name


def test_who_hears_nobody_at_the_table_is_told():
    scenario = meeting([[1, 1, 0, 0], [1, 1, 0, 0], [1, 0, 1, 0], [0, 1, 0, 1]], [0, 30, 60, 90])
    found = seat(scenario, None, None, Wish(tables=2, rotations=1, rounds=1))
    assert found.rotations == ((("a", "d"), ("b", "c")),) or found.hear_nobody[0]
    listed = [one for there in found.hear_nobody for one in there]
    for tables, alone in zip(found.rotations, found.hear_nobody, strict=True):
        for table in tables:
            for one in table:
                hears = {arrow.source for arrow in scenario.variants[0].arrows if arrow.listener == one}
                assert (one in alone) == (not hears & set(table))
    if listed:
        assert told.cautions(found, scenario.variants[0])[-1].endswith(
            "nobody at the table in at least one rotation."
        )


def test_the_absent_have_no_chair_and_do_not_count():
    scenario = edits.set_presence(CIRCLES, ["h"], False, variant=NAME)
    found = seat(scenario, None, None, Wish(tables=2, rotations=1, rounds=5))
    assert sorted(person for table in found.rotations[0] for person in table) == list("abcdefg")
    after, name = as_variant(scenario, found)
    assert found.after == np.ptp(rehearse(after, name).rounds[-1][:-1])


def test_with_a_hearing_range_only_the_spread_can_be_sought():
    question = Question("q", "What is asked?", 0, 100, hearing_range=30)
    scenario = meeting([[1] * 6] * 6, [0, 20, 40, 60, 80, 100], question=question)
    found = seat(scenario, None, None, Wish(tables=2, rotations=2, rounds=1))
    assert found.every == 100
    assert found.after <= found.random_best
    with pytest.raises(DeliberateError, match="with a hearing range"):
        seat(scenario, None, None, Wish(tables=2, goal="more-voices"))


def test_seeds_repeat_and_stopping_gives_the_best_so_far():
    scenario, wish = DEMOS["open-ground"], Wish(tables=8, rotations=1)
    assert seat(scenario, None, None, wish, effort=0.02) == seat(scenario, None, None, wish, effort=0.02)
    stopped = seat(scenario, None, None, wish, stopped=lambda: True)
    assert not stopped.finished
    assert told.standing(stopped) == "The search was stopped; this is the best seating so far."


def test_how_many_others_people_come_to_sit_with():
    found = seat(CIRCLES, None, None, Wish(tables=2, rotations=1))
    assert told.company(found) == "Everybody sits with 3 of 7 others on average."
    twice = replace(found, rotations=((tuple("abcd"), tuple("efgh")), (tuple("abef"), tuple("cdgh"))))
    assert told.company(twice) == "In all, everybody sits with 5 of 7 others on average."


def test_table_sizes_are_as_equal_as_can_be():
    assert table_sizes(10, Wish(size=4)) == (4, 3, 3)
    assert table_sizes(10, Wish(tables=3)) == (4, 3, 3)
    assert table_sizes(40, Wish(tables=5)) == (8,) * 5
    assert table_sizes(5, Wish(size=2)) == (3, 2)
    assert table_sizes(3, Wish(size=2)) == (3,)
    with pytest.raises(DeliberateError, match="at least two people"):
        table_sizes(1, Wish(tables=1))


def test_the_list_names_people_and_tables_and_nothing_else():
    found = seat(CIRCLES, None, None, Wish(tables=2, rotations=2, together=(("a", "b"),)))
    text = sheet.as_text("The label", found, CIRCLES.variants[0])
    lines = text.splitlines()
    assert lines[:3] == ["The label", "", "Mixed tables 1"]
    assert lines[3].startswith("Table 1: Amina, Bilal, ")
    assert "Amina: table 1, then table 1" in lines
    assert not any(figure in text for figure in ("95", "90", "85"))


def test_names_in_the_printed_list_are_never_markup():
    found = seat(CIRCLES, None, None, Wish(tables=2))
    html = sheet.as_html("<i>Label</i>", found, CIRCLES.variants[0])
    assert "Farah &lt;b&gt;" in html
    assert "Farah <b>" not in html
    assert "<h1>&lt;i&gt;Label&lt;/i&gt;</h1>" in html
