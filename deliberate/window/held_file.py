"""The file of the open meeting: held against a second window, and remembered as it was on disk."""

from __future__ import annotations

import hashlib
import os
from dataclasses import dataclass
from pathlib import Path

from PySide6.QtCore import QLockFile

from deliberate.errors import DeliberateError
from deliberate.files.on_disk import OnDisk
from deliberate.files.recovery import make_private


class InUseError(DeliberateError):
    """Another window of this person's has the file open."""


@dataclass(frozen=True)
class HeldFile:
    """A meeting's file while it is open. `known` is what it held when it was read or saved last; None for the lock
    where none could be had."""

    path: Path
    known: OnDisk
    lock: QLockFile | None


class Locks:
    """One lock for each open meeting file, in a folder of its own.

    A lock ends with its process, however that ends. It stands for the file's real place, as a digest, so that the
    folder tells nobody which meetings there are, and lies nowhere near the file, so that a read-only folder or a
    shared one is left alone. Windows on other machines are not seen: what they save is seen on disk.
    """

    def __init__(self, folder: Path) -> None:
        self._folder = folder

    def take(self, path: Path) -> QLockFile | None:
        """Lock the file at `path` until the answer is unlocked or let go. Raises InUseError where another window has
        it; None where no lock can be had at all, which is no reason not to work."""
        place = os.path.normcase(os.path.realpath(path))
        name = hashlib.sha256(place.encode(errors="surrogatepass")).hexdigest()[:32]
        try:
            lock = locked(make_private(self._folder) / f"{name}.lock")
        except DeliberateError:
            return None
        if lock is None:
            raise InUseError("is open in another window of Deliberate")
        return lock if lock.isLocked() else None


def locked(path: Path) -> QLockFile | None:
    """A lock at `path`, or None where a living process has it. Where none can be made (a full disk), the answer is
    not locked."""
    lock = QLockFile(str(path))
    lock.setStaleLockTime(0)  # only its owner's end makes it free, never its age
    if lock.tryLock(0) or lock.error() != QLockFile.LockError.LockFailedError:
        return lock
    # Qt believes in a dead owner only where its number and the machine's name tell it so, and both may have changed
    # hands since: a laptop's name comes with the network. The file itself tells: a living owner keeps the system from
    # taking it away.
    if lock.removeStaleLockFile() and lock.tryLock(0):
        return lock
    return None
