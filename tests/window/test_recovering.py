"""Unsaved work outlives its window, and only that: the copy comes soon after an edit and goes with saving."""

from __future__ import annotations

import gc
import os
import stat
import subprocess
import sys
import threading
from collections.abc import Callable
from pathlib import Path

import pytest
from answers import answering
from circles import AS_IT_STANDS, CIRCLES
from msgspec.structs import replace
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from deliberate import files
from deliberate.files import recovery as copies
from deliberate.scenario import edits
from deliberate.window.app import _Loud
from deliberate.window.main_window import MainWindow
from deliberate.window.recovery import KEEP_AFTER_MS
from deliberate.window.recovery_dialog import RecoveryDialog

Open = Callable[..., MainWindow]
CHECKOUT = Path(files.__file__).parents[2]
TWO = replace(CIRCLES, variants=(CIRCLES.variants[0], replace(CIRCLES.variants[0], name="Mixed tables")))
PATIENCE = 30_000  # milliseconds, for a busy machine


@pytest.fixture
def path(tmp_path: Path) -> Path:
    path = tmp_path / "label.deliberate.json"
    files.write(TWO, path)
    return path


@pytest.fixture
def private(tmp_path: Path) -> Path:
    return tmp_path / "private"


def start(window: MainWindow, value: float) -> None:
    window.session.edit("Start", lambda s: edits.set_belief(s, "amina", "label", value, variant=AS_IT_STANDS))


def kept(private: Path) -> list[copies.Copy]:
    return [copies.bring_back(path) for path in copies.copies(private / "recovery")]


DIE_WITH_A_LOCK = """
import os, signal, sys
from PySide6.QtCore import QLockFile
lock = QLockFile(sys.argv[1])
assert lock.tryLock(0)
os.kill(os.getpid(), signal.SIGKILL)
"""


def crashed(window: MainWindow, private: Path) -> None:
    """Leave behind what a window leaves that is killed: its copy, and the lock of a process that is gone."""
    assert window.recovery.keep_now()
    lost = {path: path.read_bytes() for path in copies.copies(private / "recovery")}
    window.session.open(window.session.scenario, None)
    window.close()
    for path, data in lost.items():
        if not path.exists():
            path.write_bytes(data)
            subprocess.run([sys.executable, "-c", DIE_WITH_A_LOCK, path.with_suffix(".lock")], check=False)
            assert path.with_suffix(".lock").exists()


def offered(qtbot: QtBot) -> RecoveryDialog:
    qtbot.waitUntil(lambda: isinstance(QApplication.activeModalWidget(), RecoveryDialog))
    return QApplication.activeModalWidget()


def test_a_copy_comes_soon_after_the_first_edit_and_is_not_put_off_by_more(
    qtbot: QtBot, open_file: Open, path: Path, private: Path
) -> None:
    window = open_file(path)
    assert not (private / "recovery").exists(), "nothing to keep yet"
    assert KEEP_AFTER_MS < 5_000 / 2, "half of the five seconds that may be lost; the other half is for a slow disk"
    values = iter(range(1, 10_000))

    def there_while_she_goes_on() -> bool:
        start(window, next(values) % 90)
        return bool(kept(private))

    qtbot.waitUntil(there_while_she_goes_on, timeout=PATIENCE)
    assert kept(private)[0].head.path == str(path)
    qtbot.waitUntil(lambda: kept(private)[0].scenario == window.session.scenario, timeout=PATIENCE)
    assert files.read(path) == TWO, "the file itself waits to be saved"


