from __future__ import annotations

from contextlib import suppress

import pytest
from circles import AS_IT_STANDS, CIRCLES, LABEL
from hypothesis import example, given
from hypothesis import strategies as st
from msgspec.structs import replace

from deliberate.errors import DeliberateError
from deliberate.scenario.checks import validate
from deliberate.scenario.values import FrozenDict, Person, Scenario
from deliberate.window.sidebar.people_columns import Column, Row, change, shown, sort_key, typed_over

TYPED = [column for column in Column if column != Column.NOW]
numbers = st.floats(0, 100, allow_subnormal=False)


def edited(column: Column, text: str, scenario: Scenario = CIRCLES) -> Person:
    after = change(column, ["amina"], text, question="label", variant=AS_IT_STANDS)(scenario)
    validate(after)
    return after.variants[0].people[0]


@given(st.sampled_from(TYPED), st.text(max_size=12) | numbers.map(repr))
@example(Column.NAME, "a\x00b")
@example(Column.ROLE, "x" * 201)
@example(Column.START, "\u0663")
def test_whatever_is_typed_either_fits_or_is_refused(column: Column, text: str) -> None:
    with suppress(DeliberateError):  # any other error, and a meeting that is not valid, fail
        edited(column, text)


@given(numbers, numbers, st.floats(0, 1, allow_subnormal=False), st.floats(0, 1e6, allow_subnormal=False))
def test_a_cell_typed_over_with_itself_stays(start: float, margin: float, firm: float, votes: float) -> None:
    firm = round(firm, 12)
    amina = replace(
        CIRCLES.variants[0].people[0],
        beliefs=FrozenDict(label=start), margins=FrozenDict(label=margin), firmness=firm, ballots=votes, role="chair",
    )  # fmt: skip
    variant = replace(CIRCLES.variants[0], people=(amina, *CIRCLES.variants[0].people[1:]))
    scenario = replace(CIRCLES, variants=(variant,))
    row = Row(amina, own=40.0, now=start)
    for column in TYPED:
        assert edited(column, typed_over(column, row, LABEL), scenario) == amina


@pytest.mark.parametrize(
    ("column", "text"),
    [
        (Column.START, "?"),
        (Column.NOW, "71.4"),
        (Column.MARGIN, ""),
        (Column.FIRMNESS, "29"),
        (Column.OWN, "33.3"),
        (Column.BALLOTS, "2.5"),
        (Column.PRESENT, "yes"),
        (Column.ROLE, "chair"),
        (Column.NAME, "Ama"),
    ],
)
def test_cells_are_short(column: Column, text: str) -> None:
    person = Person(id="ama", name="Ama", role="chair", firmness=0.29, ballots=2.5)
    assert shown(column, Row(person, own=100 / 3, now=71.428571), LABEL) == text


def test_unknown_starts_come_first_when_sorted() -> None:
    known = Row(Person(id="a", beliefs=FrozenDict(label=0.0)), 0.0, 0.0)
    unknown = Row(Person(id="b"), 0.0, 0.0)
    assert sort_key(Column.START, unknown, LABEL) < sort_key(Column.START, known, LABEL)


@pytest.mark.parametrize(("text", "present"), [("yes", True), ("No", False), ("x", True), ("", False), ("1", True)])
def test_presence_is_read_as_sheets_write_it(text: str, present: bool) -> None:
    assert edited(Column.PRESENT, text).present is present


def test_firmness_in_hundredths() -> None:
    assert edited(Column.FIRMNESS, "29 %").firmness == 0.29
    with pytest.raises(DeliberateError, match="between 0 and 100"):
        edited(Column.FIRMNESS, "100.5")


def test_beliefs_of_a_round_cannot_be_typed() -> None:
    with pytest.raises(DeliberateError, match="cannot be typed"):
        edited(Column.NOW, "5")
