"""The README keeps its word: what it shows as run is run, and printed output is compared to the letter."""

from __future__ import annotations

import re
import shlex
import shutil
import subprocess
import sys
from collections.abc import Iterator
from itertools import pairwise
from pathlib import Path

import pytest

import deliberate

CHECKOUT = Path(__file__).parent.parent
README = (CHECKOUT / "README.md").read_text(encoding="utf-8")
BLOCKS = re.findall(r"^```(\w+)\n(.*?)^```$", README, flags=re.MULTILINE | re.DOTALL)


def shown_commands() -> Iterator[tuple[str, str]]:
    """Each `$ command` of a console block with the output shown below it."""
    for language, text in BLOCKS:
        if language == "console":
            for part in re.split(r"^\$ ", text, flags=re.MULTILINE)[1:]:
                command, _, output = part.partition("\n")
                yield command, output


def set_up_commands() -> list[str]:
    return [line for language, text in BLOCKS if language == "sh" for line in text.splitlines()]


def shown_file() -> str:
    (text,) = (text for language, text in BLOCKS if language == "json")
    return text


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """A folder of the reader's own, with the demos and the mistaken file that the README speaks of."""
    shutil.copytree(CHECKOUT / "scenarios", tmp_path / "scenarios")
    mistaken = shown_file().replace('"weight": 20}', '"weight": -2}')
    (tmp_path / "harbour.deliberate.json").write_text(mistaken, encoding="utf-8")
    return tmp_path


def test_the_readme_shows_commands_python_and_a_file() -> None:
    assert list(shown_commands())
    assert {"sh", "console", "json", "python"} <= {language for language, _ in BLOCKS}


@pytest.mark.parametrize(("command", "output"), list(shown_commands()), ids=lambda text: text.partition("\n")[0])
def test_a_shown_command_prints_what_is_shown(command: str, output: str, folder: Path) -> None:
    program, *arguments = shlex.split(command)
    assert program == "deliberate"
    run = [sys.executable, "-m", "deliberate", *arguments]
    done = subprocess.run(run, cwd=folder, capture_output=True, encoding="utf-8", check=False)
    assert (done.stdout + done.stderr).rstrip() == output.rstrip()


def test_the_python_example_prints_what_is_shown(folder: Path) -> None:
    pairs = [
        (code, output)
        for (kind, code), (next_kind, output) in pairwise(BLOCKS)
        if (kind, next_kind) == ("python", "text")
    ]
    assert len(pairs) == sum(language == "python" for language, _ in BLOCKS)
    for code, output in pairs:
        run = [sys.executable, "-W", "error", "-c", code]
        done = subprocess.run(run, cwd=folder, capture_output=True, encoding="utf-8", check=False)
        assert done.stdout + done.stderr == output


def test_the_shown_file_is_a_scenario(tmp_path: Path) -> None:
    path = tmp_path / "shown.deliberate.json"
    path.write_text(shown_file(), encoding="utf-8")
    rehearsal = deliberate.rehearse(deliberate.read(path))
    # Two people: the common view weighs each start by the other's points (Schweitzer 1968, from memory):
    # (20 * 70 + 40 * 30) / 60.
    assert rehearsal.limit == pytest.approx([130 / 3, 130 / 3], rel=1e-12)


def test_the_set_up_commands_are_those_of_the_checkout() -> None:
    for command in set_up_commands():
        program, target, *_ = shlex.split(command)
        assert program == "python3"
        assert (CHECKOUT / target).exists()
    assert (CHECKOUT / "deliberate" / "__main__.py").exists()


def test_the_continuous_run_uses_the_readme_command() -> None:
    assert "python3 tests/run.py" in set_up_commands()
    assert (CHECKOUT / ".ci" / "run").read_text(encoding="utf-8").rstrip().endswith("exec python3 tests/run.py")


def test_every_demo_is_listed() -> None:
    demos = sorted(path.name.removesuffix(".deliberate.json") for path in (CHECKOUT / "scenarios").glob("*.json"))
    assert sorted(re.findall(r"^\| `([\w-]+)` \|", README, flags=re.MULTILINE)) == demos


def test_links_lead_to_files_of_the_checkout() -> None:
    targets = [target for target in re.findall(r"\]\(([^)#]+)\)", README) if "://" not in target]
    assert targets
    assert [target for target in targets if not (CHECKOUT / target).exists()] == []
