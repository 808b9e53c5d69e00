from __future__ import annotations

import pytest
from circles import AS_IT_STANDS, CIRCLES, LABEL
from hypothesis import given
from hypothesis import strategies as st

from deliberate.errors import DeliberateError
from deliberate.scenario.values import FrozenDict, Person, Scenario
from deliberate.window.sidebar.people_columns import Column, Row
from deliberate.window.sidebar.people_sheet import MOST_ROWS, as_text, cells_in, pasted

ALL = list(Column)
IDS = [person.id for person in CIRCLES.variants[0].people]


def row(**fields: object) -> Row:
    return Row(Person(id="p", **fields), own=40.0, now=61.25)


def paste(text: str, first: int = 0, column: Column = Column.NAME, scenario: Scenario = CIRCLES) -> Scenario:
    columns = [one for one in ALL if one >= column]
    return pasted(cells_in(text), IDS[first:], columns, question="label", variant=AS_IT_STANDS)(scenario)


def test_a_row_is_one_line_of_exact_cells() -> None:
    somebody = row(
        name="Amina", role="chair", beliefs=FrozenDict(label=12_000.5), margins=FrozenDict(label=0.1), firmness=0.29
    )
    assert as_text([somebody], ALL, LABEL) == "Amina\t12000.5\t61.25\t0.1\t29\t40\t1\tyes\tchair\n"


@pytest.mark.parametrize("name", ["=1+1", "+49 30", "-Ida", "@home", "=HYPERLINK(1)"])
def test_no_name_is_taken_for_a_formula(name: str) -> None:
    text = as_text([row(name=name, role=name)], [Column.NAME, Column.ROLE], LABEL)
    assert all(cell.startswith("'") for cell in text.rstrip("\n").split("\t"))
    assert cells_in(text) == [[name, name]]


def test_negative_numbers_stay_numbers() -> None:
    assert as_text([row(beliefs=FrozenDict(label=-3.0))], [Column.START], LABEL) == "-3\n"


names = st.text(st.characters(blacklist_categories=("Cc", "Cs")), min_size=1, max_size=12).filter(
    lambda name: " ".join(name.split()) == name and name and not name.startswith("'")
)


@given(st.lists(names, min_size=1, max_size=6))
def test_names_survive_copy_and_paste(given_names: list[str]) -> None:
    text = as_text([row(name=name) for name in given_names], [Column.NAME], LABEL)
    assert cells_in(text) == [[name] for name in given_names]


def test_cells_go_over_people_line_by_line() -> None:
    after = paste("Ama\t10\nBo\t20,5", first=1)
    changed = after.variants[0].people[1:3]
    assert [(one.name, one.beliefs["label"]) for one in changed] == [("Ama", 10.0), ("Bo", 20.5)]
    assert after.variants[0].people[3:] == CIRCLES.variants[0].people[3:]


def test_an_empty_start_is_not_known_and_other_empty_cells_stay() -> None:
    after = paste("\t\t\t\t\t\t\t\tchair").variants[0].people[0]
    before = CIRCLES.variants[0].people[0]
    assert "label" not in after.beliefs
    assert (after.name, after.own_weight, after.present) == (before.name, before.own_weight, before.present)
    assert after.role == "chair"


def test_what_people_think_now_is_passed_over() -> None:
    after = paste("50\t99\t5", column=Column.START).variants[0].people[0]
    assert (after.beliefs["label"], after.margins["label"]) == (50.0, 5.0)


def test_lines_beyond_the_last_person_add_people() -> None:
    after = paste("Farah\t1\nGoran\t2\nHana\t3", first=5).variants[0].people
    assert [person.name for person in after[5:]] == ["Farah", "Goran", "Hana"]
    assert [person.beliefs["label"] for person in after[5:]] == [1.0, 2.0, 3.0]


def test_empty_lines_beyond_the_last_person_are_passed_over() -> None:
    """A list from a letter or a sheet is often set in groups."""
    after = paste("Gulnara\t40\n\n \t\nHina\t60\n", first=6)
    assert [person.name for person in after.variants[0].people[6:]] == ["Gulnara", "Hina"]
    kept = paste("Gulnara\n\nHina").variants[0].people
    assert [person.name for person in kept[:3]] == ["Gulnara", CIRCLES.variants[0].people[1].name, "Hina"]


def test_without_names_no_one_can_be_added() -> None:
    with pytest.raises(DeliberateError, match="paste names as well"):
        paste("1\n2", first=5, column=Column.START)


def test_too_many_columns_are_refused_with_a_remedy() -> None:
    with pytest.raises(DeliberateError, match="start further left"):
        paste("yes\tchair\tmore", column=Column.PRESENT)


@pytest.mark.parametrize(
    ("text", "column", "what"),
    [
        ("101", Column.START, "starting belief"),
        ("much", Column.START, "starting belief"),
        ("-1", Column.MARGIN, "margin"),
        ("101", Column.FIRMNESS, "firmness"),
        ("perhaps", Column.PRESENT, "presence"),
        ("-2", Column.BALLOTS, "votes"),
    ],
)
def test_one_wrong_cell_refuses_the_whole(text: str, column: Column, what: str) -> None:
    with pytest.raises(DeliberateError, match=what):
        paste(text, column=column)


def test_our_own_headings_are_no_person() -> None:
    assert cells_in("Name\tstarts\nAmina\t5") == [["Amina", "5"]]


@pytest.mark.parametrize("text", ["", "\n\n", "\t\t\n"])
def test_nothing_is_refused(text: str) -> None:
    with pytest.raises(DeliberateError, match="nothing on the clipboard"):
        cells_in(text)


def test_too_much_is_refused() -> None:
    with pytest.raises(DeliberateError, match="at a time"):
        cells_in("x\n" * (MOST_ROWS + 1))
    with pytest.raises(DeliberateError, match="not a table"):
        cells_in('"' + "x" * 200_000)
