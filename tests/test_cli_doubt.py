"""`deliberate doubt` from the outside."""

import json
import subprocess
import sys
from pathlib import Path

import pytest

import deliberate
from deliberate import cli
from deliberate.rehearsal.doubt import DRAWS, SEED, doubt
from deliberate.rehearsal.doubt_report import doubt_summary, doubt_to_json
from deliberate.rehearsal.doubt_results import Concentration

CHECKOUT = Path(__file__).resolve().parent.parent
DOCK = CHECKOUT / "scenarios" / "dock-roster.deliberate.json"


def test_doubt_for_people(capsys):
    assert cli.main(["doubt", str(DOCK)]) == 0
    out, err = capsys.readouterr()
    scenario = deliberate.read(DOCK)
    assert out == doubt_summary(scenario, doubt(scenario))
    assert "too close to call" in out
    assert err == ""


def test_doubt_as_json_with_all_options(capfdbinary):
    options = ["--variant", "Go-round", "--question", "roster", "--draws", "500", "--seed", "9"]
    settings = ["--guess", "5", "--stated", "20", "--observed", "1e6"]
    assert cli.main(["doubt", str(DOCK), *options, *settings, "--json"]) == 0
    out, err = capfdbinary.readouterr()
    assert err == b""
    scenario = deliberate.read(DOCK)
    found = doubt(scenario, "Go-round", "roster", draws=500, seed=9, concentration=Concentration(5, 20, 1e6))
    assert json.loads(out) == doubt_to_json(found)


@pytest.mark.parametrize(
    "arguments",
    [
        [],
        ["a", "b"],
        ["a", "--draws", "0"],
        ["a", "--draws", "1000001"],
        ["a", "--draws", "1.5"],
        ["a", "--seed", "-1"],
        ["a", "--seed", "9" * 30],
        ["a", "--guess", "0"],
        ["a", "--stated", "inf"],
        ["a", "--observed", "much"],
        ["a", "--draw", "5"],
    ],
)
def test_bad_usage_exits_with_2(arguments, capsys):
    assert cli.main(["doubt", *arguments]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert "usage: deliberate doubt" in err


def test_bad_names_and_too_many_draws_are_one_line(capsys):
    assert cli.main(["doubt", str(DOCK), "--variant", "X"]) == 2
    assert capsys.readouterr().err.startswith(f'{DOCK}: variant: there is no "X"; ')
    ground = DOCK.with_name("open-ground.deliberate.json")
    assert cli.main(["doubt", str(ground), "--draws", "1000000"]) == 2
    err = capsys.readouterr().err
    assert err.startswith(f"{ground}: draws: 1,000,000 with ")
    assert err.endswith("; ask for fewer draws\n")


def test_help_gives_the_defaults(capsys):
    assert cli.main(["doubt", "-h"]) == 0
    out = " ".join(capsys.readouterr().out.split())
    usual = Concentration()
    for option, default in (
        ("--draws N", DRAWS),
        ("--seed S", SEED),
        ("--guess K", usual.guess),
        ("--stated K", usual.stated),
        ("--observed K", usual.observed),
    ):
        described = out.partition("options:")[2].partition(option)[2]
        assert described.partition("(default: ")[2].startswith(f"{default:g})"), option


def test_doubt_loads_neither_qt_nor_networkx():
    code = (
        "import sys; sys.path.insert(0, sys.argv.pop(1)); from deliberate.cli import main; status = main();"
        "print(*(name for name in sys.modules if name.split('.')[0] in {'PySide6', 'pyqtgraph', 'networkx'}),"
        " file=sys.stderr); sys.exit(status)"
    )
    command = [sys.executable, "-c", code, str(CHECKOUT), "doubt", str(DOCK), "--draws", "10"]
    done = subprocess.run(command, capture_output=True, timeout=60, check=False)
    assert (done.returncode, done.stderr.strip()) == (0, b"")
