"""A desk of its own for each test: a virtual screen, a session bus with the accessibility service, and a home."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from hands import Hands
from screen_reader import ScreenReader

SIZE = (1280, 800)


@pytest.fixture(scope="session")
def screen() -> Iterator[str]:
    """The DISPLAY of a virtual screen of 1280 x 800 without a window manager."""
    report, tell = os.pipe()
    server = subprocess.Popen(
        ["Xvfb", "-displayfd", str(tell), "-screen", "0", f"{SIZE[0]}x{SIZE[1]}x24", "-noreset", "-nolisten", "tcp"],
        pass_fds=[tell],
        stderr=subprocess.DEVNULL,
    )
    os.close(tell)
    with os.fdopen(report) as numbers:
        number = numbers.readline().strip()
    assert number, "Xvfb did not start"
    yield f":{number}"
    server.terminate()
    server.wait()


@pytest.fixture
def home(tmp_path: Path) -> Path:
    """An empty home folder: the program starts as it does the first time."""
    folder = tmp_path / "home"
    folder.mkdir()
    return folder


@pytest.fixture
def surroundings(screen: str, home: Path) -> Iterator[dict[str, str]]:
    """Environment variables of somebody who has just sat down, with a session bus that screen readers use."""
    mine = {name: value for name, value in os.environ.items() if not name.startswith(("QT_", "XDG_", "DBUS_"))}
    mine |= {"DISPLAY": screen, "HOME": str(home), "XDG_RUNTIME_DIR": str(home), "QT_QPA_PLATFORM": "xcb"}
    bus = subprocess.Popen(
        ["dbus-daemon", "--session", "--nofork", "--print-address"],
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
        text=True,
        env=mine,
    )
    assert bus.stdout is not None
    address = bus.stdout.readline().strip()
    yield mine | {"DBUS_SESSION_BUS_ADDRESS": address, "QT_LINUX_ACCESSIBILITY_ALWAYS_ON": "1"}
    bus.terminate()
    bus.wait()
    bus.stdout.close()


@pytest.fixture
def hands(screen: str) -> Hands:
    """Mouse and keyboard of the screen."""
    return Hands(screen)


@pytest.fixture
def reader(surroundings: dict[str, str]) -> Iterator[ScreenReader]:
    """What a screen reader learns of the program. It must be there before the program starts."""
    with ScreenReader(surroundings["DBUS_SESSION_BUS_ADDRESS"]) as one:
        yield one


@pytest.fixture
def start(surroundings: dict[str, str]) -> Iterator[Callable[..., subprocess.Popen[bytes]]]:
    """Starts the installed program with arguments; what still runs at the end is killed."""
    started: list[subprocess.Popen[bytes]] = []

    def start_one(*arguments: str | Path) -> subprocess.Popen[bytes]:
        command = Path(sys.executable).with_name("deliberate")
        program = [str(command)] if command.exists() else [sys.executable, "-m", "deliberate"]
        started.append(subprocess.Popen([*program, *map(str, arguments)], env=surroundings))
        return started[-1]

    yield start_one
    for program in started:
        program.kill()
        program.wait()


@pytest.fixture
def checkout() -> Path:
    """The folder that holds scenarios/."""
    return Path(__file__).resolve().parent.parent.parent
