from __future__ import annotations

import csv
import io

import pytest
from circles import CIRCLES, meeting, person
from msgspec.structs import replace

from deliberate.rehearsal.rehearse import rehearse
from deliberate.window.chart.figures import as_csv, as_tabs, safe_cell


def test_the_sheet_holds_every_round_in_full_precision() -> None:
    rehearsal = rehearse(CIRCLES)
    rows = list(csv.reader(io.StringIO(as_csv(rehearsal, CIRCLES.variants[0]))))
    assert rows[0][:3] == ["round", "Amina", "Bilal"]
    assert rows[0][7:] == ["spread", "for", "against", "abstaining", "objecting", "passes"]
    assert len(rows) == 1 + 7
    for at, row in enumerate(rows[1:]):
        assert int(row[0]) == at
        assert [float(cell) for cell in row[1:7]] == rehearsal.rounds[at].tolist()
        assert float(row[7]) == rehearsal.spread[at]
        assert row[8:] == ["3", "3", "0", "0", "no"]


def test_tabs_hold_the_same() -> None:
    rehearsal, variant = rehearse(CIRCLES), CIRCLES.variants[0]
    tabs = list(csv.reader(io.StringIO(as_tabs(rehearsal, variant)), delimiter="\t"))
    assert tabs == list(csv.reader(io.StringIO(as_csv(rehearsal, variant))))


@pytest.mark.parametrize("name", ["=1+1", "+49", "-x", "@sum"])
def test_no_name_becomes_a_formula(name: str) -> None:
    assert safe_cell(name) == f"'{name}"
    scenario = meeting((person("Ann", 50.0, (0.0, 0.0)),), ())
    renamed = replace(scenario.variants[0], people=(replace(scenario.variants[0].people[0], name=name),))
    assert f"'{name}" in as_csv(rehearse(scenario), renamed).splitlines()[0]


def test_names_with_commas_and_quotes_survive() -> None:
    variant = meeting((person("Ann", 50.0, (0.0, 0.0)),), ()).variants[0]
    odd = 'Ann, "the chair"'
    renamed = replace(variant, people=(replace(variant.people[0], name=odd),))
    rows = list(csv.reader(io.StringIO(as_csv(rehearse(meeting(variant.people, ())), renamed))))
    assert rows[0][1] == odd
