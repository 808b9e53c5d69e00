"""Edits on people."""

from __future__ import annotations

import math

import pytest
from harbour import AS_IT_STANDS, HARBOUR, MIXED

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.access import arrows_of, person_with_id, variant_named
from deliberate.scenario.values import Person, Plan, Scenario, Stage


def person(scenario: Scenario, person_id: str, variant: str = AS_IT_STANDS) -> Person:
    return person_with_id(variant_named(scenario, variant), person_id)


def test_somebody_new_comes_last_with_an_id_from_the_name() -> None:
    after = edits.add_person(HARBOUR, " Zoë\nŁuk ", variant=AS_IT_STANDS, place=(3, 4), role="expert")
    assert after.variants[0].people[:-1] == HARBOUR.variants[0].people
    assert after.variants[0].people[-1] == Person(id="zoe-luk", name="Zoë Łuk", role="expert", x=3.0, y=4.0)
    assert after.variants[1] is HARBOUR.variants[1]


def test_a_fresh_id_is_free_in_all_variants_since_ids_line_up() -> None:
    after = edits.add_person(HARBOUR, "Wei", variant=MIXED)  # another Wei is in the first variant only
    assert after.variants[1].people[-1].id == "wei-2" == edits.fresh_person_id(HARBOUR, "Wei")


def test_the_same_person_can_be_added_to_another_variant_by_id() -> None:
    after = edits.add_person(HARBOUR, "Wei", variant=MIXED, person_id="wei")
    assert person(after, "wei", MIXED).name == "Wei"
    with pytest.raises(DeliberateError, match='"wei" is in "As it stands" already'):
        edits.add_person(HARBOUR, "Wei", variant=AS_IT_STANDS, person_id="wei")


def test_without_a_name_a_person_goes_by_the_id() -> None:
    once = edits.add_person(HARBOUR, variant=MIXED)
    twice = edits.add_person(once, "  ", variant=MIXED)
    assert [one.shown_name for one in twice.variants[1].people[-2:]] == ["person", "person-2"]


def test_people_can_be_brought_from_another_variant_with_their_settings() -> None:
    after = edits.bring_people(HARBOUR, ["ines", "wei"], source=AS_IT_STANDS, variant=MIXED)
    assert [one.id for one in after.variants[1].people] == ["ines", "tomas", "noor", "wei"]
    assert person(after, "wei", MIXED) is person(HARBOUR, "wei")
    assert after.variants[1].arrows is HARBOUR.variants[1].arrows


def test_a_removed_person_leaves_nothing_behind_in_that_variant() -> None:
    after = edits.remove_people(HARBOUR, "noor", variant=MIXED)
    variant = after.variants[1]
    assert [one.id for one in variant.people] == ["ines", "tomas"]
    assert [stage.tables for stage in variant.plan.stages] == [(("ines", "tomas"),), (), ()]
    assert variant.plan.stages[2].pairs == ()
    assert variant.plan.stages[1] is HARBOUR.variants[1].plan.stages[1]
    assert after.variants[0] is HARBOUR.variants[0]
    assert after.polls is HARBOUR.polls

    without = edits.remove_people(HARBOUR, ["tomas", "ines"], variant=MIXED)
    assert without.variants[1].arrows == ()
    assert without.variants[1].plan.stages[1].speakers == ()
    assert without.ballot.casting_vote == "ines"  # still there in the other variant


def test_whoever_is_in_no_variant_any_more_leaves_polls_and_casting_vote() -> None:
    after = edits.remove_people(HARBOUR, "wei", variant=AS_IT_STANDS)
    assert [dict(poll.beliefs) for poll in after.polls] == [{"ines": 0.6}]  # the second poll had only her
    assert {arrow.source for arrow in after.variants[0].arrows} == {"tomas", "noor", "ines"}

    gone = edits.remove_people(edits.remove_people(HARBOUR, "ines", variant=MIXED), "ines", variant=AS_IT_STANDS)
    assert gone.ballot.casting_vote is None


def test_everybody_can_be_removed() -> None:
    after = edits.remove_people(HARBOUR, ["ines", "tomas", "noor", "wei"], variant=AS_IT_STANDS)
    assert after.variants[0].people == after.variants[0].arrows == ()


def test_an_empty_table_that_was_laid_on_purpose_stays() -> None:
    laid = edits.set_plan(
        HARBOUR,
        Plan(stages=(Stage(setting="tables", tables=(("noor",), (), ("ines", "tomas"))),)),
        variant=MIXED,
    )
    after = edits.remove_people(laid, ["noor"], variant=MIXED)
    assert after.variants[1].plan.stages[0].tables == ((), ("ines", "tomas"))


def test_a_name_is_the_same_in_all_variants_unless_one_is_given() -> None:
    after = edits.rename_person(HARBOUR, "ines", "Inês  Prado")
    assert {person(after, "ines", name).name for name in (AS_IT_STANDS, MIXED)} == {"Inês Prado"}
    after = edits.rename_person(HARBOUR, "ines", "Inês", variant=MIXED)
    assert person(after, "ines").name == "Ines"
    assert person(edits.rename_person(HARBOUR, "ines", ""), "ines").shown_name == "ines"


