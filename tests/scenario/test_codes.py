"""Codes instead of names: nothing of a name is left, and edits on the coded meeting are edits on the meeting."""

from __future__ import annotations

import re

import pytest
from harbour import HARBOUR
from hypothesis import assume, given
from hypothesis import strategies as st
from msgspec.structs import replace
from strategies import scenarios

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.checks import validate
from deliberate.scenario.codes import SOMEBODY, coded, decoded
from deliberate.scenario.values import Person, Plan, Question, Scenario, Stage, Variant


def meeting(*names: str, title: str = "Board", variant: str = "As it stands", stage: str = "Plenary") -> Scenario:
    people = tuple(Person(id=f"id-{place}", name=name, role="chair") for place, name in enumerate(names))
    return Scenario(
        title=title,
        questions=(Question(id="q", text="Adopt it?", low=0.0, high=1.0),),
        variants=(Variant(name=variant, people=people, notes="of them", plan=Plan((Stage(name=stage),))),),
        notes="whose idea it was",
    )


def test_everybody_gets_a_code_in_the_order_of_the_lists() -> None:
    shown = coded(meeting("Ngozi", "Zoë Łuk", "王伟")).shown
    assert [person.name for person in shown.variants[0].people] == ["P1", "P2", "P3"]
    assert {person.role for person in shown.variants[0].people} == {""}
    assert (shown.notes, shown.variants[0].notes) == ("", "")


def test_a_code_stays_with_a_person_whoever_leaves_or_comes() -> None:
    first = coded(meeting("Ngozi", "Inés", "Tomas"))
    left = edits.remove_people(first.real, ["id-0"], variant="As it stands")
    second = coded(left, first.codes)
    assert [person.name for person in second.shown.variants[0].people] == ["P2", "P3"]
    joined = edits.add_person(left, "Hana", variant="As it stands")
    third = coded(joined, second.codes)
    assert [person.name for person in third.shown.variants[0].people] == ["P2", "P3", "P4"]


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("Ngozi Adeyemi first", "P1 first"),
        ("Adeyemi's paper, then INÉS", "P1's paper, then P2"),
        ("What Inés wants", "What P2 wants"),
        ("Inésita is somebody else", "Inésita is somebody else"),
        ("王伟先说", "P3先说"),
        ("a chair for the chair", "a chair for the chair"),
        ("Ruiz and Ruiz", f"{SOMEBODY} and {SOMEBODY}"),
        ("P9 and P1", "P9 and P1"),
    ],
)
def test_names_in_running_text_are_replaced(text: str, expected: str) -> None:
    people = ("Ngozi Adeyemi", "Inés", "王伟", "Ana Ruiz", "Paz Ruiz", "P1")
    shown = coded(meeting(*people, title=text, variant=text, stage=text)).shown
    variant = shown.variants[0]
    assert (shown.title, variant.name, variant.plan.stages[0].name) == (expected, expected, expected)


def test_variants_that_read_the_same_without_names_stay_apart() -> None:
    scenario = meeting("Ana Ruiz", variant="Ana first")
    scenario = replace(scenario, variants=(*scenario.variants, replace(scenario.variants[0], name="Ruiz first")))
    assert [variant.name for variant in coded(scenario).shown.variants] == ["P1 first", "P1 first (2)"]


@given(scenarios())
def test_a_coded_meeting_is_valid_and_holds_no_name(scenario: Scenario) -> None:
    coding = coded(scenario)
    shown = validate(coding.shown)
    assert decoded(coding, shown) is scenario
    codes = set(coding.codes.values())
    assert {person.shown_name for variant in shown.variants for person in variant.people} <= codes
    for person in (person for variant in scenario.variants for person in variant.people):
        name = person.shown_name
        if name in codes or not re.fullmatch(r"\w(.*\w)?", name):
            continue
        stage_names = [stage.name for variant in shown.variants for stage in variant.plan.stages]
        for text in (shown.title, shown.ballot.name, *stage_names):
            assert not re.search(rf"(?<!\w){re.escape(name)}(?!\w)", text), (name, text)


