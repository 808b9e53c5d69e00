"""Starts the window: on a file, on what was open last, or the first time on a demo."""

from __future__ import annotations

import ctypes
import os
import sys
import traceback
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from dataclasses import dataclass
from pathlib import Path
from types import TracebackType

from PySide6.QtCore import QLibraryInfo, QSettings, QStandardPaths, Qt
from PySide6.QtWidgets import QApplication, QMessageBox

from deliberate import files
from deliberate.errors import DeliberateError
from deliberate.files.on_disk import read_noting
from deliberate.files.recovery import make_private
from deliberate.files.resources import demo_scenarios
from deliberate.scenario.values import Scenario
from deliberate.window.held_file import HeldFile, InUseError, Locks
from deliberate.window.main_window import MainWindow
from deliberate.window.meeting_files import ask_for_copy, new_meeting
from deliberate.window.recent import RecentFiles
from deliberate.window.session import Session
from deliberate.window.theme import Look

FIRST_DEMO = "sensor-label"
WITHOUT_SCREEN = "“deliberate rehearse FILE” works without a screen."
DEBIAN_LIBRARIES = (
    "libegl1 libgl1 libxkbcommon-x11-0 libxcb-cursor0 libxcb-icccm4 libxcb-image0 libxcb-keysyms1 "
    "libxcb-randr0 libxcb-render-util0 libxcb-shape0 libxcb-xkb1"
)


class NoScreenError(DeliberateError):
    """The window has nowhere to open, or a system library for it is missing."""


@dataclass(frozen=True)
class Beginning:
    """The meeting to begin with, its file if it has one, and what is to be said about it."""

    scenario: Scenario
    held: HeldFile | None = None
    word: str = ""


def run(path: str | None = None) -> int:
    """Open the window on `path` and stay until it is closed. Returns the exit status.

    Raises NoScreenError where it cannot open, and DeliberateError when `path` cannot be read.
    """
    os.environ.setdefault("QT_NO_GUI_THREADPOOL", "1")  # raster fills are far slower from the thread pool
    with screen():
        app = QApplication.instance() or QApplication(sys.argv[:1])
    app.setApplicationName("Deliberate")
    app.setApplicationDisplayName("")
    app.setStyle("Fusion")
    settings = QSettings(QSettings.Format.IniFormat, QSettings.Scope.UserScope, "deliberate", "deliberate")
    with suppress(DeliberateError):  # the names of meetings in it are nobody else's business
        make_private(Path(settings.fileName()).parent)
    private = private_folder()
    look = Look(settings, app)
    beginning = first_meeting(path, RecentFiles(settings), Locks(private / "open"))
    if beginning is None:
        return 0
    held = beginning.held
    window = MainWindow(Session(beginning.scenario, held and held.path), look, settings, private)
    window.files.begin(held)
    sys.excepthook = _Loud(window)
    window.begin_with_care()
    window.across.fit_into(window.screen().availableSize().width())
    window.show()
    if beginning.word:
        window.session.said.emit(beginning.word)
    return int(app.exec())


def private_folder() -> Path:
    """Where unsaved work and locks are kept: among what this user has on this machine only."""
    state = QStandardPaths.writableLocation(QStandardPaths.StandardLocation.GenericStateLocation)
    return Path(state) / "deliberate"


def first_meeting(path: str | None, recent: RecentFiles, locks: Locks) -> Beginning | None:
    """What to begin with; None when another window has `path` open and she wants no copy.

    Raises DeliberateError when `path` cannot be read.
    """
    if path is not None:
        named = Path(os.path.abspath(path))
        try:
            return _hold(named, locks)
        except InUseError:
            return Beginning(files.read(named)) if ask_for_copy(None, named) else None
    last, word = recent.last, ""
    if last is not None:
        try:
            return _hold(last, locks)
        except InUseError as error:
            word = f"{last.name} {error}"
        except DeliberateError as error:  # moved or changed since: begin with a demo instead of failing for ever
            word = f"{last.name} was not opened: {error}"
            recent.drop(last)
    demos = demo_scenarios()
    first = next((demo for demo in demos if FIRST_DEMO in demo.name), demos[0] if demos else None)
    return Beginning(files.read(first) if first else new_meeting(), None, word)


def _hold(path: Path, locks: Locks) -> Beginning:
    lock = locks.take(path)
    scenario, known = read_noting(path)
    return Beginning(scenario, HeldFile(path, known, lock))


@contextmanager
def screen() -> Iterator[None]:
    """Qt ends the process when it finds no display; say what is missing in one sentence instead.

    The connection that was tried stays open until Qt has its own: a display server may start afresh when its last
    client leaves.
    """
    if not sys.platform.startswith("linux") or os.environ.get("QT_QPA_PLATFORM", "xcb").split(":")[0] != "xcb":
        yield
        return
    if os.environ.get("WAYLAND_DISPLAY"):
        yield
        return
    if not os.environ.get("DISPLAY"):
        raise NoScreenError(
            "there is no screen to open the window on (neither DISPLAY nor WAYLAND_DISPLAY is set): start it from "
            f"a desktop. {WITHOUT_SCREEN}"
        )
    xcb = _loaded_xcb()
    xcb.xcb_connect.restype = ctypes.c_void_p
    connection = ctypes.c_void_p(xcb.xcb_connect(None, None))
    try:
        if xcb.xcb_connection_has_error(connection):
            raise NoScreenError(
                f"the screen “{os.environ['DISPLAY']}” (DISPLAY) does not answer: start it from a desktop. "
                f"{WITHOUT_SCREEN}"
            )
        yield
    finally:
        xcb.xcb_disconnect(connection)


def _loaded_xcb() -> ctypes.CDLL:
    """The library that talks to an X display, once Qt's own plugin for it is known to load."""
    plugin = Path(QLibraryInfo.path(QLibraryInfo.LibraryPath.PluginsPath)) / "platforms" / "libqxcb.so"
    try:
        ctypes.CDLL(str(plugin))
        return ctypes.CDLL("libxcb.so.1")
    except OSError as error:
        library = str(error).split(":")[0]
        raise NoScreenError(
            f"the window needs a system library that is missing ({library}): on Debian or Ubuntu install it with "
            f"“sudo apt install {DEBIAN_LIBRARIES}”. {WITHOUT_SCREEN}"
        ) from None


class _Loud:
    """A bug is shown with its text to copy, and the window stays open with the work in it."""

    def __init__(self, window: MainWindow) -> None:
        self._window = window
        self._showing = False

    def __call__(self, kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        traceback.print_exception(kind, error, trace)
        if issubclass(kind, KeyboardInterrupt) or self._showing:
            return
        self._showing = True
        box = QMessageBox(self._window)
        box.setIcon(QMessageBox.Icon.Critical)
        box.setWindowTitle("Something went wrong in the program")
        box.setTextFormat(Qt.TextFormat.PlainText)
        box.setText(f"This is a fault of the program, not of the meeting. {self._kept()}")
        box.setDetailedText("".join(traceback.format_exception(kind, error, trace)))
        box.exec()
        box.deleteLater()
        self._showing = False

    def _kept(self) -> str:
        """Copy unsaved work first, whatever state the program is in, and say whether that worked."""
        try:
            kept = self._window.recovery.keep_now()
        except Exception:
            kept = False
        if kept:
            return "Unsaved work has been kept: should the program end, it is offered at the next start."
        return "Save your work under another name."
