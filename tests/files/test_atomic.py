"""Saving replaces a file as a whole or not at all."""

from __future__ import annotations

import contextlib
import errno
import os
import re
import signal
import stat
import subprocess
import sys
import tempfile
import threading
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

import deliberate.files.atomic as atomic
from deliberate.errors import DeliberateError
from deliberate.files.atomic import replace_file

OLD = b"old\n" * 50_000
NEW = b"new\n" * 60_000
CHECKOUT = Path(atomic.__file__).parents[2]


@pytest.fixture
def path(tmp_path: Path) -> Path:
    """A saved file in a folder of its own."""
    path = tmp_path / "levy.deliberate.json"
    path.write_bytes(OLD)
    return path


def refusal_of(path: Path, data: bytes = NEW) -> str:
    with pytest.raises(DeliberateError) as refusal:
        replace_file(path, data)
    return str(refusal.value)


def test_the_new_content_takes_the_name_and_nothing_else_is_left(path: Path) -> None:
    replace_file(path, NEW)
    assert path.read_bytes() == NEW
    assert list(path.parent.iterdir()) == [path]


def test_a_path_may_be_text_and_relative(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(path.parent)
    replace_file("other.deliberate.json", NEW)
    assert (path.parent / "other.deliberate.json").read_bytes() == NEW


def test_the_content_reaches_the_disk_before_the_name_and_the_name_after(
    path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    steps: list[str] = []
    fsync, replace = os.fsync, os.replace

    def noted_fsync(descriptor: int) -> None:
        status = os.fstat(descriptor)
        steps.append("folder" if stat.S_ISDIR(status.st_mode) else f"{status.st_size} bytes")
        fsync(descriptor)

    def noted_replace(source: Path, target: Path) -> None:
        steps.append("name")
        replace(source, target)

    monkeypatch.setattr(os, "fsync", noted_fsync)
    monkeypatch.setattr(os, "replace", noted_replace)
    replace_file(path, NEW)
    assert steps == [f"{len(NEW)} bytes", "name", "folder"]


@pytest.mark.parametrize(
    ("step", "expected"),
    [("os.open", OLD), ("os.fsync", OLD), ("os.replace", OLD), ("atomic._flush_folder", NEW)],
)
def test_killed_at_any_step_the_file_is_old_or_new(path: Path, step: str, expected: bytes) -> None:
    """The process kills itself, as a crash would, right before the step."""
    script = (
        "import os, signal, sys\n"
        "import deliberate.files.atomic as atomic\n"
        f"{step} = lambda *_: os.kill(os.getpid(), signal.SIGKILL)\n"
        "atomic.replace_file(sys.argv[1], b'new\\n' * 60_000)\n"
    )
    ended = subprocess.run([sys.executable, "-c", script, path], cwd=CHECKOUT, timeout=60)
    assert ended.returncode == -signal.SIGKILL
    assert path.read_bytes() == expected


def test_killed_at_an_arbitrary_moment_the_file_is_old_or_new(path: Path) -> None:
    script = (
        "import sys\n"
        "from deliberate.files.atomic import replace_file\n"
        "print(flush=True)\n"
        "while True:\n"
        "    replace_file(sys.argv[1], b'new\\n' * 60_000)\n"
        "    replace_file(sys.argv[1], b'old\\n' * 50_000)\n"
    )
    for wait in (0.001, 0.003, 0.007, 0.012, 0.02):
        with subprocess.Popen([sys.executable, "-c", script, path], stdout=subprocess.PIPE, cwd=CHECKOUT) as writer:
            writer.stdout.readline()
            threading.Event().wait(wait)
            writer.kill()
        assert path.read_bytes() in (OLD, NEW)


def test_a_reader_meanwhile_sees_old_or_new(path: Path) -> None:
    seen: list[bytes] = []
    done = threading.Event()

    def look() -> None:
        while not done.is_set():
            seen.append(path.read_bytes())

    reader = threading.Thread(target=look)
    reader.start()
    for _ in range(20):
        replace_file(path, NEW)
        replace_file(path, OLD)
    done.set()
    reader.join()
    assert seen
    assert set(seen) <= {OLD, NEW}


@pytest.mark.parametrize("mode", [0o600, 0o640, 0o664, 0o755])
def test_permissions_stay(path: Path, mode: int) -> None:
    path.chmod(mode)
    replace_file(path, NEW)
    assert stat.S_IMODE(path.stat().st_mode) == mode


def test_a_new_file_has_the_permissions_that_the_user_wants(tmp_path: Path) -> None:
    before = os.umask(0o027)
    try:
        replace_file(tmp_path / "new.deliberate.json", NEW)
    finally:
        os.umask(before)
    assert stat.S_IMODE((tmp_path / "new.deliberate.json").stat().st_mode) == 0o640


@pytest.mark.skipif(os.geteuid() != 0, reason="only root can give a file to somebody else")
def test_the_owner_stays(path: Path) -> None:
    os.chown(path, 12_345, 23_456)
    replace_file(path, NEW)
    assert (path.stat().st_uid, path.stat().st_gid) == (12_345, 23_456)


def test_a_symbolic_link_stays_and_its_target_is_replaced(path: Path, tmp_path: Path) -> None:
    folder = tmp_path / "desk"
    folder.mkdir()
    (folder / "first").symlink_to("../second")
    (tmp_path / "second").symlink_to(path)
    replace_file(folder / "first", NEW)
    assert path.read_bytes() == NEW
    assert (folder / "first").is_symlink()
    assert (tmp_path / "second").is_symlink()
    assert list(folder.iterdir()) == [folder / "first"]


def test_a_link_to_what_is_not_there_yet_is_followed(tmp_path: Path) -> None:
    (tmp_path / "link").symlink_to("later")
    replace_file(tmp_path / "link", NEW)
    assert (tmp_path / "link").is_symlink()
    assert (tmp_path / "later").read_bytes() == NEW


@pytest.mark.parametrize(
    ("name", "reason"),
    [
        ("none/levy.deliberate.json", "there is no folder {}/none"),
        ("file/levy.deliberate.json", "{}/file is not a folder"),
        ("", "this is a folder"),
        ("circle", "symbolic links lead in a circle"),
        ("x" * 300, "the file name is too long"),
        ("a\0b", "this is not a possible file name"),
        ("pipe", "this is not a file but a device or a pipe"),
    ],
)
def test_places_that_cannot_be_written_to(tmp_path: Path, name: str, reason: str) -> None:
    (tmp_path / "file").touch()
    (tmp_path / "circle").symlink_to(tmp_path / "circle")
    os.mkfifo(tmp_path / "pipe")
    assert refusal_of(tmp_path / name) == f"cannot be saved: {reason.format(tmp_path)}"
    assert sorted(entry.name for entry in tmp_path.iterdir()) == ["circle", "file", "pipe"]


@pytest.mark.parametrize(
    ("number", "reason"),
    [
        (errno.ENOSPC, "the disk is full"),
        (errno.EDQUOT, "your share of the disk is full"),
        (errno.EROFS, "{} is read-only"),
        (errno.EIO, os.strerror(errno.EIO)),
    ],
)
@pytest.mark.parametrize("step", ["fsync", "replace"])
def test_a_failing_disk_leaves_the_old_file(
    path: Path, monkeypatch: pytest.MonkeyPatch, step: str, number: int, reason: str
) -> None:
    def fail(*_: Any) -> None:
        raise OSError(number, os.strerror(number))

    monkeypatch.setattr(os, step, fail)
    assert refusal_of(path) == f"cannot be saved: {reason.format(path.parent)}"
    assert path.read_bytes() == OLD
    assert list(path.parent.iterdir()) == [path]


def test_interrupted_by_the_user_nothing_is_left_over(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def interrupt(*_: Any) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(os, "fsync", interrupt)
    with pytest.raises(KeyboardInterrupt):
        replace_file(path, NEW)
    assert path.read_bytes() == OLD
    assert list(path.parent.iterdir()) == [path]


def test_a_full_disk_leaves_the_old_file(tmp_path: Path) -> None:
    """On a real file system of 256 KiB that holds the old file but not both."""
    disk = tmp_path / "disk"
    disk.mkdir()
    mount = ["mount", "-t", "tmpfs", "-o", "size=256k", "tmpfs", disk]
    if os.geteuid() != 0 or subprocess.run(mount, capture_output=True).returncode != 0:
        pytest.skip("mounting a small disk takes root and a system that lets it")
    try:
        path = disk / "levy.deliberate.json"
        path.write_bytes(OLD)
        assert refusal_of(path) == "cannot be saved: the disk is full"
        assert path.read_bytes() == OLD
        assert list(disk.iterdir()) == [path]
    finally:
        subprocess.run(["umount", disk], check=True)


@contextlib.contextmanager
def somebody_without_rights() -> Iterator[None]:
    """Root may write anywhere, so it becomes nobody for a while; others have no rights to lose."""
    if os.geteuid() != 0:
        yield
        return
    os.seteuid(65_534)
    try:
        yield
    finally:
        os.seteuid(0)


@pytest.fixture
def open_folder() -> Iterator[Path]:
    """A folder that nobody can at least look into, which pytest's own are not."""
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        folder.chmod(0o755)
        yield folder
        folder.chmod(0o755)


def test_a_folder_that_may_not_be_written_to(open_folder: Path) -> None:
    path = open_folder / "levy.deliberate.json"
    path.write_bytes(OLD)
    path.chmod(0o666)
    open_folder.chmod(0o555)
    with somebody_without_rights():
        assert refusal_of(path) == f"cannot be saved: you may not write into {open_folder}"
        assert refusal_of(open_folder / "new") == f"cannot be saved: you may not write into {open_folder}"
    assert path.read_bytes() == OLD
    assert list(open_folder.iterdir()) == [path]


def test_a_read_only_file_stays_what_it_is(open_folder: Path) -> None:
    """Replacing takes rights on the folder only; who protected the file means the file."""
    path = open_folder / "levy.deliberate.json"
    path.write_bytes(OLD)
    path.chmod(0o444)
    open_folder.chmod(0o777)
    with somebody_without_rights():
        assert refusal_of(path) == "cannot be saved: the file is read-only"
    assert path.read_bytes() == OLD


def test_a_folder_that_cannot_be_flushed_does_not_spoil_the_saving(
    path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    fsync = os.fsync

    def fail_for_folders(descriptor: int) -> None:
        if stat.S_ISDIR(os.fstat(descriptor).st_mode):
            raise OSError(errno.EINVAL, os.strerror(errno.EINVAL))
        fsync(descriptor)

    monkeypatch.setattr(os, "fsync", fail_for_folders)
    replace_file(path, NEW)
    assert path.read_bytes() == NEW


def test_the_passing_name_says_whose_it_is(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    names: list[str] = []
    replace = os.replace

    def noted_replace(source: Path, target: Path) -> None:
        names.append(Path(source).name)
        replace(source, target)

    monkeypatch.setattr(os, "replace", noted_replace)
    replace_file(path, NEW)
    replace_file(path, OLD)
    assert all(re.fullmatch(r"\.deliberate-[0-9a-f]{16}\.tmp", name) for name in names)
    assert len(set(names)) == 2