@pytest.mark.skipif(os.name == "nt", reason="permissions are those of POSIX")
def test_only_their_owner_sees_copies_and_locks(open_file: Open, path: Path, private: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    assert window.recovery.keep_now()
    for folder in ("recovery", "open"):
        assert stat.S_IMODE((private / folder).stat().st_mode) == 0o700
    (copy,) = copies.copies(private / "recovery")
    assert stat.S_IMODE(copy.stat().st_mode) == 0o600
    assert [one for one in path.parent.iterdir() if one.name.startswith((".", "label"))] == [path]


@pytest.mark.parametrize("end", ["save", "undo", "discard"])
def test_the_copy_goes_when_nothing_is_unsaved(
    qtbot: QtBot, open_file: Open, path: Path, private: Path, end: str
) -> None:
    window = open_file(path)
    start(window, 61.0)
    assert window.recovery.keep_now()
    assert len(kept(private)) == 1
    if end == "save":
        window.files.save()
    elif end == "undo":
        window.session.undo()
    else:
        with answering("Discard"):
            window.close()
    qtbot.waitUntil(lambda: not list(copies.copies(private / "recovery")))  # not read: it may go just then


def test_a_clean_close_leaves_nothing(open_file: Open, path: Path, private: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    assert window.recovery.keep_now()
    with answering("Save"):
        window.close()
    assert [one for one in private.rglob("*") if one.is_file()] == []


def test_after_a_crash_the_work_is_brought_back(qtbot: QtBot, open_file: Open, path: Path, private: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    window.session.show_variant("Mixed tables")
    lost = window.session.scenario
    crashed(window, private)
    again = open_file()
    dialog = offered(qtbot)
    words = dialog.list.item(0).text()
    assert words.startswith(f"Label\nBelongs to {path}; kept ")
    qtbot.keyClick(dialog, Qt.Key.Key_Return)
    qtbot.waitUntil(lambda: again.session.scenario == lost)
    assert again.session.path == path
    assert again.session.variant.name == "Mixed tables"
    assert again.isWindowModified()
    assert files.read(path) == TWO
    assert len(kept(private)) == 1, "it stays until the work is saved"
    assert again.files.save()
    assert files.read(path) == lost
    qtbot.waitUntil(lambda: not list(copies.copies(private / "recovery")))  # not read: it may go just then


def test_bringing_back_asks_about_the_work_at_hand(qtbot: QtBot, open_file: Open, path: Path, private: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    crashed(window, private)
    again = open_file(path)
    dialog = offered(qtbot)
    start(again, 33.0)
    mine = again.session.scenario
    with answering("Cancel"):
        qtbot.mouseClick(dialog.bring_back, Qt.MouseButton.LeftButton)
    assert again.session.scenario is mine
    again.actions_of_window.bring_back.trigger()
    with answering("Discard"):
        qtbot.mouseClick(offered(qtbot).bring_back, Qt.MouseButton.LeftButton)
    assert again.session.variant.people[0].beliefs["label"] == 61.0


def test_discarding_and_leaving_for_later(qtbot: QtBot, open_file: Open, path: Path, private: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    crashed(window, private)
    again = open_file()
    dialog = offered(qtbot)
    qtbot.keyClick(dialog, Qt.Key.Key_Escape)
    assert len(kept(private)) == 1
    assert again.session.path == path, "what was open last is open"
    assert again.session.scenario == TWO
    again.close()
    once_more = open_file()
    dialog = offered(qtbot)
    qtbot.mouseClick(dialog.discard, Qt.MouseButton.LeftButton)
    assert kept(private) == []
    assert not dialog.isVisible()
    once_more.actions_of_window.bring_back.trigger()
    assert QApplication.activeModalWidget() is None


def test_several_copies_are_offered_together(qtbot: QtBot, open_file: Open, path: Path, private: Path) -> None:
    for title in ("One", "Two"):
        window = open_file(path)
        if title == "Two":
            qtbot.keyClick(offered(qtbot), Qt.Key.Key_Escape)
        window.session.edit("Title", lambda s, title=title: replace(s, title=title))
        crashed(window, private)
    again = open_file()
    dialog = offered(qtbot)
    assert dialog.list.count() == 2
    titles = [dialog.list.item(row).text().splitlines()[0] for row in range(2)]
    assert sorted(titles) == ["One", "Two"]
    dialog.list.setCurrentRow(titles.index("One"))
    qtbot.keyClick(dialog.list, Qt.Key.Key_Return)
    assert again.session.scenario.title == "One"
    assert again.recovery.any_copies(), "the other one waits"


def test_a_copy_of_a_window_that_lives_is_not_offered(
    qtbot: QtBot, open_file: Open, path: Path, private: Path
) -> None:
    window = open_file(path)
    start(window, 61.0)
    assert window.recovery.keep_now()
    other = open_file()
    qtbot.wait(100)
    assert QApplication.activeModalWidget() is None
    assert other.recovery.leftovers() == ()
    assert len(kept(private)) == 1


def test_a_crash_between_saving_and_removing_the_copy_offers_nothing(
    qtbot: QtBot, open_file: Open, path: Path, private: Path
) -> None:
    window = open_file(path)
    start(window, 61.0)
    files.write(window.session.scenario, path)
    crashed(window, private)
    open_file(path)
    qtbot.wait(100)
    assert QApplication.activeModalWidget() is None
    assert kept(private) == []


def test_a_file_changed_after_the_crash_is_noticed(qtbot: QtBot, open_file: Open, path: Path, private: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    crashed(window, private)
    files.write(replace(TWO, title="Theirs"), path)
    again = open_file()
    qtbot.keyClick(offered(qtbot), Qt.Key.Key_Return)
    with answering("Cancel") as said:
        assert not again.files.save()
    assert said[0].endswith("was changed on disk")
    assert files.read(path).title == "Theirs"


def test_a_damaged_copy_is_told_and_can_be_discarded(qtbot: QtBot, open_file: Open, private: Path) -> None:
    folder = copies.make_private(private / "recovery")
    (folder / "x.recovery").write_bytes(b"{")
    window = open_file()
    dialog = offered(qtbot)
    assert dialog.list.item(0).text() == "A copy that cannot be read any more"
    with answering("OK") as said:
        qtbot.mouseClick(dialog.bring_back, Qt.MouseButton.LeftButton)
    assert said[1] == "this copy is damaged"
    window.actions_of_window.bring_back.trigger()
    qtbot.mouseClick(offered(qtbot).discard, Qt.MouseButton.LeftButton)
    assert copies.copies(folder) == ()


def test_where_no_copy_can_be_made_it_is_said_once(qtbot: QtBot, open_file: Open, path: Path, private: Path) -> None:
    window = open_file(path)
    private.mkdir(exist_ok=True)
    (private / "recovery").write_text("in the way")
    said: list[str] = []
    window.recovery.failed.connect(said.append)
    for value in (61.0, 62.0):
        start(window, value)
        window.recovery.keep_soon()
    assert len(said) == 1
    assert "The copy of unsaved work cannot be saved: " in window.statusBar().currentMessage()
    (private / "recovery").unlink()
    window.recovery.keep_soon()
    qtbot.waitUntil(lambda: len(kept(private)) == 1)


def test_a_bug_in_the_program_keeps_the_work_first(
    open_file: Open, path: Path, private: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    window = open_file(path)
    start(window, 61.0)
    with answering("OK") as said:
        try:
            raise ZeroDivisionError("a fault made for this test")
        except ZeroDivisionError as error:
            _Loud(window)(type(error), error, error.__traceback__)
    assert "a fault made for this test" in capsys.readouterr().err
    assert "Unsaved work has been kept" in said[1]
    assert kept(private)[0].scenario == window.session.scenario


def test_the_copying_thread_never_runs_the_collector(
    qtbot: QtBot, open_file: Open, path: Path, private: Path
) -> None:
    window = open_file(path)
    threads: set[int] = set()

    def note(phase: str, info: dict[str, int]) -> None:
        threads.add(threading.get_ident())

    before = gc.get_threshold()
    gc.callbacks.append(note)
    gc.set_threshold(20)
    try:
        start(window, 61.0)
        window.recovery.keep_soon()
        qtbot.waitUntil(lambda: bool(kept(private)))
    finally:
        gc.set_threshold(*before)
        gc.callbacks.remove(note)
    assert threads == {threading.get_ident()}
    assert gc.isenabled()
