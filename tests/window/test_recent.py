"""What is remembered of files, and that it can be forgotten."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from answers import answering
from circles import CIRCLES
from PySide6.QtCore import QSettings
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QMenu

from deliberate import files
from deliberate.errors import DeliberateError
from deliberate.window.app import FIRST_DEMO, first_meeting
from deliberate.window.held_file import Locks
from deliberate.window.main_window import MainWindow
from deliberate.window.recent import MOST, RecentFiles, label


@pytest.fixture
def settings(tmp_path: Path) -> QSettings:
    """The settings of `open_file`."""
    return QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)


@pytest.fixture
def saved(tmp_path: Path) -> Callable[[str], Path]:
    def save(name: str) -> Path:
        path = tmp_path / name
        path.parent.mkdir(exist_ok=True)
        files.write(CIRCLES, path)
        return path

    return save


def test_the_latest_comes_first_once_and_old_ones_drop_out(settings: QSettings, tmp_path: Path) -> None:
    recent = RecentFiles(settings)
    assert (recent.paths, recent.last, recent.folder) == ((), None, Path.home())
    paths = [tmp_path / f"{number}.deliberate.json" for number in range(MOST + 3)]
    for path in paths:
        recent.add(path)
    recent.add(paths[5])
    expected = [paths[5], *(path for path in reversed(paths) if path != paths[5])][:MOST]
    settings.sync()
    again = RecentFiles(QSettings(settings.fileName(), QSettings.Format.IniFormat))
    assert list(again.paths) == expected
    assert again.last == paths[5]
    assert again.folder == tmp_path


def test_a_list_of_one_is_a_list(settings: QSettings, tmp_path: Path) -> None:
    RecentFiles(settings).add(tmp_path / "one.deliberate.json")
    settings.sync()
    again = RecentFiles(QSettings(settings.fileName(), QSettings.Format.IniFormat))
    assert again.paths == (tmp_path / "one.deliberate.json",)


@pytest.mark.parametrize("garbage", ["", 7, [1, 2], {"a": 1}, None])
def test_garbage_in_the_settings_is_no_list(settings: QSettings, garbage: object) -> None:
    settings.setValue("file/recent", garbage)
    assert all(isinstance(path, Path) for path in RecentFiles(settings).paths)


def test_relative_paths_are_remembered_in_full(
    settings: QSettings, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    RecentFiles(settings).add(Path("label.deliberate.json"))
    assert RecentFiles(settings).last == tmp_path / "label.deliberate.json"


def test_forgetting_leaves_no_trace_of_any_file(settings: QSettings, tmp_path: Path) -> None:
    settings.setValue("look/theme", "dark")
    recent = RecentFiles(settings)
    recent.add(tmp_path / "merger-secret.deliberate.json")
    settings.sync()
    assert "merger-secret" in Path(settings.fileName()).read_text(encoding="utf-8")
    recent.forget()
    assert (recent.paths, recent.last, recent.folder) == ((), None, Path.home())
    written = Path(settings.fileName()).read_text(encoding="utf-8")
    assert "merger-secret" not in written
    assert str(tmp_path) not in written


def test_a_name_that_stands_twice_shows_its_folder() -> None:
    one, other, third = Path("/a/x.json"), Path("/b/x.json"), Path("/b/y.json")
    paths = (one, other, third)
    assert [label(path, paths) for path in paths] == [
        f"x.json in {one.parent}",
        f"x.json in {other.parent}",
        "y.json",
    ]


def entries(window: MainWindow) -> dict[str, QAction]:
    """The recent files of the menu, as it is when it has just been opened."""
    menu = window.actions_of_window.recent
    file_menu = menu.parent()
    assert isinstance(file_menu, QMenu)
    file_menu.aboutToShow.emit()
    return {action.text(): action for action in menu.actions() if action.text()}


def test_the_menu_opens_them_and_tells_of_missing_ones(
    open_file: Callable[..., MainWindow], saved: Callable[[str], Path]
) -> None:
    one, other = saved("one.deliberate.json"), saved("R&D <b>.deliberate.json")
    window = open_file(one)
    window.files.open(other)
    menu = entries(window)
    assert list(menu) == ["&1 R&&D <b>.deliberate.json", "&2 one.deliberate.json", "&Forget recent files"]
    assert "R&amp;D &lt;b&gt;" in menu["&1 R&&D <b>.deliberate.json"].toolTip()
    menu["&2 one.deliberate.json"].trigger()
    assert window.session.path == one
    other.unlink()
    with answering("OK") as said:
        entries(window)["&2 R&&D <b>.deliberate.json"].trigger()
    assert said[0] == "“R&D <b>.deliberate.json” is not there any more"
    assert window.session.path == one
    assert list(entries(window)) == ["&1 one.deliberate.json", "&Forget recent files"]
    entries(window)["&Forget recent files"].trigger()
    assert not entries(window)["&Forget recent files"].isEnabled()
    assert window.session.path == one, "forgetting is about lists, not about the open meeting"


def test_opening_the_menu_often_leaks_nothing(
    open_file: Callable[..., MainWindow], saved: Callable[[str], Path]
) -> None:
    window = open_file(saved("one.deliberate.json"))
    counts = []
    for _ in range(5):
        entries(window)
        counts.append(len(window.findChildren(QAction)))
    assert len(set(counts)) == 1


# What the program begins with


def begin(settings: QSettings, tmp_path: Path, path: Path | None = None):
    return first_meeting(None if path is None else str(path), RecentFiles(settings), Locks(tmp_path / "open"))


def test_the_first_time_it_begins_with_a_demo(settings: QSettings, tmp_path: Path) -> None:
    beginning = begin(settings, tmp_path)
    (demo,) = (path for path in files.demo_scenarios() if FIRST_DEMO in path.name)
    assert beginning.scenario == files.read(demo)
    assert (beginning.held, beginning.word) == (None, "")


def test_later_it_begins_with_what_was_open_last(
    settings: QSettings, tmp_path: Path, saved: Callable[[str], Path]
) -> None:
    path = saved("label.deliberate.json")
    RecentFiles(settings).add(path)
    beginning = begin(settings, tmp_path)
    assert beginning.scenario == CIRCLES
    assert beginning.held.path == path


@pytest.mark.parametrize("content", [None, "{"])
def test_a_last_file_that_is_gone_or_broken_is_told_and_a_demo_opened(
    settings: QSettings, tmp_path: Path, saved: Callable[[str], Path], content: str | None
) -> None:
    path = saved("label.deliberate.json")
    RecentFiles(settings).add(path)
    path.unlink()
    if content is not None:
        path.write_text(content)
    beginning = begin(settings, tmp_path)
    assert beginning.held is None
    assert beginning.word.startswith("label.deliberate.json was not opened: ")
    assert begin(settings, tmp_path).word == "", "told once"


def test_a_named_file_that_cannot_be_read_is_an_error(settings: QSettings, tmp_path: Path) -> None:
    with pytest.raises(DeliberateError, match="there is no such file"):
        begin(settings, tmp_path, tmp_path / "none.deliberate.json")
