"""New, open, save, revert, and what other programs do to the file meanwhile."""

from __future__ import annotations

import os
import subprocess
from collections.abc import Callable, Iterator
from contextlib import suppress
from pathlib import Path

import pytest
from answers import answering
from circles import AS_IT_STANDS, CIRCLES
from msgspec.structs import replace
from PySide6.QtCore import QMimeData, QPoint, QPointF, Qt, QTimer, QUrl
from PySide6.QtGui import QDragEnterEvent, QDropEvent
from PySide6.QtWidgets import QApplication, QFileDialog, QLineEdit, QWidget
from pytestqt.qtbot import QtBot

from deliberate import files
from deliberate.scenario import edits
from deliberate.window.main_window import MainWindow
from deliberate.window.meeting_files import new_meeting, with_suffix

Open = Callable[..., MainWindow]
THEIRS = replace(CIRCLES, title="Theirs")


@pytest.fixture
def path(tmp_path: Path) -> Path:
    """A saved meeting in a folder of its own."""
    folder = tmp_path / "meetings"
    folder.mkdir()
    path = folder / "label.deliberate.json"
    files.write(CIRCLES, path)
    return path


def start(window: MainWindow, value: float) -> None:
    """One edit."""
    window.session.edit("Start", lambda s: edits.set_belief(s, "amina", "label", value, variant=AS_IT_STANDS))


def come_back(qtbot: QtBot, window: MainWindow) -> None:
    """Go to another program and come back to the window."""
    other = QWidget()
    other.show()
    other.activateWindow()
    qtbot.waitUntil(other.isActiveWindow)
    other.close()
    other.deleteLater()
    window.activateWindow()
    qtbot.wait(50)  # a question may come up and be answered meanwhile


def test_an_opened_file_is_as_it_was_and_has_its_name(open_file: Open, path: Path) -> None:
    before = path.read_bytes()
    window = open_file(path)
    assert window.session.scenario == CIRCLES
    assert window.session.path == path
    assert window.windowTitle().startswith("label.deliberate.json")
    assert window.files.save()
    assert path.read_bytes() == before


