from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from deliberate.errors import DeliberateError
from deliberate.rehearsal.words import amount
from deliberate.scenario.rules import exact
from deliberate.window.sidebar.numbers import hundredths, plain, share_text, typed_number, typed_share

doubles = st.floats(allow_nan=False, allow_infinity=False)


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("12", 12.0),
        (" 12.5 ", 12.5),
        ("12,5", 12.5),
        ("0,125", 0.125),
        ("12,000", 12_000.0),
        ("1,234,567.25", 1_234_567.25),
        ("12 000", 12_000.0),
        ("12\u00a0000,5", 12_000.5),
        ("-3", -3.0),
        ("\u22123", -3.0),
        ("1e3", 1_000.0),
    ],
)
def test_numbers_are_read_as_people_write_them(text: str, value: float) -> None:
    assert typed_number(text, "a number") == value


@pytest.mark.parametrize("text", ["", "x", "1_000", "nan", "inf", "1,2,3", "1.2.3", "1e999", "=1+1"])
def test_what_is_no_number_is_refused_by_name(text: str) -> None:
    with pytest.raises(DeliberateError, match="the pass mark must be a number"):
        typed_number(text, "the pass mark")


@given(doubles)
def test_what_a_field_shows_for_typing_is_exact(value: float) -> None:
    assert typed_number(plain(value), "a number") == value
    assert "," not in plain(value)


@given(st.integers(-(10**12), 10**12).map(lambda n: n / 1000))
def test_what_the_screen_shows_can_be_typed(value: float) -> None:
    assert typed_number(amount(value), "a number") == value


@pytest.mark.parametrize(
    ("text", "share"),
    [
        ("2/3", "2/3"),
        (" 2 / 3 ", "2/3"),
        ("55 %", 0.55),
        ("55%", 0.55),
        ("66,67 %", 0.6667),
        ("0.5", 0.5),
        ("0", 0.0),
        ("1", 1.0),
        ("100 %", 1.0),
        ("0/5", "0/5"),
    ],
)
def test_shares_are_read_as_rules_write_them(text: str, share: object) -> None:
    assert typed_share(text, "the share") == share


@pytest.mark.parametrize("text", ["3/2", "1/0", "0/0", "101 %", "-1 %", "2", "", "most", "1/2/3", "-1/2"])
def test_other_shares_are_refused_with_a_remedy(text: str) -> None:
    with pytest.raises(DeliberateError, match="2/3"):
        typed_share(text, "the share")


@given(st.floats(0, 1))
def test_a_share_survives_being_shown_and_typed(share: float) -> None:
    again = typed_share(share_text(share), "the share")
    assert math.isclose(float(exact(again)), share, rel_tol=1e-15, abs_tol=5e-324)


@given(st.integers(0, 1000))
def test_hundredths_have_no_idle_digits(thousandths: int) -> None:
    assert float(hundredths(thousandths / 1000)) == thousandths / 10
    assert len(hundredths(thousandths / 1000)) <= 4
