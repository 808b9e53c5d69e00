"""Killed at any moment, the file is whole and nothing older than five seconds is lost."""

from __future__ import annotations

import os
import random
import signal
import stat
import subprocess
import sys
import time
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

from msgspec.structs import replace

import deliberate
from deliberate.files import demo_scenarios
from deliberate.files.recovery import bring_back, copies

CHECKOUT = Path(deliberate.__file__).parents[1]
RESTLESS = Path(__file__).with_name("restless.py")
KILLS = 30
AT_ONCE = 4
LOST_SECONDS = 5.0
PATIENCE_SECONDS = 90.0


def number(title: str) -> int:
    return int(title.removeprefix("Meeting "))


def begin(folder: Path) -> Path:
    """A saved meeting "Meeting 0" in a folder of its own."""
    path = folder / "meetings" / "meeting.deliberate.json"
    path.parent.mkdir(parents=True)
    demo = next(demo for demo in demo_scenarios() if "reservoir" in demo.name)
    deliberate.write(replace(deliberate.read(demo), title="Meeting 0"), path)
    return path


def environment(screen: str, home: Path) -> dict[str, str]:
    kept = {name: value for name, value in os.environ.items() if not name.startswith(("QT_", "XDG_"))}
    return kept | {"DISPLAY": screen, "QT_QPA_PLATFORM": "xcb", "HOME": str(home), "PYTHONPATH": str(CHECKOUT)}


def comes_true(what: Callable[[], object]) -> bool:
    """Whether it does, while one can wait."""
    deadline = time.monotonic() + PATIENCE_SECONDS
    while not what():
        if time.monotonic() > deadline:
            return False
        time.sleep(0.02)
    return True


def live_and_die(screen: str, folder: Path, seed: int) -> None:
    """One life of the program, and what must be true after it was killed."""
    path, journal = begin(folder), folder / "journal"
    command = [sys.executable, str(RESTLESS), str(path), str(journal), str(seed)]
    with (folder / "complaints").open("wb") as complaints:
        life = subprocess.Popen(command, env=environment(screen, folder), stderr=complaints)
    begun = comes_true(lambda: life.poll() is not None or journal.exists())
    # Who never saves lives long enough to have something that must not be lost.
    time.sleep(random.Random(seed).uniform(0.0, 7.5 if seed % 2 else 2.5))
    killed = time.time()
    life.kill()
    life.wait()
    said = (folder / "complaints").read_text(encoding="utf-8")
    assert begun, said
    assert life.returncode == -signal.SIGKILL, said
    assert "Traceback" not in said, said
    check_what_is_left(path, folder, journal.read_text(encoding="utf-8"), killed)


def check_what_is_left(path: Path, folder: Path, journal: str, killed: float) -> None:
    events = [line.split() for line in journal.splitlines()]
    shown = [(0.0, 0)] + [(float(when), int(which)) for when, what, which in events if what == "shows"]
    saved = [0] + [int(which) for _, what, which in events if what == "saved"]
    begun = [0] + [int(which) for _, what, which in events if what == "saving"]

    on_disk = number(deliberate.read(path).title)
    assert on_disk in (saved[-1], begun[-1]), "the file is the old one or the new one"
    beside = [one.name for one in path.parent.iterdir() if one != path]
    assert all(name.startswith(".deliberate-") and name.endswith(".tmp") for name in beside)

    private = folder / ".local" / "state" / "deliberate" / "recovery"
    kept = [bring_back(one) for one in copies(private)]
    assert len(kept) <= 1
    survived = number(kept[0].scenario.title) if kept else on_disk
    # Whatever was on screen at some time of the last five seconds, the one that was there when they began included.
    ends = [when for when, _ in shown[1:]] + [killed]
    recent = {which for (_, which), end in zip(shown, ends, strict=True) if end >= killed - LOST_SECONDS}
    assert survived in recent, f"{survived} survived, of {sorted(recent)[:3]} ... {max(recent)}"
    if kept:
        assert kept[0].head.path == str(path)
        assert stat.S_IMODE(private.stat().st_mode) == 0o700


def test_killed_at_thirty_moments_of_editing_playing_and_saving(screen: str, tmp_path: Path) -> None:
    with ThreadPoolExecutor(AT_ONCE) as lives:
        ends = [lives.submit(live_and_die, screen, tmp_path / str(seed), seed) for seed in range(KILLS)]
        for end in ends:
            end.result()


def private_files(home: Path) -> list[Path]:
    return [one for one in (home / ".local" / "state" / "deliberate").rglob("*") if one.is_file()]


def test_after_a_crash_the_work_comes_back_by_one_key(start, hands, home: Path) -> None:
    path = begin(home)
    before = len(deliberate.read(path).variants)
    program = start(path)
    hands.turn_to(path.name)
    hands.press("ctrl+t")  # one more variant
    recovery = home / ".local" / "state" / "deliberate" / "recovery"
    assert comes_true(lambda: copies(recovery))
    program.kill()
    program.wait()
    assert len(deliberate.read(path).variants) == before

    again = start()
    hands.turn_to("Unsaved work was found")
    hands.press("Return")
    hands.turn_to(path.name)
    hands.press("ctrl+s")
    assert comes_true(lambda: len(deliberate.read(path).variants) == before + 1)
    hands.press("ctrl+q")
    assert again.wait(PATIENCE_SECONDS) == 0
    assert private_files(home) == []
    settings = home / ".config" / "deliberate"
    assert stat.S_IMODE(settings.stat().st_mode) == 0o700, "the names of meetings are nobody else's business"


def test_a_second_program_on_the_same_file_is_told(start, hands, home: Path) -> None:
    path = begin(home)
    first = start(path)
    hands.turn_to(path.name)
    second = start(path)
    hands.turn_to("Open in another window")
    hands.press("Escape")
    assert second.wait(PATIENCE_SECONDS) == 0
    third = start(path)
    hands.turn_to("Open in another window")
    hands.press("Return")
    hands.turn_to("Meeting 0")  # a copy has no file's name
    hands.press("ctrl+q")
    assert third.wait(PATIENCE_SECONDS) == 0
    hands.turn_to(path.name)
    hands.press("ctrl+q")
    assert first.wait(PATIENCE_SECONDS) == 0
    assert private_files(home) == []