def test_saving_keeps_the_edit_and_takes_the_mark_away(open_file: Open, path: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    assert window.isWindowModified()
    assert window.files.save()
    assert not window.isWindowModified()
    assert files.read(path) == window.session.scenario
    assert window.session.undo_step == "Start", "saving leaves the history alone"


def test_a_file_that_cannot_be_read_leaves_what_is_open(open_file: Open, path: Path) -> None:
    window = open_file(path)
    wrong = path.with_name("wrong.deliberate.json")
    wrong.write_text(path.read_text(encoding="utf-8").replace('"weight": 30', '"weight": -2', 1), encoding="utf-8")
    with answering("OK") as said:
        assert not window.files.open(wrong)
    assert said[0] == "“wrong.deliberate.json” was not opened"
    assert said[1].startswith("wrong.deliberate.json: variants[0].arrows[0].weight: must be more than 0")
    assert window.session.path == path
    assert window.session.scenario == CIRCLES


@pytest.mark.parametrize("leave", ["new", "open", "close", "demo"])
def test_it_asks_before_losing_work(open_file: Open, path: Path, leave: str) -> None:
    window = open_file(path)
    ways = {
        "new": window.files.new,
        "open": lambda: window.files.open(path),
        "close": window.close,
        "demo": lambda: window.files.open_demo(files.demo_scenarios()[0]),
    }
    start(window, 61.0)
    mine = window.session.scenario
    for way_out in ("Cancel", Qt.Key.Key_Escape):
        with answering(way_out) as said:
            ways[leave]()
        assert said == ["Save the changes?", "“Label” has changes that are not saved."]
        assert window.isVisible()
        assert window.session.scenario is mine
    with answering("Discard"):
        ways[leave]()
    assert files.read(path) == CIRCLES
    assert leave == "close" or window.session.scenario is not mine


def test_saving_on_the_way_out(open_file: Open, path: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    with answering("Save"):
        window.files.new()
    assert window.session.scenario == new_meeting()
    assert window.session.path is None
    assert files.read(path).variants[0].people[0].beliefs["label"] == 61.0


def test_save_as_goes_on_with_the_new_file(open_file: Open, path: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    assert window.files.save_as(path.with_name("Board of St. Mary"))
    new = path.with_name("Board of St. Mary.deliberate.json")
    assert window.session.path == new
    start(window, 62.0)
    assert window.files.save()
    assert files.read(new).variants[0].people[0].beliefs["label"] == 62.0
    assert files.read(path) == CIRCLES


def test_a_name_completed_by_the_program_replaces_nothing_unasked(open_file: Open, path: Path) -> None:
    window = open_file(path)
    other = path.with_name("other.deliberate.json")
    files.write(THEIRS, other)
    with answering("Cancel") as said:
        assert not window.files.save_as(path.with_name("other"))
    assert said[0] == "Replace “other.deliberate.json”?"
    assert files.read(other) == THEIRS
    assert window.session.path == path
    with answering("Replace it"):
        assert window.files.save_as(path.with_name("other"))
    assert files.read(other) == CIRCLES


@pytest.mark.parametrize(
    ("typed", "meant"),
    [
        ("levy", "levy.deliberate.json"),
        ("levy.v2", "levy.v2.deliberate.json"),
        ("levy.deliberate.json", "levy.deliberate.json"),
        ("levy.JSON", "levy.JSON"),
    ],
)
def test_the_suffix_is_added_where_it_is_missing(typed: str, meant: str) -> None:
    assert with_suffix(Path("a") / typed) == Path("a") / meant


def test_saving_a_demo_asks_where_to_and_escape_saves_nothing(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    window.files.open_demo(files.demo_scenarios()[0])
    assert window.session.path is None

    def in_dialog(act: Callable[[QFileDialog], None]) -> None:
        qtbot.waitUntil(lambda: isinstance(QApplication.activeModalWidget(), QFileDialog))
        dialog = QApplication.activeModalWidget()
        try:
            act(dialog)
        except BaseException:
            dialog.reject()
            raise

    QTimer.singleShot(0, lambda: in_dialog(lambda dialog: qtbot.keyClick(dialog, Qt.Key.Key_Escape)))
    assert not window.files.save()
    wanted = path.with_name("mine.deliberate.json")

    def type_name(dialog: QFileDialog) -> None:
        field = dialog.findChild(QLineEdit, "fileNameEdit")
        assert field.text() == "label-for-air-sensors.deliberate.json"
        field.setText(str(wanted))  # typing opens a list of names, which the offscreen platform complains about
        qtbot.keyClick(field, Qt.Key.Key_Return)

    QTimer.singleShot(0, lambda: in_dialog(type_name))
    assert window.files.save()
    assert window.session.path == wanted
    assert files.read(wanted) == files.read(files.demo_scenarios()[0])


def test_reverting_can_be_undone(open_file: Open, path: Path) -> None:
    window = open_file(path)
    assert not window.actions_of_window.revert.isEnabled()
    start(window, 61.0)
    mine = window.session.scenario
    assert window.actions_of_window.revert.isEnabled()
    window.actions_of_window.revert.trigger()
    assert window.session.scenario == CIRCLES
    assert not window.isWindowModified()
    window.session.undo()
    assert window.session.scenario is mine
    assert window.isWindowModified()


def test_what_is_being_typed_is_saved_too(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    window.canvas.setFocus()
    window.session.select(["amina"])
    qtbot.keyClick(window.canvas, Qt.Key.Key_F2)
    field = window.focusWidget()
    assert isinstance(field, QLineEdit)
    qtbot.keyClicks(field, "Amina the first")
    qtbot.keyClick(field, Qt.Key.Key_S, Qt.KeyboardModifier.ControlModifier)
    assert files.read(path).variants[0].people[0].name == "Amina the first"
    assert not window.isWindowModified()


def test_what_is_being_typed_is_asked_about_when_leaving(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    window.canvas.setFocus()
    window.session.select(["amina"])
    qtbot.keyClick(window.canvas, Qt.Key.Key_F2)
    qtbot.keyClicks(window.focusWidget(), "Amina the first")
    with answering("Save"):
        window.close()
    assert files.read(path).variants[0].people[0].name == "Amina the first"


def test_a_field_keeps_the_focus_when_its_text_is_taken_up(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    title = window.sidebar.meeting.title
    window.sidebar.tabs.setCurrentIndex(window.sidebar.pages.indexOf(window.sidebar.meeting))
    title.setFocus()
    title.selectAll()
    qtbot.keyClicks(title, "Label, second reading")
    qtbot.keyClick(title, Qt.Key.Key_S, Qt.KeyboardModifier.ControlModifier)
    assert files.read(path).title == "Label, second reading"
    assert title.hasFocus()


def test_nothing_is_taken_while_a_question_is_up(open_file: Open, path: Path) -> None:
    window = open_file(path)
    taken: list[bool] = []
    start(window, 61.0)
    QTimer.singleShot(0, lambda: taken.append(drop(window, of_files(path))))
    with answering("Cancel"):
        window.close()
    assert taken == [False]


# Other programs


def test_coming_back_to_an_unchanged_file_asks_nothing(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    os.utime(path, (1_000_000, 1_000_000))
    come_back(qtbot, window)
    assert QApplication.activeModalWidget() is None
    assert not window.isWindowModified()


def test_a_change_by_another_program_is_told_and_loaded(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    files.write(THEIRS, path)
    with answering("Load theirs") as said:
        come_back(qtbot, window)
    assert said[0] == "The file was changed on disk"
    assert "changed label.deliberate.json on disk" in said[1]
    assert window.session.scenario == THEIRS
    assert not window.isWindowModified()
    window.session.undo()
    assert window.session.scenario == CIRCLES
    assert window.isWindowModified()


def test_keeping_mine_leaves_the_file_until_it_is_saved(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    mine = window.session.scenario
    files.write(THEIRS, path)
    with answering("Keep mine"):
        come_back(qtbot, window)
    assert window.session.scenario is mine
    assert window.isWindowModified()
    assert files.read(path) == THEIRS
    come_back(qtbot, window)  # told once
    assert QApplication.activeModalWidget() is None
    assert window.files.save()
    assert files.read(path) == mine


def test_keeping_an_unedited_meeting_makes_it_unsaved(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    files.write(THEIRS, path)
    with answering("Keep mine"):
        come_back(qtbot, window)
    assert window.isWindowModified(), "the file holds something else now"


def test_a_change_is_seen_before_saving_over_it(open_file: Open, path: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    mine = window.session.scenario
    files.write(THEIRS, path)
    for way_out in ("Cancel", Qt.Key.Key_Escape):
        with answering(way_out):
            assert not window.files.save()
        assert files.read(path) == THEIRS
    with answering("Load theirs"):
        assert not window.files.save()
    assert window.session.scenario == THEIRS
    window.session.undo()
    files.write(CIRCLES, path)
    with answering("Replace it"):
        assert window.files.save()
    assert files.read(path) == mine
    assert not window.isWindowModified()


def test_who_does_not_choose_is_not_asked_again_until_it_changes_again(
    qtbot: QtBot, open_file: Open, path: Path
) -> None:
    window = open_file(path)
    files.write(THEIRS, path)
    with answering("Cancel"):
        come_back(qtbot, window)
    for _ in range(2):
        come_back(qtbot, window)
        assert QApplication.activeModalWidget() is None
    with answering("Cancel"):
        assert not window.files.save()
    files.write(replace(THEIRS, title="Theirs again"), path)
    with answering("Load theirs"):
        come_back(qtbot, window)
    assert window.session.scenario.title == "Theirs again"


def test_theirs_that_cannot_be_read_leaves_mine(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    path.write_text("{", encoding="utf-8")
    with answering("Load theirs", "OK") as said:
        come_back(qtbot, window)
    assert said[0].endswith("was changed on disk")
    assert said[2].endswith("was not opened")
    assert window.session.scenario == CIRCLES
    come_back(qtbot, window)
    assert QApplication.activeModalWidget() is None


def test_a_file_that_vanished_is_told_once_and_saved_anew(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    path.unlink()
    with answering("OK") as said:
        come_back(qtbot, window)
    assert said[0] == "The file is not there any more"
    assert "label.deliberate.json" in said[1]
    assert window.session.scenario == CIRCLES
    assert window.isWindowModified(), "closing asks now"
    come_back(qtbot, window)
    assert QApplication.activeModalWidget() is None
    assert window.files.save()
    assert files.read(path) == CIRCLES


def test_a_folder_that_vanished_keeps_the_work_in_the_window(open_file: Open, path: Path) -> None:
    window = open_file(path)
    start(window, 61.0)
    path.unlink()
    path.parent.rmdir()
    with answering("OK") as said:
        assert not window.files.save()
    assert f"there is no folder {path.parent}" in said[1]
    assert window.isWindowModified()


@pytest.mark.parametrize("happens", ["changed", "gone", "not saved"])
def test_what_comes_up_unasked_names_no_file_while_codes_stand_for_names(
    qtbot: QtBot, open_file: Open, path: Path, happens: str
) -> None:
    named = path.with_name("Amina against Davor.deliberate.json")
    files.write(CIRCLES, named)
    window = open_file(named)
    window.session.show_codes(True)
    with answering("OK" if happens != "changed" else "Cancel") as said:
        if happens == "changed":
            files.write(THEIRS, named)
            come_back(qtbot, window)
        elif happens == "gone":
            named.unlink()
            come_back(qtbot, window)
        else:
            named.unlink()
            named.mkdir()
            window.files.save_as(named)
    assert "Amina" not in " ".join(said)
    assert "meeting's file" in said[1]


# Full and read-only disks


@pytest.fixture
def disk(tmp_path: Path) -> Iterator[Path]:
    """A disk of one megabyte."""
    folder = tmp_path / "disk"
    folder.mkdir()
    mount = ["mount", "-t", "tmpfs", "-o", "size=1m", "tmpfs", str(folder)]
    if not hasattr(os, "geteuid") or os.geteuid() != 0 or subprocess.run(mount, capture_output=True).returncode != 0:
        pytest.skip("mounting a small disk takes root and a system that lets it")
    yield folder
    subprocess.run(["umount", str(folder)], check=True)


def fill(disk: Path) -> None:
    with suppress(OSError), (disk / "filler").open("wb", buffering=0) as filler:
        while True:
            filler.write(b"x" * 4096)


def test_on_a_full_disk_the_old_file_and_the_work_stay(open_file: Open, disk: Path) -> None:
    path = disk / "label.deliberate.json"
    files.write(CIRCLES, path)
    window = open_file(path)
    start(window, 61.0)
    mine = window.session.scenario
    fill(disk)
    with answering("OK") as said:
        assert not window.files.save()
    assert said[0] == "The meeting was not saved"
    assert said[1].startswith("label.deliberate.json: cannot be saved")
    assert "the disk is full" in said[1]
    assert "still in this window" in said[1]
    assert files.read(path) == CIRCLES
    assert sorted(one.name for one in disk.iterdir()) == ["filler", "label.deliberate.json"]
    assert window.session.scenario is mine
    assert window.isWindowModified()
    (disk / "filler").unlink()
    assert window.files.save()
    assert files.read(path) == mine


def test_on_a_read_only_disk_the_old_file_and_the_work_stay(open_file: Open, disk: Path) -> None:
    path = disk / "label.deliberate.json"
    files.write(CIRCLES, path)
    subprocess.run(["mount", "-o", "remount,ro", str(disk)], check=True)
    window = open_file(path)
    start(window, 61.0)
    with answering("OK") as said:
        assert not window.files.save()
    assert "read-only" in said[1]
    assert files.read(path) == CIRCLES
    assert window.isWindowModified()


# Dropping a file


def drop(window: MainWindow, data: QMimeData) -> bool:
    """Drag over the picture and let go there, as the window system reports it. Whether it was taken."""
    handle = window.windowHandle()
    at = window.canvas.mapTo(window, window.canvas.rect().center())
    buttons, keys = Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier
    enter = QDragEnterEvent(QPoint(at), Qt.DropAction.CopyAction, data, buttons, keys)
    QApplication.sendEvent(handle, enter)
    if not enter.isAccepted():
        return False
    event = QDropEvent(QPointF(at), Qt.DropAction.CopyAction, data, buttons, keys)
    QApplication.sendEvent(handle, event)
    return event.isAccepted()


def of_files(*paths: Path) -> QMimeData:
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(path)) for path in paths])
    return data


def test_a_file_dropped_on_the_window_opens(qtbot: QtBot, open_file: Open, path: Path) -> None:
    window = open_file(path)
    other = path.with_name("theirs.deliberate.json")
    files.write(THEIRS, other)
    assert drop(window, of_files(other))
    qtbot.waitUntil(lambda: window.session.path == other)
    assert window.session.scenario == THEIRS


def test_text_several_files_and_addresses_are_not_taken(open_file: Open, path: Path) -> None:
    window = open_file(path)
    text = QMimeData()
    text.setText("Amina")
    address = QMimeData()
    address.setUrls([QUrl("https://example.org/label.deliberate.json")])
    for data in (text, address, of_files(path, path.with_name("other"))):
        assert not drop(window, data)
    assert window.session.scenario == CIRCLES
