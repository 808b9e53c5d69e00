"""Ids made from names."""

from __future__ import annotations

import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from deliberate.scenario.ids import fresh_id, fresh_name


@pytest.mark.parametrize(
    ("name", "made"),
    [
        ("Ines", "ines"),
        ("Zoë  Łukasiewicz", "zoe-lukasiewicz"),
        ("Tomás Núñez", "tomas-nunez"),
        ("Jürgen Groß", "jurgen-gross"),
        ("Ægir Þórðarson", "aegir-thordarson"),
        ("Søren Œuvray", "soren-oeuvray"),
        ("Niamh O’Neill", "niamh-oneill"),
        ("Đặng Thị Ánh", "dang-thi-anh"),
        ("Işıl Çağlar", "isil-caglar"),
        ("Юлия Щукина", "yuliya-shchukina"),
        ("Θάλεια", "thaleia"),
        ("ﬁnn", "finn"),
        ("Person 7", "person-7"),
        ("(chair)", "chair"),
        ("王伟", "person"),
        ("", "person"),
        ("-.-", "person"),
    ],
)
def test_ids_can_be_read_by_eye(name, made) -> None:
    assert fresh_id(name, "person", ()) == made


def test_a_taken_id_gets_the_first_free_number() -> None:
    assert fresh_id("Ines", "person", {"ines"}) == "ines-2"
    assert fresh_id("Ines", "person", {"ines", "ines-2", "ines-4"}) == "ines-3"
    assert fresh_id("王伟", "person", {"person"}) == "person-2"
    assert fresh_name("Plan", {"Plan", "Plan (2)"}) == "Plan (3)"


@given(st.text(max_size=100), st.sets(st.text("ab-2", max_size=4)))
def test_any_text_makes_a_valid_and_free_id(name, taken) -> None:
    made = fresh_id(name, "person", taken)
    assert re.fullmatch(r"[a-z0-9][a-z0-9-]{0,63}", made)
    assert made not in taken
    assert fresh_id(made, "person", taken) == made
