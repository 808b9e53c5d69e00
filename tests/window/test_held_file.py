"""Two windows on one file: the second one is told, and a dead one holds nothing."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest
from answers import answering
from circles import CIRCLES
from PySide6.QtCore import QSettings, Qt
from pytestqt.qtbot import QtBot

from deliberate import files
from deliberate.window.app import first_meeting
from deliberate.window.held_file import InUseError, Locks
from deliberate.window.main_window import MainWindow
from deliberate.window.recent import RecentFiles

CHECKOUT = Path(files.__file__).parents[2]
HOLD = """
import sys
from pathlib import Path
from deliberate.window.held_file import Locks
lock = Locks(Path(sys.argv[1])).take(Path(sys.argv[2]))
print("held" if lock else "free", flush=True)
sys.stdin.read()
"""


@pytest.fixture
def path(tmp_path: Path) -> Path:
    path = tmp_path / "label.deliberate.json"
    files.write(CIRCLES, path)
    return path


@pytest.fixture
def locks(tmp_path: Path) -> Locks:
    """The same folder as `open_file` uses."""
    return Locks(tmp_path / "private" / "open")


def other_process(tmp_path: Path, path: Path) -> subprocess.Popen[str]:
    """Another window's process, which holds the file until it ends."""
    command = [sys.executable, "-c", HOLD, str(tmp_path / "private" / "open"), str(path)]
    holder = subprocess.Popen(command, cwd=CHECKOUT, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True)
    assert holder.stdout is not None
    assert holder.stdout.readline().strip() == "held"
    return holder


def test_a_lock_is_held_once_and_free_again(locks: Locks, path: Path) -> None:
    lock = locks.take(path)
    assert lock is not None
    with pytest.raises(InUseError, match="is open in another window"):
        locks.take(path)
    lock.unlock()
    assert locks.take(path) is not None


def test_one_file_by_another_way_is_the_same_file(locks: Locks, path: Path) -> None:
    link = path.with_name("link.deliberate.json")
    link.symlink_to(path)
    held = locks.take(path)
    assert held is not None
    for other in (link, path.parent / "x" / ".." / path.name):
        with pytest.raises(InUseError):
            locks.take(other)


def test_locks_tell_nothing_of_the_meeting(locks: Locks, path: Path, tmp_path: Path) -> None:
    held = locks.take(path)
    assert held is not None
    (name,) = (tmp_path / "private" / "open").iterdir()
    assert "label" not in name.name
    assert b"label" not in name.read_bytes()
    held.unlock()
    assert list((tmp_path / "private" / "open").iterdir()) == []


def test_a_killed_process_holds_nothing(locks: Locks, path: Path, tmp_path: Path) -> None:
    with other_process(tmp_path, path) as holder:
        with pytest.raises(InUseError):
            locks.take(path)
        holder.kill()
    assert locks.take(path) is not None


@pytest.mark.parametrize("line", [0, 1, 2])
def test_neither_another_machine_name_nor_another_owner_of_the_number_keeps_a_dead_lock(
    locks: Locks, path: Path, tmp_path: Path, line: int
) -> None:
    with other_process(tmp_path, path) as holder:
        holder.kill()
    (lock,) = (tmp_path / "private" / "open").iterdir()
    lines = lock.read_text(encoding="utf-8").splitlines()
    lines[0] = str(os.getpid())  # a living process got the number
    lines[line] = ("1", "python", "another-machine")[line]
    lock.write_text("\n".join(lines) + "\n", encoding="utf-8")
    assert locks.take(path) is not None


def test_a_living_lock_with_another_machine_name_is_left_alone(locks: Locks, path: Path, tmp_path: Path) -> None:
    with other_process(tmp_path, path) as holder:
        (lock,) = (tmp_path / "private" / "open").iterdir()
        lines = lock.read_text(encoding="utf-8").splitlines()
        lines[2] = "another-machine"
        lock.write_text("\n".join(lines) + "\n", encoding="utf-8")
        with pytest.raises(InUseError):
            locks.take(path)
        holder.kill()


def test_where_no_lock_can_be_made_work_goes_on(path: Path, tmp_path: Path) -> None:
    (tmp_path / "file").write_text("in the way")
    assert Locks(tmp_path / "file" / "open").take(path) is None


def test_the_second_window_is_told_and_gets_a_copy(
    qtbot: QtBot, open_file: Callable[..., MainWindow], path: Path, tmp_path: Path
) -> None:
    window = open_file()
    with other_process(tmp_path, path) as holder:
        with answering(Qt.Key.Key_Escape) as said:
            assert not window.files.open(path)
        assert said[0] == "Open in another window"
        assert said[1].startswith("“label.deliberate.json” is open in another window of Deliberate.")
        assert window.session.scenario != CIRCLES
        with answering("Open as a copy"):
            assert window.files.open(path)
        assert window.session.scenario == CIRCLES
        assert window.session.path is None, "saving asks where to"
        with answering("OK") as said:
            assert not window.files.save_as(path)
        assert "is open in another window of Deliberate" in said[1]
        holder.kill()
    assert window.files.open(path)
    assert window.session.path == path


def test_a_window_lets_its_file_go_when_it_opens_another_saves_as_or_closes(
    open_file: Callable[..., MainWindow], locks: Locks, path: Path
) -> None:
    def free(place: Path) -> bool:
        try:
            lock = locks.take(place)
        except InUseError:
            return False
        assert lock is not None
        lock.unlock()
        return True

    window = open_file(path)
    assert not free(path)
    assert window.files.open(path), "again in the same window"
    assert not free(path)
    other = path.with_name("other.deliberate.json")
    assert window.files.save_as(other)
    assert free(path)
    assert not free(other)
    window.files.new()
    assert free(other)
    assert window.files.open(other)
    broken = path.with_name("broken.deliberate.json")
    broken.write_text("{")
    with answering("OK"):
        assert not window.files.open(broken)
    assert free(broken)
    assert not free(other)
    window.close()
    assert free(other)


def test_started_on_a_file_in_use_it_asks_before_there_is_a_window(
    qapp: object, locks: Locks, path: Path, tmp_path: Path
) -> None:
    recent = RecentFiles(QSettings(str(tmp_path / "s.ini"), QSettings.Format.IniFormat))
    held = locks.take(path)
    assert held is not None
    with answering(Qt.Key.Key_Escape):
        assert first_meeting(str(path), recent, locks) is None
    with answering("Open as a copy"):
        copy = first_meeting(str(path), recent, locks)
    assert copy is not None
    assert (copy.scenario, copy.held) == (CIRCLES, None)
    recent.add(path)
    beginning = first_meeting(None, recent, locks)
    assert beginning is not None
    assert beginning.held is None
    assert beginning.word == "label.deliberate.json is open in another window of Deliberate"
    assert recent.last == path
