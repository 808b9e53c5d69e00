"""Where the files that come with the program are: inside an installed package, or beside it in a checkout."""

from __future__ import annotations

from pathlib import Path

_PACKAGE = Path(__file__).resolve().parents[1]


def resources() -> Path:
    """The folder with the scenario schema, icons and pictures."""
    return _folder("resources")


def scenarios() -> Path:
    """The folder with the demo scenarios."""
    return _folder("scenarios")


def demo_scenarios() -> tuple[Path, ...]:
    """The demo scenarios, sorted by file name."""
    return tuple(sorted(scenarios().glob("*.deliberate.json")))


def schema_path() -> Path:
    """The JSON Schema of scenario files."""
    return resources() / "scenario.schema.json"


def _folder(name: str) -> Path:
    """A wheel carries the folders as package data (see pyproject.toml); an editable install and a checkout have
    them at the top of the project."""
    shipped = _PACKAGE / "_data" / name
    return shipped if shipped.is_dir() else _PACKAGE.parent / name
