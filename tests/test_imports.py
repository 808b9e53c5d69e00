"""The house: which package may import which, what stays out of the command line, and what lies at the top."""

from __future__ import annotations

import shutil
import subprocess
import sys
from pathlib import Path

import pytest

CHECKOUT = Path(__file__).parent.parent
AGREED = {"README.md", "DEVELOPERS.md", "pyproject.toml", "deliberate", "resources", "scenarios", "tests"}


def test_imports_run_one_way() -> None:
    program = shutil.which("lint-imports", path=str(Path(sys.executable).parent))
    assert program, "import-linter is not installed beside this Python"
    done = subprocess.run([program, "--no-cache"], cwd=CHECKOUT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout


def loaded_by(*lines: str) -> set[str]:
    """The top-level names of all modules that a fresh Python has loaded after these lines."""
    script = "\n".join(
        ["import sys", *lines, "print('loaded:', *sorted({name.split('.')[0] for name in sys.modules}))"]
    )
    done = subprocess.run([sys.executable, "-c", script], cwd=CHECKOUT, capture_output=True, text=True, check=True)
    return set(done.stdout.rpartition("loaded:")[2].split())


def test_the_package_loads_without_qt_and_networkx() -> None:
    assert not {"PySide6", "shiboken6", "pyqtgraph", "networkx"} & loaded_by("import deliberate")


@pytest.mark.parametrize("command", ["rehearse", "check", "leverage", "remedies"])
def test_commands_without_a_screen_load_neither_qt_nor_networkx(command: str) -> None:
    demo = min((CHECKOUT / "scenarios").glob("*.deliberate.json"))
    loaded = loaded_by(
        "from deliberate.cli import main", f"status = main([{command!r}, {str(demo)!r}])", "assert not status"
    )
    assert "deliberate" in loaded
    assert not {"PySide6", "shiboken6", "pyqtgraph", "networkx"} & loaded


def test_only_what_was_agreed_lies_at_the_top() -> None:
    git = shutil.which("git")
    if git is None or not (CHECKOUT / ".git").exists():
        pytest.skip("not a git checkout")
    command = [git, "-c", "safe.directory=*", "ls-files"]
    listing = subprocess.run(command, cwd=CHECKOUT, capture_output=True, text=True, check=True).stdout
    top = {line.split("/")[0].strip('"') for line in listing.splitlines()}
    assert {name for name in top if not name.startswith(".")} <= AGREED
    assert "pyproject.toml" in top
