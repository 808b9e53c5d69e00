"""`deliberate leverage` from the outside."""

from __future__ import annotations

import json
from pathlib import Path

import deliberate
from deliberate import cli
from deliberate.rehearsal.leverage import leverage
from deliberate.rehearsal.leverage_report import leverage_summary, leverage_to_json

SCENARIOS = Path(__file__).resolve().parent.parent / "scenarios"
FERRY = SCENARIOS / "ferry-timetable.deliberate.json"
FEVER = SCENARIOS / "fever-guideline.deliberate.json"


def test_leverage_for_people(capsys):
    assert cli.main(["leverage", str(FERRY)]) == 0
    out, err = capsys.readouterr()
    scenario = deliberate.read(FERRY)
    assert out == leverage_summary(scenario, leverage(scenario))
    assert err == ""


def test_leverage_as_json_of_a_variant_and_a_question(capfdbinary):
    arguments = ["--variant", "Question split", "--question", "again", "--json"]
    assert cli.main(["leverage", str(FEVER), *arguments]) == 0
    out, _ = capfdbinary.readouterr()
    scenario = deliberate.read(FEVER)
    assert json.loads(out) == leverage_to_json(scenario, leverage(scenario, "Question split", "again"))


def test_leverage_of_a_variant_that_is_not_there(capsys):
    assert cli.main(["leverage", str(FERRY), "--variant", "X"]) == 2
    assert 'variant: there is no "X"' in capsys.readouterr().err
