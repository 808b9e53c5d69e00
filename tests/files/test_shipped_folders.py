"""Where the demo scenarios and the schema are found; test_package tries wheels and editable installs for real."""

from __future__ import annotations

from pathlib import Path

import pytest

import deliberate.files.resources as resources

CHECKOUT = Path(__file__).parents[2]


def test_in_a_checkout_they_are_at_the_top() -> None:
    assert resources.resources() == CHECKOUT / "resources"
    assert resources.scenarios() == CHECKOUT / "scenarios"
    assert resources.schema_path().is_file()


def test_in_a_wheel_they_are_inside_the_package(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    package = tmp_path / "deliberate"
    for name in ("resources", "scenarios"):
        (package / "_data" / name).mkdir(parents=True)
        (tmp_path / name).mkdir()  # somebody else's folder beside the package
    monkeypatch.setattr(resources, "_PACKAGE", package)
    assert resources.resources() == package / "_data" / "resources"
    assert resources.scenarios() == package / "_data" / "scenarios"


def test_the_demos_come_sorted_and_without_other_files(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(resources, "scenarios", lambda: tmp_path)
    for name in ("b.deliberate.json", "a.deliberate.json", "notes.txt", "c.json"):
        (tmp_path / name).touch()
    assert resources.demo_scenarios() == (tmp_path / "a.deliberate.json", tmp_path / "b.deliberate.json")
