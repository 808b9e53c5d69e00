"""`deliberate leverage` and `deliberate remedies` from the outside."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

import deliberate
from deliberate import cli
from deliberate.rehearsal.leverage import leverage
from deliberate.rehearsal.leverage_report import leverage_summary, leverage_to_json
from deliberate.rehearsal.remedies import best_for_each_aim, remedies
from deliberate.rehearsal.remedies.report import remedies_summary, remedies_to_json

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


def test_the_best_remedy_for_each_aim(capsys):
    assert cli.main(["remedies", str(FERRY)]) == 0
    out, err = capsys.readouterr()
    scenario = deliberate.read(FERRY)
    assert out == remedies_summary(scenario, None, None, best_for_each_aim(scenario))
    assert out.count("Aim: ") == 2
    assert err == ""


def test_all_remedies_for_one_aim_as_json(capfdbinary):
    arguments = ["--aim", "less-spread", "--variant", "Own paper on the table", "--question", "departures", "--json"]
    assert cli.main(["remedies", str(FERRY), *arguments]) == 0
    out, _ = capfdbinary.readouterr()
    scenario, which = deliberate.read(FERRY), ("Own paper on the table", "departures")
    found = {"less-spread": remedies(scenario, *which, "less-spread")}
    assert json.loads(out) == json.loads(json.dumps(remedies_to_json(scenario, *which, found)))
    assert len(json.loads(out)["aims"]) == 1


@pytest.mark.parametrize("command", ["leverage", "remedies"])
@pytest.mark.parametrize(("option", "where"), [("--variant", "variant"), ("--question", "question")])
def test_names_that_are_not_there(command, option, where, capsys):
    assert cli.main([command, str(FERRY), option, "X"]) == 2
    assert f'{where}: there is no "X"' in capsys.readouterr().err


def test_an_outcome_is_no_aim(capsys):
    assert cli.main(["remedies", str(FERRY), "--aim", "make-it-pass"]) == 2
    assert capsys.readouterr().err.startswith(f'{FERRY}: aim: there is no "make-it-pass"; the aims are common-view, ')
