"""The package as it reaches people: built, installed in a fresh place, and run from another folder.

Nothing is downloaded: the fresh environments see the dependencies of the environment that runs the tests, and
the checkout's own package only where it was installed.
"""

from __future__ import annotations

import json
import os
import subprocess
import sys
import sysconfig
import venv
import zipfile
from pathlib import Path

import pytest

CHECKOUT = Path(__file__).parent.parent
DEPENDENCIES = sysconfig.get_path("purelib")


def run(*command: str | Path, cwd: Path, **environment: str) -> str:
    """What the command prints; a failing one fails the test with all it said."""
    env = {name: value for name, value in os.environ.items() if name != "PYTHONPATH"} | environment
    done = subprocess.run(
        [str(part) for part in command], cwd=cwd, env=env, capture_output=True, text=True, check=False
    )
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("wheel")
    run(sys.executable, "-m", "hatchling", "build", "--target", "wheel", "--directory", folder, cwd=CHECKOUT)
    (built,) = folder.glob("*.whl")
    return built


@pytest.fixture(scope="module")
def editable_wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """What `pip install --editable` asks of the build backend and then installs."""
    folder = tmp_path_factory.mktemp("editable")
    script = "import sys; from hatchling.build import build_editable; build_editable(sys.argv[1])"
    run(sys.executable, "-c", script, folder, cwd=CHECKOUT)
    (built,) = folder.glob("*.whl")
    return built


@pytest.fixture(scope="module", params=["wheel", "editable", "checkout"])
def installed(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The Python of a fresh environment that has Deliberate in one of the three ways."""
    home = tmp_path_factory.mktemp(request.param) / "fresh"
    venv.create(home, with_pip=False, symlinks=os.name != "nt")
    folder = Path(sysconfig.get_path("purelib", "venv", vars={"base": str(home), "platbase": str(home)}))
    python = Path(sysconfig.get_path("scripts", "venv", vars={"base": str(home)})) / Path(sys.executable).name
    visible = [DEPENDENCIES]
    if request.param == "checkout":
        visible.append(str(CHECKOUT))
    else:
        built = request.getfixturevalue("wheel" if request.param == "wheel" else "editable_wheel")
        run(sys.executable, "-m", "pip", "--python", python, "install", "--no-deps", "--quiet", built, cwd=home)
    # After pip, which would otherwise take the tests' own Deliberate for the one to install.
    (folder / "dependencies.pth").write_text("\n".join(visible), encoding="utf-8")
    return python


def test_the_wheel_holds_what_is_shipped_and_nothing_else(wheel: Path) -> None:
    names = zipfile.ZipFile(wheel).namelist()
    shipped = {f"{top}/{path.name}" for top in ("resources", "scenarios") for path in (CHECKOUT / top).iterdir()}
    assert {name.removeprefix("deliberate/_data/") for name in names if "/_data/" in name} == shipped
    assert {name.split("/")[0].split("-")[0] for name in names} == {"deliberate"}
    assert not [name for name in names if "__pycache__" in name or "/tests/" in name]


def test_a_demo_is_rehearsed_from_another_folder(installed: Path, tmp_path: Path) -> None:
    where = "import deliberate.files as f; print(*f.demo_scenarios(), sep='\\n')"
    demos = [Path(line) for line in run(installed, "-c", where, cwd=tmp_path).splitlines()]
    assert {demo.name for demo in demos} == {path.name for path in (CHECKOUT / "scenarios").glob("*.deliberate.json")}
    for demo in demos[:2]:
        printed = run(installed, "-m", "deliberate", "rehearse", demo, "--json", cwd=tmp_path)
        assert json.loads(printed)["format"] == "deliberate-rehearsal"


def test_the_schema_is_found_from_another_folder(installed: Path, tmp_path: Path) -> None:
    where = "import deliberate.files as f; print(f.schema_path())"
    found = Path(run(installed, "-c", where, cwd=tmp_path).strip())
    assert json.loads(found.read_text(encoding="utf-8"))["$schema"].startswith(
        "https://json-schema.org/draft/2020-12"
    )


def test_a_wheel_does_not_read_from_the_checkout(wheel: Path, tmp_path: Path) -> None:
    """Run in isolation from the checkout, the package found is the unpacked wheel with its own data."""
    zipfile.ZipFile(wheel).extractall(tmp_path)
    where = "import deliberate, deliberate.files as f; print(deliberate.__file__, *f.demo_scenarios(), sep='\\n')"
    paths = run(sys.executable, "-c", where, cwd=tmp_path).splitlines()
    assert all(Path(path).is_relative_to(tmp_path) for path in paths)
    assert len(paths) > 10


@pytest.mark.parametrize("installed", ["wheel", "editable"], indirect=True)
def test_the_commands_are_installed(installed: Path, tmp_path: Path) -> None:
    demo = min((CHECKOUT / "scenarios").glob("*.deliberate.json"))
    assert run(installed.with_name("deliberate"), "check", demo, cwd=tmp_path).strip() == "ok"
    assert installed.with_name("deliberate-window").exists()