def test_role_place_presence_and_order() -> None:
    assert (
        person(edits.set_role(HARBOUR, ["tomas", "noor"], " visiting\texpert"), "noor", MIXED).role
        == "visiting expert"
    )
    moved = edits.move_people(HARBOUR, {"ines": None, "wei": (1, 2)}, variant=AS_IT_STANDS)
    assert (person(moved, "ines").x, person(moved, "wei").y) == (None, 2.0)
    assert not person(edits.set_presence(HARBOUR, "ines", False, variant=MIXED), "ines", MIXED).present
    after = edits.reorder_people(HARBOUR, ["noor", "ines", "tomas"], variant=MIXED)
    assert [one.id for one in after.variants[1].people] == ["noor", "ines", "tomas"]
    with pytest.raises(DeliberateError, match="each of them once"):
        edits.reorder_people(HARBOUR, ["noor", "ines", "ines"], variant=MIXED)


def test_beliefs_can_be_set_and_become_unknown() -> None:
    after = edits.set_belief(HARBOUR, ["ines", "wei"], "days", 4, variant=AS_IT_STANDS)
    assert person(after, "wei").beliefs == {"days": 4.0}
    assert person(after, "ines").beliefs == {"levy": 0.7, "days": 4.0}
    assert isinstance(person(after, "wei").beliefs["days"], float)
    after = edits.set_beliefs(after, {"ines": None, "tomas": 9}, "days", variant=AS_IT_STANDS)
    assert person(after, "ines").beliefs == {"levy": 0.7}
    assert person(after, "tomas").beliefs["days"] == 9
    assert person(after, "tomas").margins is not None


def test_none_as_the_variant_means_every_variant_that_they_are_in() -> None:
    after = edits.set_firmness(HARBOUR, ["wei", "ines"], 0.5, variant=None)
    assert [one.firmness for one in after.variants[0].people] == [0.5, 0, 0.25, 0.5]
    assert [one.firmness for one in after.variants[1].people] == [0.5, 0, 0.25]
    with pytest.raises(DeliberateError, match='nobody with the id "jun"'):
        edits.set_firmness(HARBOUR, ["wei", "jun"], 0.5, variant=None)


def test_margin_ballots_and_own_weight() -> None:
    after = edits.set_margin(HARBOUR, ["tomas", "noor"], "levy", 0.25, variant=MIXED)
    assert person(after, "noor", MIXED).margins == {"levy": 0.25}
    after = edits.set_margin(after, "tomas", "levy", None, variant=MIXED)
    assert person(after, "tomas", MIXED).margins == {"days": 1.0}
    assert person(edits.set_ballots(HARBOUR, "ines", 0, variant=MIXED), "ines", MIXED).ballots == 0
    assert person(edits.set_own_weight(HARBOUR, "ines", 2, variant=MIXED), "ines", MIXED).own_weight == 2


@pytest.mark.parametrize(
    ("edit", "said"),
    [
        (lambda: edits.set_belief(HARBOUR, "ines", "days", 10, variant=MIXED), "must lie between 1 and 9, is 10"),
        (lambda: edits.set_belief(HARBOUR, "ines", "tax", 1, variant=MIXED), 'no question with the id "tax"'),
        (lambda: edits.set_margin(HARBOUR, "ines", "levy", -0.1, variant=MIXED), "must be at least 0, is -0.1"),
        (lambda: edits.set_firmness(HARBOUR, "ines", 1.5, variant=MIXED), "must lie between 0 and 1, is 1.5"),
        (
            lambda: edits.set_ballots(HARBOUR, "ines", math.inf, variant=MIXED),
            "votes must be a finite number, is Inf",
        ),
        (
            lambda: edits.set_own_weight(HARBOUR, "ines", math.nan, variant=MIXED),
            "own view must be a finite number, is NaN",
        ),
        (lambda: edits.move_people(HARBOUR, {"ines": (0, math.nan)}, variant=MIXED), "must be a finite number"),
        (lambda: edits.set_firmness(HARBOUR, ["ines", "wei"], 0.5, variant=MIXED), '"wei" in "Mixed tables"'),
        (lambda: edits.remove_people(HARBOUR, "wei", variant=MIXED), '"wei" in "Mixed tables"'),
        (lambda: edits.rename_person(HARBOUR, "ines", "x" * 201), "200"),
        (lambda: edits.add_person(HARBOUR, "a\x07b", variant=MIXED), "control character"),
        (lambda: edits.add_person(HARBOUR, "a", variant=MIXED, person_id="no spaces"), "id"),
    ],
)
def test_what_cannot_be_done_is_said_in_words(edit, said) -> None:
    with pytest.raises(DeliberateError, match=said):
        edit()


def test_an_edit_that_changes_nothing_gives_back_the_same_meeting() -> None:
    assert edits.set_belief(HARBOUR, "ines", "levy", 0.7, variant=MIXED) is HARBOUR
    assert edits.set_belief(HARBOUR, "ines", "days", None, variant=MIXED) is HARBOUR
    assert edits.rename_person(HARBOUR, "ines", "Ines") is HARBOUR
    assert edits.remove_people(HARBOUR, [], variant=MIXED) is HARBOUR
    assert edits.move_people(HARBOUR, {"ines": (0, 0)}, variant=MIXED) is HARBOUR


def test_arrows_of_those_who_stay_are_shared() -> None:
    after = edits.remove_people(HARBOUR, "wei", variant=AS_IT_STANDS)
    for kept, before in zip(
        arrows_of(after.variants[0], "ines"), arrows_of(HARBOUR.variants[0], "ines"), strict=True
    ):
        assert kept is before
