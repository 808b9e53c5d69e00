"""`deliberate tables`: what it prints, and what it refuses."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from deliberate import files
from deliberate.cli import main
from deliberate.files.resources import demo_scenarios
from deliberate.rehearsal.seating.report import seating_summary, seating_to_json
from deliberate.rehearsal.seating.seat import seat
from deliberate.rehearsal.seating.wish import Wish

DOCK = next(path for path in demo_scenarios() if path.name.startswith("dock-roster"))
SCENARIO = files.read(DOCK)


def run(capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, str, str]:
    status = main(["tables", str(DOCK), *arguments])
    said = capsys.readouterr()
    return status, said.out, said.err


def test_it_prints_the_tables_and_what_they_do(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = run(capsys, "--tables", "3", "--apart", "mirela", "parisa")
    wish = Wish(tables=3, apart=(("mirela", "parisa"),))
    found = seat(SCENARIO, None, None, wish)
    assert (status, err) == (0, "")
    assert out == seating_summary(SCENARIO, found)
    assert "Kept in every rotation: Mirela and Parisa never at one table." in out
    assert "\nMixed tables 2\n  Table 1: " in out
    assert out.endswith("\n\nA sketch, not a forecast of people.\n")
    assert max(map(len, out.splitlines())) <= 79


def test_as_json_all_is_there_at_full_precision(capsys: pytest.CaptureFixture[str]) -> None:
    options = (
        "--size 3 --rotations 1 --rounds 4 --aim more-voices --place after --unheard own --linked --seed 7 --json"
    )
    status, out, _ = run(capsys, *options.split())
    wish = Wish(size=3, rotations=1, rounds=4, goal="more-voices", place="after", unheard="own", linked=True)
    found = seat(SCENARIO, None, None, wish, seed=7)
    assert status == 0
    printed = json.loads(out)
    assert printed == seating_to_json(found)
    assert printed["format"] == "deliberate-tables"
    assert printed["proven"]
    assert printed["after"] == found.after
    assert sorted(one for table in printed["rotations"][0] for one in table) == sorted(
        person.id for person in SCENARIO.variants[0].people
    )


def test_people_and_roles_that_are_not_there_are_refused(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    status, _, err = run(capsys, "--tables", "3", "--together", "mirela", "nobody")
    assert (status, err) == (2, f'{DOCK}: there is nobody with the id "nobody" in "As it stands"\n')
    status, _, err = run(capsys, "--tables", "3", "--together", "mirela", "mirela")
    assert (status, err) == (2, f"{DOCK}: a condition on who sits with whom needs two people\n")
    status, _, err = run(capsys, "--tables", "3", "--role", "chairs")
    assert status == 2
    assert 'somebody with the role "chairs" at every table: for 3 tables there are 0 with that role present' in err


@pytest.mark.parametrize(
    "arguments", [(), ("--tables", "2", "--size", "3"), ("--tables", "0"), ("--tables", "x"), ("--aim", "pass")]
)
def test_bad_usage_is_refused(capsys: pytest.CaptureFixture[str], arguments: tuple[str, ...]) -> None:
    status, out, err = run(capsys, *arguments)
    assert status == 2
    assert not out
    assert "usage: deliberate tables" in err
