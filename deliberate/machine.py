"""What a machine needs before a bare checkout can run: a virtual environment, and Qt's system libraries on Debian.

`python3 deliberate` and `python3 tests/run.py` come here before anything is installed. So this file uses the
standard library only, and nothing newer than what lets an old Python say that it is too old.
"""

from __future__ import annotations

import hashlib
import importlib.util
import os
import shutil
import subprocess
import sys
from collections.abc import Iterable, Sequence
from pathlib import Path

CHECKOUT = Path(__file__).resolve().parent.parent
OLDEST, NEWEST = (3, 11), (3, 13)

# What Qt's xcb and offscreen plugins load, by Debian's and Ubuntu's names, and one font to write with.
QT_PACKAGES = (
    "fonts-dejavu-core",
    "libdbus-1-3",
    "libegl1",
    "libfontconfig1",
    "libfreetype6",
    "libgl1",
    "libglib2.0-0",
    "libx11-xcb1",
    "libxcb-cursor0",
    "libxcb-icccm4",
    "libxcb-image0",
    "libxcb-keysyms1",
    "libxcb-randr0",
    "libxcb-render-util0",
    "libxcb-render0",
    "libxcb-shape0",
    "libxcb-shm0",
    "libxcb-sync1",
    "libxcb-util1",
    "libxcb-xfixes0",
    "libxcb-xkb1",
    "libxkbcommon-x11-0",
    "libxkbcommon0",
)


def environment(folder: str, extras: str = "", packages: Sequence[str] = QT_PACKAGES) -> Path:
    """Make the virtual environment `folder` of the checkout, or reuse it, and return its Python.

    It is made anew when pyproject.toml, the extras or the Python have changed. The checkout itself is installed
    in editable form, so a change of the code needs nothing here.
    """
    _check_python()
    home = CHECKOUT / folder
    python = home / ("Scripts/python.exe" if os.name == "nt" else "bin/python")
    stamp = home / "made-from"
    wanted = f"{hashlib.sha256((CHECKOUT / 'pyproject.toml').read_bytes()).hexdigest()} {extras} {sys.version}"
    if stamp.is_file() and python.exists() and stamp.read_text(encoding="utf-8") == wanted:
        return python
    say(f"Setting up {folder}; the first time takes a few minutes.")
    install(packages)
    if importlib.util.find_spec("ensurepip") is None:
        install(["python3-venv"])  # Debian keeps ensurepip apart from python3
    # Only what was made here is cleared: somebody's own environment of that name is added to.
    _run([sys.executable, "-m", "venv", *(["--clear"] if stamp.exists() else []), str(home)])
    _run([str(python), "-m", "pip", "install", "--quiet", "--editable", f"{CHECKOUT}{extras}"])
    stamp.write_text(wanted, encoding="utf-8")
    return python


def install(packages: Iterable[str]) -> None:
    """Install those Debian packages that are missing; who may not is told which, and goes on."""
    missing = missing_packages(packages)
    if not missing:
        return
    if os.geteuid() != 0:
        say(f"Some Debian packages are missing; install them with: sudo apt-get install {' '.join(missing)}")
        return
    say(f"Installing Debian packages: {' '.join(missing)}")
    quiet = {**os.environ, "DEBIAN_FRONTEND": "noninteractive"}
    _run(["apt-get", "update", "-qq"], quiet)
    _run(["apt-get", "install", "-y", "-qq", "--no-install-recommends", *missing], quiet)


def missing_packages(packages: Iterable[str]) -> list[str]:
    """Which of `packages` a Debian machine lacks; none elsewhere, where they go by other names."""
    if not (shutil.which("apt-get") and shutil.which("dpkg-query")):
        return []
    # A newer Debian may have a package under another name that "provides" the old one.
    listing = subprocess.run(
        ["dpkg-query", "--show", "--showformat=${db:Status-Status} ${Package}, ${Provides}\n"],
        capture_output=True,
        text=True,
        check=True,
    ).stdout
    there = {
        name.split()[0]
        for line in listing.splitlines()
        if line.startswith("installed ")
        for name in line.removeprefix("installed ").split(",")
        if name.strip()
    }
    return [package for package in packages if package not in there]


def say(text: str) -> None:
    """Tell the person at the terminal, apart from what the program prints."""
    print(text, file=sys.stderr, flush=True)


def _check_python() -> None:
    if not OLDEST <= sys.version_info[:2] <= NEWEST:
        span = " to ".join(".".join(map(str, version)) for version in (OLDEST, NEWEST))
        sys.exit(f"Deliberate needs Python {span}; {sys.executable} is {sys.version.split()[0]}.")


def _run(command: Sequence[str], env: dict[str, str] | None = None) -> None:
    done = subprocess.run(command, env=env, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, check=False)
    if done.returncode:
        sys.exit(f"{done.stdout}\nThis did not work: {' '.join(command)}")
