import os
import subprocess
import sys
from pathlib import Path

import pytest

import deliberate

CHECKOUT = Path(__file__).resolve().parent.parent
RESERVOIR = CHECKOUT / "scenarios" / "reservoir-board.deliberate.json"


def in_python(code):
    done = subprocess.run(
        [sys.executable, "-c", code],
        capture_output=True,
        text=True,
        env={**os.environ, "PYTHONPATH": str(CHECKOUT)},
        timeout=60,
        check=True,
    )
    return done.stdout.strip()


def test_importing_the_package_costs_nothing():
    heavy = {"numpy", "scipy", "msgspec", "networkx", "PySide6"}
    code = f"import sys, deliberate; print(*({heavy} & set(sys.modules)))"
    assert in_python(code) == ""


def test_rehearsing_loads_neither_qt_nor_networkx():
    code = (
        "import sys, deliberate;"
        f"deliberate.rehearse(deliberate.read({str(RESERVOIR)!r}));"
        "print(*({'networkx', 'PySide6', 'pyqtgraph'} & set(sys.modules)))"
    )
    assert in_python(code) == ""


def test_reading_rehearsing_and_writing(tmp_path):
    scenario = deliberate.read(RESERVOIR)
    rehearsal = deliberate.rehearse(scenario)
    assert rehearsal.rounds.shape == (scenario.variants[0].plan.rounds + 1, len(rehearsal.people))
    deliberate.write(scenario, tmp_path / "copy.deliberate.json")
    assert deliberate.read(tmp_path / "copy.deliberate.json") == scenario


def test_graphs_there_and_back():
    scenario = deliberate.read(RESERVOIR)
    graph = deliberate.to_networkx(scenario, scenario.variants[1].name)
    assert deliberate.from_networkx(graph).variants[0].people == scenario.variants[1].people


def test_who_should_sit_with_whom():
    scenario = deliberate.read(RESERVOIR)
    found = deliberate.seat(scenario, None, None, deliberate.Wish(tables=2, rotations=1))
    assert sorted(person for table in found.rotations[0] for person in table) == sorted(
        person.id for person in scenario.variants[0].people
    )


def test_what_it_hangs_on_and_what_would_help():
    scenario = deliberate.read(RESERVOIR)
    assert deliberate.leverage(scenario).levers[0].people == ("ngozi",)
    assert deliberate.remedies(scenario, None, None, "more-voices")[0].after.voices == pytest.approx(7)


def test_everything_public_is_there_and_nothing_else():
    for name in deliberate.__all__:
        assert getattr(deliberate, name) is not None
        assert name in dir(deliberate)
    with pytest.raises(AttributeError, match="no attribute 'forecast'"):
        _ = deliberate.forecast


def test_wrong_input_raises_the_one_error():
    with pytest.raises(deliberate.DeliberateError, match="no such file"):
        deliberate.read(CHECKOUT / "nowhere.json")
    with pytest.raises(deliberate.DeliberateError, match="the variants are"):
        deliberate.rehearse(deliberate.read(RESERVOIR), variant="Nowhere")
