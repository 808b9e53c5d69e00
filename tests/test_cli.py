import json
import os
import subprocess
import sys
from pathlib import Path
from types import ModuleType

import pytest

import deliberate
from deliberate import cli
from deliberate.rehearsal.report import to_json

CHECKOUT = Path(__file__).resolve().parent.parent
FERRY = CHECKOUT / "scenarios" / "ferry-timetable.deliberate.json"
SMALL = {
    "format": "deliberate-scenario",
    "version": 1,
    "title": "Harbour levy",
    "questions": [{"id": "levy", "text": "Raise it?", "low": 0, "high": 1, "pass_mark": 0.5}],
    "variants": [
        {
            "name": "As it stands",
            "people": [{"id": "ines", "name": "Inês", "beliefs": {"levy": 0.7}}, {"id": "tomas"}],
            "arrows": [{"listener": "ines", "source": "tomas", "weight": 2}],
        }
    ],
}


@pytest.fixture
def small(tmp_path):
    path = tmp_path / "levy.deliberate.json"
    path.write_text(json.dumps(SMALL), encoding="utf-8")
    return path


def run(*arguments, code="import sys; from deliberate.cli import main; sys.exit(main())", **options):
    """The command line in a process of its own."""
    environment = {**os.environ, "PYTHONPATH": str(CHECKOUT), **options.pop("env", {})}
    command = [sys.executable, "-c", code, *map(str, arguments)]
    return subprocess.run(command, capture_output=True, env=environment, timeout=60, check=False, **options)


def test_rehearse_prints_a_summary(small, capsys):
    assert cli.main(["rehearse", str(small)]) == 0
    out, err = capsys.readouterr()
    assert out.startswith("Harbour levy\nRaise it?\n")
    assert "What stands out" in out
    assert out.endswith("A sketch, not a forecast of people.\n")
    assert err == ""


def test_rehearse_prints_json_in_utf_8(small, capfdbinary):
    assert cli.main(["rehearse", str(small), "--json"]) == 0
    out, err = capfdbinary.readouterr()
    assert err == b""
    assert out.endswith(b"}\n")
    assert json.loads(out.decode("utf-8")) == to_json(deliberate.rehearse(deliberate.read(small)))


def test_rehearse_takes_variant_question_rounds_and_tolerance(capfdbinary):
    arguments = ["--variant", "Own paper on the table", "--rounds", "3", "--tolerance", "2", "--json"]
    assert cli.main(["rehearse", str(FERRY), *arguments]) == 0
    data = json.loads(capfdbinary.readouterr().out)
    question = deliberate.read(FERRY).questions[0].id
    assert (data["variant"], data["question"], len(data["rounds"])) == ("Own paper on the table", question, 4)
    assert data["pace"]["rounds_to_agree"] < 8
    assert cli.main(["rehearse", str(FERRY), "--question", question]) == 0


def test_check_says_ok(small, capsys):
    assert cli.main(["check", str(small)]) == 0
    assert capsys.readouterr() == ("ok\n", "")


def broken(change):
    data = json.loads(json.dumps(SMALL))
    change(data)
    return json.dumps(data)


