"""Copies of unsaved work: whole, private, and as exact as a saved file."""

from __future__ import annotations

import os
import stat
import subprocess
import sys
from datetime import UTC, datetime
from pathlib import Path

import pytest
from hypothesis import given
from strategies import scenarios

import deliberate.files.atomic as atomic
from deliberate.errors import DeliberateError
from deliberate.files import demo_scenarios, read
from deliberate.files.recovery import SUFFIX, Copy, Head, bring_back, copies, forget, head_of, keep, make_private
from deliberate.scenario.values import Scenario

KEPT = datetime(2024, 5, 17, 21, 40, 3, tzinfo=UTC)
DEMO = read(demo_scenarios()[0])


def head(scenario: Scenario = DEMO) -> Head:
    return Head(scenario.title, scenario.variants[0].name, KEPT, "/somewhere/levy.deliberate.json", "0" * 64)


@given(scenario=scenarios())
def test_what_is_kept_comes_back(tmp_path_factory: pytest.TempPathFactory, scenario: Scenario) -> None:
    path = tmp_path_factory.getbasetemp() / f"copy{SUFFIX}"
    keep(Copy(head(scenario), scenario), path)
    assert bring_back(path) == Copy(head(scenario), scenario)
    assert head_of(path) == head(scenario)


@pytest.mark.skipif(os.name == "nt", reason="permissions are those of POSIX")
def test_nobody_else_may_look(tmp_path: Path) -> None:
    before = os.umask(0o022)
    try:
        folder = make_private(tmp_path / "state" / "recovery")
        path = folder / f"one{SUFFIX}"
        keep(Copy(head(), DEMO), path)
        keep(Copy(head(), DEMO), path)  # also the second time, over the first
    finally:
        os.umask(before)
    assert stat.S_IMODE(folder.stat().st_mode) == 0o700
    assert stat.S_IMODE(path.stat().st_mode) == 0o600


@pytest.mark.skipif(os.name == "nt", reason="permissions are those of POSIX")
def test_a_folder_that_was_open_is_closed(tmp_path: Path) -> None:
    folder = tmp_path / "recovery"
    folder.mkdir(mode=0o755)
    make_private(folder)
    assert stat.S_IMODE(folder.stat().st_mode) == 0o700


def test_where_no_folder_can_be_made_it_says_so(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("in the way")
    with pytest.raises(DeliberateError, match="cannot be used"):
        make_private(tmp_path / "file" / "recovery")


@pytest.mark.parametrize("data", [b"", b"{}", b"not JSON\n{}", b'{"title": "x"}\n', b"\xff\xfe\n"])
def test_a_damaged_copy_is_said_to_be_damaged(tmp_path: Path, data: bytes) -> None:
    path = tmp_path / f"one{SUFFIX}"
    path.write_bytes(data)
    with pytest.raises(DeliberateError, match="this copy is damaged"):
        bring_back(path)
    with pytest.raises(DeliberateError, match="this copy is damaged"):
        head_of(path)


def test_a_copy_cut_short_is_refused(tmp_path: Path) -> None:
    path = tmp_path / f"one{SUFFIX}"
    keep(Copy(head(), DEMO), path)
    path.write_bytes(path.read_bytes()[:-40])
    assert head_of(path) == head()
    with pytest.raises(DeliberateError, match="is not JSON"):
        bring_back(path)


def test_copies_come_newest_first_and_go_when_forgotten(tmp_path: Path) -> None:
    assert copies(tmp_path / "nowhere") == ()
    old, new = tmp_path / f"a{SUFFIX}", tmp_path / f"b{SUFFIX}"
    for path, changed in ((old, 1_000_000), (new, 2_000_000)):
        keep(Copy(head(), DEMO), path)
        os.utime(path, (changed, changed))
    (tmp_path / "b.lock").touch()
    assert copies(tmp_path) == (new, old)
    forget(new)
    forget(new)
    assert copies(tmp_path) == (old,)


def test_what_a_crash_left_half_written_is_cleared_when_nobody_writes_it_any_more(tmp_path: Path) -> None:
    script = (
        "import os, sys, signal\n"
        "import deliberate.files.atomic as atomic\n"
        "os.replace = lambda *_: os.kill(os.getpid(), signal.SIGKILL)\n"
        "atomic.replace_file(sys.argv[1], b'names')\n"
    )
    checkout = Path(atomic.__file__).parents[2]
    subprocess.run([sys.executable, "-c", script, tmp_path / "levy.json"], cwd=checkout, timeout=60, check=False)
    (left,) = tmp_path.iterdir()
    (tmp_path / "notes.tmp").touch()
    atomic.clear_half_written(tmp_path)
    assert left.exists(), "it may be in the middle of being written"
    for path in tmp_path.iterdir():
        os.utime(path, (1_000_000, 1_000_000))
    atomic.clear_half_written(tmp_path)
    assert [path.name for path in tmp_path.iterdir()] == ["notes.tmp"]
