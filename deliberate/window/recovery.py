"""Unsaved work is copied to a private folder a moment after each edit, and is found there after a crash."""

from __future__ import annotations

import contextlib
import secrets
from collections.abc import Callable
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

from PySide6.QtCore import QLockFile, QObject, QThreadPool, QTimer, Signal

from deliberate.errors import DeliberateError
from deliberate.files import read
from deliberate.files import recovery as copies
from deliberate.files.atomic import clear_half_written
from deliberate.files.recovery import Copy, Head
from deliberate.window.background import pause_collector, resume_collector
from deliberate.window.held_file import locked
from deliberate.window.session import Session

KEEP_AFTER_MS = 2_000  # with a slow disk and a busy machine still within five seconds of the edit


@dataclass(frozen=True)
class Leftover:
    """A copy whose window is gone. It is locked while it is looked at, so that one window only offers it.

    `head` is None for a copy that is damaged.
    """

    path: Path
    lock: QLockFile
    head: Head | None

    def let_go(self) -> None:
        """Leave it for later, or for another window."""
        self.lock.unlock()

    def discard(self) -> None:
        """Remove it for good."""
        copies.forget(self.path)
        self.lock.unlock()


class Recovery(QObject):
    """Keeps a copy of the session's meeting while it has unsaved changes, and no longer.

    The copy is made on a thread of its own, at most `KEEP_AFTER_MS` after the first edit that it does not have yet.
    """

    failed = Signal(str)  # why no copy can be made; said once, until one can be made again
    _wrote = Signal(str)  # why not, or nothing

    def __init__(self, session: Session, folder: Path, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._session, self._folder = session, folder
        self.digest: str | None = None  # of the meeting's file, as `files.on_disk` knows it
        self._path: Path | None = None
        self._lock: QLockFile | None = None
        self._failing = False
        self._pool = QThreadPool(self)
        self._pool.setMaxThreadCount(1)  # one thing after the other, in order
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(KEEP_AFTER_MS)
        self._timer.timeout.connect(self.keep_soon)
        self._wrote.connect(self._note_outcome)
        session.file_changed.connect(self._follow)

    def keep_now(self) -> bool:
        """Copy unsaved work before going on. Whether it is safe, in a copy or because there is none."""
        self._timer.stop()
        self._pool.waitForDone()
        if not self._session.modified:
            return True
        try:
            copies.keep(self._copy(), self._place())
        except DeliberateError:
            return False
        return True

    def keep_soon(self) -> None:
        """Copy unsaved work without waiting for it: a thread of its own encodes and writes."""
        copy = self._copy()
        try:
            place = self._place()
        except DeliberateError as error:
            self._note_outcome(str(error))
            return

        def keep() -> None:
            try:
                copies.keep(copy, place)
                self._wrote.emit("")
            except DeliberateError as error:
                self._wrote.emit(str(error))

        self._start(keep)

    def close(self) -> None:
        """Leave nothing behind: the window closes, and what was to be saved is saved."""
        self._timer.stop()
        self._pool.clear()
        self._pool.waitForDone()
        if self._path is not None:
            copies.forget(self._path)
        if self._lock is not None:
            self._lock.unlock()
        self._path = self._lock = None

    def adopt(self, leftover: Leftover) -> None:
        """Go on with a leftover copy as the present meeting's: it stays until that is saved."""
        self.close()
        self._path, self._lock = leftover.path, leftover.lock

    def any_copies(self) -> bool:
        """Whether there is something to look at beside this window's own copy."""
        return any(path != self._path for path in copies.copies(self._folder))

    def leftovers(self) -> tuple[Leftover, ...]:
        """The unsaved work of windows that are gone, the newest first, each copy locked for the caller."""
        clear_half_written(self._folder)
        found = (self._leftover(path) for path in copies.copies(self._folder) if path != self._path)
        return tuple(leftover for leftover in found if leftover is not None and not _saved_after_all(leftover))

    def _leftover(self, path: Path) -> Leftover | None:
        lock = locked(_lock_path(path))
        if lock is None:
            return None
        if not path.exists():  # its window closed between the listing and the lock
            lock.unlock()
            return None
        head = None
        with contextlib.suppress(DeliberateError):
            head = copies.head_of(path)
        return Leftover(path, lock, head)

    def _follow(self) -> None:
        if not self._session.modified:
            self._timer.stop()
            if self._path is not None:
                self._start(lambda path=self._path: copies.forget(path))
        elif not self._timer.isActive():  # a running one is not put off by further edits
            self._timer.start()

    def _start(self, work: Callable[[], None]) -> None:
        def guarded() -> None:
            pause_collector()
            try:
                work()
            finally:
                resume_collector()

        self._pool.start(guarded)

    def _copy(self) -> Copy:
        session = self._session
        head = Head(
            title=session.meeting.title,
            variant=session.meeting.variants[session.place].name,
            kept=datetime.now(UTC),
            path=None if session.path is None else str(session.path.absolute()),
            digest=self.digest,
        )
        return Copy(head, session.meeting)

    def _place(self) -> Path:
        """Where this window's copy goes. Its lock, which ends with the process, tells others that it is alive."""
        folder = copies.make_private(self._folder)
        if self._path is None:
            self._path = folder / f"{secrets.token_hex(8)}{copies.SUFFIX}"
            self._lock = locked(_lock_path(self._path))
        return self._path

    def _note_outcome(self, why: str) -> None:
        if why and not self._failing:
            self.failed.emit(why)
        self._failing = bool(why)


def _saved_after_all(leftover: Leftover) -> bool:
    """Remove a copy whose content is what its file holds: the crash came after saving."""
    if leftover.head is None or leftover.head.path is None:
        return False
    try:
        same = copies.bring_back(leftover.path).scenario == read(leftover.head.path)
    except DeliberateError:
        return False
    if same:
        leftover.discard()
    return same


def _lock_path(copy: Path) -> Path:
    return copy.with_suffix(".lock")
