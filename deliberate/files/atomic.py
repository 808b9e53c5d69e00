"""Replacing a file as a whole, so that a crash at any moment leaves the old one or the new one."""

from __future__ import annotations

import contextlib
import errno
import os
import secrets
import stat
import time
from pathlib import Path
from typing import NoReturn

from deliberate.errors import DeliberateError

FRESH = ".deliberate-{}.tmp"
HALF_WRITTEN_SECONDS = 3_600  # by then nobody is still writing it, even if another machine's clock is off


def replace_file(path: str | os.PathLike[str], data: bytes, *, private: bool = False) -> None:
    """Make `data` the content of the file at `path`, or raise a DeliberateError and leave it as it was.

    The bytes go into a new file in the same folder, reach the disk, and only then take the name. A symbolic link
    stays and its target is replaced; permissions stay too. A new file is closed to others where it is `private`.
    """
    try:
        target = Path(os.path.realpath(path))
        old = _old_file(target)
        _replace(target, data, old, private)
    except (OSError, ValueError) as error:
        _refuse(_why(error, Path(path)))


def clear_half_written(folder: Path) -> None:
    """Remove what saving left half-written in `folder` when the program or the machine stopped in the middle."""
    with contextlib.suppress(OSError):
        for path in folder.glob(FRESH.format("*")):
            with contextlib.suppress(OSError):
                if time.time() - path.stat().st_mtime > HALF_WRITTEN_SECONDS:
                    path.unlink()


def _refuse(why: str) -> NoReturn:
    raise DeliberateError(f"cannot be saved: {why}") from None


def _old_file(target: Path) -> os.stat_result | None:
    try:
        old = target.stat()
    except FileNotFoundError:
        return None
    if stat.S_ISDIR(old.st_mode):
        raise IsADirectoryError(errno.EISDIR, os.strerror(errno.EISDIR))
    if not stat.S_ISREG(old.st_mode):
        _refuse("this is not a file but a device or a pipe")
    if not os.access(target, os.W_OK, effective_ids=os.access in os.supports_effective_ids):
        _refuse("the file is read-only")
    return old


def _replace(target: Path, data: bytes, old: os.stat_result | None, private: bool) -> None:
    fresh = target.with_name(FRESH.format(secrets.token_hex(8)))
    # A new file gets the permissions the user's own umask gives; a copy of an old one is closed until it has its own.
    permissions = 0o666 if old is None and not private else 0o600
    descriptor = os.open(fresh, os.O_WRONLY | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0), permissions)
    try:
        with open(descriptor, "wb") as file:
            if old is not None:
                _keep_permissions(fresh, old)
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        os.replace(fresh, target)
    except BaseException:
        with contextlib.suppress(OSError):
            fresh.unlink()
        raise
    _flush_folder(target.parent)


def _keep_permissions(fresh: Path, old: os.stat_result) -> None:
    if hasattr(os, "chown"):
        with contextlib.suppress(OSError):  # only an administrator may give a file away
            os.chown(fresh, old.st_uid, old.st_gid)
    fresh.chmod(stat.S_IMODE(old.st_mode))


def _flush_folder(folder: Path) -> None:
    """Bring the new name to the disk, where the system can: Windows and some network drives cannot."""
    with contextlib.suppress(OSError):
        descriptor = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(descriptor)
        finally:
            os.close(descriptor)


def _why(error: OSError | ValueError, path: Path) -> str:
    if not isinstance(error, OSError):
        return "this is not a possible file name"
    folder = path.parent
    reasons = {
        errno.ENOSPC: "the disk is full",
        errno.EDQUOT: "your share of the disk is full",
        errno.EFBIG: "the file is too large for this disk",
        errno.EROFS: f"{folder} is read-only",
        errno.EACCES: f"you may not write into {folder}",
        errno.EPERM: f"you may not write into {folder}",
        errno.ENOENT: f"there is no folder {folder}",
        errno.ENOTDIR: f"{folder} is not a folder",
        errno.EISDIR: "this is a folder",
        errno.ENAMETOOLONG: "the file name is too long",
        errno.ELOOP: "symbolic links lead in a circle",
    }
    return reasons.get(error.errno or 0, error.strerror or str(error))
