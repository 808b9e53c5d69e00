"""Set up and run all checks of this checkout: ``python3 tests/run.py [--bench] [arguments for pytest]``.

Needs nothing but Python 3.11 to 3.13. The virtual environment `.venv-tests` is made at the first run and kept
until pyproject.toml changes. `--bench` runs the benchmarks instead and says on what machine and when.
"""

from __future__ import annotations

import datetime
import os
import platform
import subprocess
import sys
from collections.abc import Sequence
from pathlib import Path

CHECKOUT = Path(__file__).resolve().parent.parent
sys.path.insert(0, str(CHECKOUT / "deliberate"))
import machine  # noqa: E402  (the package is not installed in the Python that runs this)

# A virtual screen for the end-to-end tests, hands for it, and the bus that screen readers use.
PACKAGES = (*machine.QT_PACKAGES, "xvfb", "xdotool", "dbus", "at-spi2-core")


def main(arguments: Sequence[str]) -> int:
    """Run the checks, or the benchmarks, and return the exit status of the first that failed."""
    python = machine.environment(".venv-tests", "[test]", PACKAGES)
    machine.install(PACKAGES)  # the environment may be older than the machine
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    if "--bench" in arguments:
        return bench(python, [argument for argument in arguments if argument != "--bench"])
    checks = {
        "ruff check": ["ruff", "check", "--quiet", "."],
        "ruff format": ["ruff", "format", "--check", "--quiet", "."],
        "import contract": ["lint-imports", "--no-cache"],
        "tests": ["python", "-m", "pytest", *arguments],
    }
    failed = {}
    for name, command in checks.items():
        print(f"--- {name}", flush=True)
        status = run(python, command)
        if status:
            failed[name] = status
    if failed:
        machine.say(f"Failed: {', '.join(failed)}")
    return next(iter(failed.values()), 0)


def bench(python: Path, arguments: Sequence[str]) -> int:
    """Run the benchmarks one after the other and print what they ran on."""
    print(f"{datetime.date.today().isoformat()}, {processor()}, {os.cpu_count()} cores, {platform.platform()}")
    run(python, ["python", "-c", VERSIONS])
    options = [
        "-o",
        "addopts=--strict-markers -p no:cacheprovider",
        "-o",
        "python_files=bench_*.py",
        "--benchmark-only",
        "--benchmark-columns=median,min,max,rounds",
    ]
    return run(python, ["python", "-m", "pytest", "tests/benchmarks", *options, *arguments])


VERSIONS = """
import platform, importlib.metadata as m
names = ("numpy", "scipy", "networkx", "msgspec", "PySide6-Essentials", "pyqtgraph")
print("Python", platform.python_version(), *(f"{name} {m.version(name)}" for name in names), sep=", ")
"""


def processor() -> str:
    """The processor's name where the system tells it."""
    info = Path("/proc/cpuinfo")
    lines = info.read_text(encoding="utf-8").splitlines() if info.exists() else []
    names = [line.split(":", 1)[1].strip() for line in lines if line.startswith("model name")]
    return names[0] if names else platform.processor() or platform.machine()


def run(python: Path, command: Sequence[str]) -> int:
    """Run a command of the virtual environment in the checkout and return its exit status."""
    program = python.with_name(command[0] + python.suffix)
    return subprocess.call([str(program), *command[1:]], cwd=CHECKOUT)


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