@given(scenarios(), st.data())
def test_an_edit_with_codes_is_the_edit_with_names(scenario: Scenario, data: st.DataObject) -> None:
    coding = coded(scenario)
    place = data.draw(st.integers(0, len(scenario.variants) - 1))
    ids = [person.id for person in scenario.variants[place].people]
    assume(ids)
    one, other = data.draw(st.sampled_from(ids)), data.draw(st.sampled_from(ids))
    question = data.draw(st.sampled_from(scenario.questions))

    def change(at: Scenario) -> Scenario:
        variant = at.variants[place].name
        match kind:
            case "move":
                return edits.move_people(at, {one: (3.0, 4.0)}, variant=variant)
            case "belief":
                return edits.set_belief(at, [one], question.id, question.high, variant=variant)
            case "points":
                return edits.set_points(at, one, other, 30, variant=variant)
            case "remove":
                return edits.remove_people(at, [one], variant=variant)
            case "rounds":
                return edits.change_stage(at, 0, variant=variant, rounds=7)
            case "copy":
                return edits.add_variant(at, copy_of=variant, name="Another way")
            case "order":
                return edits.move_variant(at, variant, 0)
            case "scale":
                return edits.change_question(at, question.id, undecided=question.width / 8)
            case "quorum":
                return edits.change_ballot(at, quorum="1/3")
        raise AssertionError(kind)

    kind = data.draw(
        st.sampled_from(("move", "belief", "points", "remove", "rounds", "copy", "order", "scale", "quorum"))
    )
    try:
        wanted = change(scenario)
    except DeliberateError:
        with pytest.raises(DeliberateError):
            change(coding.shown)
        return
    assert decoded(coding, change(coding.shown)) == wanted


def test_what_an_edit_leaves_alone_is_the_same_object() -> None:
    coding = coded(HARBOUR)
    variant = coding.shown.variants[0]
    one = variant.people[0].id
    after = decoded(coding, edits.move_people(coding.shown, {one: (1.0, 2.0)}, variant=variant.name))
    assert after.questions[0] is HARBOUR.questions[0]
    assert all(a is b for a, b in zip(after.variants[1:], HARBOUR.variants[1:], strict=True))
    assert all(a is b for a, b in zip(after.variants[0].people[1:], HARBOUR.variants[0].people[1:], strict=True))
    assert after.variants[0].arrows is HARBOUR.variants[0].arrows


def test_somebody_new_keeps_the_name_that_was_typed() -> None:
    coding = coded(meeting("Ngozi"))
    after = decoded(coding, edits.add_person(coding.shown, "Zofia", variant="As it stands"))
    assert [person.name for person in after.variants[0].people] == ["Ngozi", "Zofia"]


def test_codes_in_new_texts_become_names() -> None:
    coding = coded(meeting("Ngozi", "Tomas"))
    copied = edits.add_variant(coding.shown, copy_of="As it stands", name="P2 hears P1")
    copied = edits.set_variant_notes(copied, "P2 hears P1", "Let P2 hear P1; not P10.")
    after = decoded(coding, copied).variants[1]
    assert (after.name, after.notes) == ("Tomas hears Ngozi", "Let Tomas hear Ngozi; not P10.")
    clip = edits.extract(coding.shown.variants[0], ["id-0"])
    doubled = decoded(coding, edits.paste(coding.shown, clip, variant="As it stands"))
    assert [person.name for person in doubled.variants[0].people] == ["Ngozi", "Tomas", "Ngozi"]


def test_texts_with_codes_become_texts_with_names_again() -> None:
    real = meeting("Ngozi", title="Ngozi's board", variant="Ngozi first", stage="Ngozi speaks")
    coding = coded(real)
    renamed = edits.change_stage(coding.shown, 0, variant="P1 first", rounds=3)
    assert decoded(coding, renamed).variants[0].plan.stages[0].name == "Ngozi speaks"
    retitled = decoded(coding, edits.rename_variant(coding.shown, "P1 first", "Another order"))
    assert (retitled.title, retitled.variants[0].name) == ("Ngozi's board", "Another order")
    assert retitled.variants[0].people is real.variants[0].people
    assert retitled.variants[0].notes == "of them"


@pytest.mark.parametrize(
    "change",
    [
        lambda s: edits.rename_person(s, "id-0", "Zofia"),
        lambda s: edits.set_notes(s, "other notes"),
        lambda s: edits.set_variant_notes(s, "As it stands", "other notes"),
        lambda s: edits.set_role(s, "id-0", "guest"),
    ],
    ids=["name", "notes", "variant notes", "role"],
)
def test_nothing_hidden_is_overwritten_unseen(change) -> None:
    coding = coded(meeting("Ngozi"))
    with pytest.raises(DeliberateError, match="hidden while codes are shown"):
        decoded(coding, change(coding.shown))


def test_ids_in_messages_are_codes() -> None:
    coding = coded(meeting("Ngozi"))
    assert coding.message('nobody is called "id-0" or "x"') == 'nobody is called "P1" or "x"'
