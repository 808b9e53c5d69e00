"""Noticing what other programs do to a file, and nothing else."""

from __future__ import annotations

import os
from pathlib import Path

import pytest
from msgspec.structs import replace

from deliberate.errors import DeliberateError
from deliberate.files import demo_scenarios, read
from deliberate.files.on_disk import GONE, UNREADABLE, OnDisk, look, read_noting, write_noting

DEMO = read(demo_scenarios()[0])


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "levy.deliberate.json"


def changed(path: Path, known: OnDisk) -> bool:
    return look(path, known).digest != known.digest


def test_what_was_saved_or_read_here_is_the_same(path: Path) -> None:
    saved = write_noting(DEMO, path)
    assert not changed(path, saved)
    scenario, known = read_noting(path)
    assert scenario == DEMO
    assert known == saved
    assert not changed(path, known)
    assert look(path) == known


def test_a_new_date_or_a_copy_of_the_same_is_no_change(path: Path) -> None:
    known = write_noting(DEMO, path)
    os.utime(path, (1_000_000, 1_000_000))
    assert not changed(path, known)
    data = path.read_bytes()
    path.unlink()
    path.write_bytes(data)
    assert not changed(path, known)


def test_other_content_is_a_change_also_with_the_old_date_and_size(path: Path) -> None:
    known = write_noting(DEMO, path)
    status = path.stat()
    other = path.with_name("other")
    other.write_bytes(path.read_bytes().replace(b"a", b"b"))
    os.utime(other, ns=(status.st_atime_ns, status.st_mtime_ns))
    os.replace(other, path)
    assert path.stat().st_size == status.st_size
    assert changed(path, known)


def test_a_file_that_turned_into_something_else_is_changed(path: Path) -> None:
    known = write_noting(DEMO, path)
    path.unlink()
    path.mkdir()
    assert look(path, known).digest == UNREADABLE


def test_a_file_that_went_is_gone_and_comes_back_the_same(path: Path) -> None:
    known = write_noting(DEMO, path)
    moved = path.rename(path.with_name("elsewhere"))
    assert look(path, known) == OnDisk(GONE)
    moved.rename(path)
    assert not changed(path, known)


def test_what_does_not_fit_is_not_saved(path: Path) -> None:
    known = write_noting(DEMO, path)
    with pytest.raises(DeliberateError):
        write_noting(replace(DEMO, title=""), path)
    assert not changed(path, known)


def test_saving_clears_what_an_earlier_crash_left_beside(path: Path) -> None:
    left = path.with_name(".deliberate-0123456789abcdef.tmp")
    left.touch()
    os.utime(left, (1_000_000, 1_000_000))
    write_noting(DEMO, path)
    assert list(path.parent.iterdir()) == [path]