@pytest.mark.parametrize("command", ["check", "rehearse"])
@pytest.mark.parametrize(
    ("content", "said"),
    [
        (
            broken(lambda data: data["variants"][0]["arrows"][0].update(weight=-2)),
            "variants[0].arrows[0].weight: must be more than 0, is -2",
        ),
        (broken(lambda data: data.update(colour="red")), "colour: "),
        (broken(lambda data: data["variants"][0]["people"][1].update(id="ines")), "variants[0].people[1].id: "),
        ("{", "line 1, column 2: is not JSON: "),
        ("", "is empty"),
    ],
)
def test_bad_input_is_one_line_with_file_place_and_reason(command, content, said, small, capsys):
    small.write_text(content, encoding="utf-8")
    assert cli.main([command, str(small)]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith(f"{small}: {said}")
    assert err.count("\n") == 1


def test_files_that_are_not_there(tmp_path, capsys):
    assert cli.main(["check", str(tmp_path / "nowhere.json")]) == 2
    assert capsys.readouterr().err == f"{tmp_path / 'nowhere.json'}: there is no such file\n"
    assert cli.main(["rehearse", str(tmp_path)]) == 2
    assert "is a folder" in capsys.readouterr().err


def test_unknown_names_say_which_there_are(small, capsys):
    assert cli.main(["rehearse", str(small), "--variant", "X"]) == 2
    assert capsys.readouterr().err == f'{small}: variant: there is no "X"; the only variant is "As it stands"\n'
    assert cli.main(["rehearse", str(small), "--question", "X"]) == 2
    assert capsys.readouterr().err == f'{small}: question: there is no "X"; the only question is "levy"\n'


@pytest.mark.parametrize(
    "arguments",
    [
        ["rehearse"],
        ["rehearse", "a", "b"],
        ["rehearse", "a", "--rounds", "-1"],
        ["rehearse", "a", "--rounds", "1.5"],
        ["rehearse", "a", "--rounds", "1000001"],
        ["rehearse", "a", "--rounds", "²"],
        ["rehearse", "a", "--rounds", "9" * 5000],
        ["rehearse", "a", "--tolerance", "0"],
        ["rehearse", "a", "--tolerance", "nan"],
        ["rehearse", "a", "--tolerance", "inf"],
        ["rehearse", "a", "--tolerance", "much"],
        ["rehearse", "a", "--vari", "x"],
        ["check"],
        ["check", "a", "--json"],
        ["a", "b"],
        ["--loud"],
    ],
)
def test_bad_usage_exits_with_2(arguments, capsys):
    assert cli.main(arguments) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert "usage: deliberate" in err
    assert "Traceback" not in err


def test_a_misspelt_command_is_answered_with_those_there_are(capsys):
    assert cli.main(["rehearze", "a"]) == 2
    assert "usage: deliberate [FILE]\n       deliberate rehearse FILE [options]\n" in capsys.readouterr().err


COMMANDS = ("rehearse", "doubt", "leverage", "remedies", "tables", "check")


@pytest.mark.parametrize("arguments", [["-h"], ["--help"], ["--version"], *([one, "--help"] for one in COMMANDS)])
def test_help_and_version(arguments, capsys):
    assert cli.main(arguments) == 0
    out, err = capsys.readouterr()
    assert "deliberate" in out
    assert err == ""
    assert all(len(line) <= 80 for line in out.splitlines())


def window(monkeypatch, run):
    """Stand in for the window, which has tests of its own."""
    app = ModuleType("deliberate.window.app")
    app.NoScreenError, app.run = type("NoScreenError", (deliberate.DeliberateError,), {}), run
    monkeypatch.setitem(sys.modules, app.__name__, app)


@pytest.mark.parametrize(
    ("arguments", "path"),
    [
        ([], None),
        (["levy.json"], "levy.json"),
        (["--", "rehearse"], "rehearse"),
        (["--", "check"], "check"),
        (["./rehearse"], "./rehearse"),
        (["--", "-odd-name"], "-odd-name"),
    ],
)
def test_everything_else_opens_the_window(arguments, path, monkeypatch):
    opened = []
    window(monkeypatch, lambda path: opened.append(path) or 0)
    assert cli.main(arguments) == 0
    assert opened == [path]


def test_a_bad_file_for_the_window_is_one_line_too(small, monkeypatch, capsys):
    window(monkeypatch, lambda path: deliberate.read(path) and 0)
    small.write_text("[]", encoding="utf-8")
    assert cli.main([str(small)]) == 2
    assert capsys.readouterr().err.startswith(f"{small}: must be an object")


def test_without_a_screen_the_window_says_so_and_exits_with_1(small):
    environment = {"QT_QPA_PLATFORM": "xcb", "DISPLAY": "", "WAYLAND_DISPLAY": ""}
    if not sys.platform.startswith("linux"):
        pytest.skip("other systems always have a screen")
    done = run(small, env=environment)
    assert done.returncode == 1
    assert done.stderr.startswith(b"deliberate: there is no screen")
    assert done.stderr.count(b"\n") == 1


def test_without_qt_the_window_says_so_and_exits_with_1(small):
    code = "import sys; sys.modules['PySide6'] = None; from deliberate.cli import main; sys.exit(main())"
    done = run(small, code=code)
    assert done.returncode == 1
    assert b"install PySide6-Essentials" in done.stderr
    assert b"Traceback" not in done.stderr


def test_a_bug_is_told_with_its_trace_and_exits_with_1(small, monkeypatch, capsys):
    def stumble(path):
        raise ZeroDivisionError("oops")

    monkeypatch.setattr("deliberate.files.read", stumble)
    assert cli.main(["check", str(small)]) == 1
    err = capsys.readouterr().err
    assert "ZeroDivisionError: oops" in err
    assert err.endswith("deliberate: something went wrong in the program itself; the lines above say where.\n")


@pytest.mark.parametrize("arguments", [["rehearse", FERRY], ["rehearse", FERRY, "--json"], ["check", FERRY], ["-h"]])
def test_no_command_but_the_window_loads_qt_or_networkx(arguments):
    code = (
        "import sys; from deliberate.cli import main; status = main();"
        "print(*(name for name in sys.modules if name.split('.')[0] in {'PySide6', 'pyqtgraph', 'networkx'}),"
        " file=sys.stderr); sys.exit(status)"
    )
    done = run(*arguments, code=code)
    assert (done.returncode, done.stderr.strip()) == (0, b"")


@pytest.mark.parametrize(
    "arguments", [["rehearse", FERRY, "--rounds", "20000", "--json"], ["rehearse", FERRY], ["-h"]]
)
def test_a_reader_who_leaves_ends_it_quietly(arguments):
    reading, writing = os.pipe()
    os.close(reading)
    code = "import sys; from deliberate.cli import main; sys.exit(main())"
    command = [sys.executable, "-c", code, *map(str, arguments)]
    environment = {**os.environ, "PYTHONPATH": str(CHECKOUT)}
    with subprocess.Popen(command, stdout=writing, stderr=subprocess.PIPE, env=environment) as process:
        os.close(writing)
        _, err = process.communicate(timeout=60)
    assert err == b""
    assert process.returncode == 1


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="needs /dev/full")
def test_a_full_disk_is_said_in_a_sentence():
    code = "import sys; from deliberate.cli import main; sys.exit(main())"
    environment = {**os.environ, "PYTHONPATH": str(CHECKOUT)}
    command = [sys.executable, "-c", code, "check", str(FERRY)]
    with open("/dev/full", "wb") as full:
        done = subprocess.run(command, stdout=full, stderr=subprocess.PIPE, env=environment, timeout=60, check=False)
    assert done.returncode == 1
    assert done.stderr.startswith(b"deliberate: the output cannot be written: ")
    assert done.stderr.count(b"\n") == 1


@pytest.mark.parametrize(
    "encoding", [{"LC_ALL": "C"}, {"LC_ALL": "C", "PYTHONUTF8": "0", "PYTHONCOERCECLOCALE": "0"}]
)
def test_names_in_any_script_print_in_any_encoding(encoding, tmp_path):
    data = json.loads(json.dumps(SMALL))
    data["title"] = "Zoë と 仲間"
    path = tmp_path / "levy.json"
    path.write_text(json.dumps(data), encoding="utf-8")
    for options in ([], ["--json"]):
        done = run("rehearse", path, *options, env=encoding)
        assert (done.returncode, done.stderr) == (0, b"")
    assert run("rehearse", tmp_path / "Zoë.json", env=encoding).returncode == 2


def test_odd_file_names_stay_on_one_line(tmp_path, capsys):
    assert cli.main(["check", str(tmp_path / "two\nlines\x1b[31m.json")]) == 2
    err = capsys.readouterr().err
    assert err.count("\n") == 1
    assert "two\\nlines\\x1b[31m.json: there is no such file" in err
