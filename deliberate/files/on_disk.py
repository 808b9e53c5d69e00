"""Reading and saving a scenario file while noting what is on disk, so that a change by another program is seen."""

from __future__ import annotations

import hashlib
import os
from dataclasses import dataclass
from pathlib import Path

from deliberate.errors import DeliberateError
from deliberate.files.atomic import clear_half_written, replace_file
from deliberate.files.reading import decode, read_bytes
from deliberate.files.writing import encode
from deliberate.scenario.checks import validate
from deliberate.scenario.values import Scenario

GONE, UNREADABLE = "gone", "unreadable"
Stamp = tuple[int, int, int]  # inode, size, time of the last change in nanoseconds


@dataclass(frozen=True)
class OnDisk:
    """A file's content as it was last seen. `stamp` saves reading it again; `digest` (SHA-256, hex) decides."""

    digest: str
    stamp: Stamp | None = None


def read_noting(path: Path) -> tuple[Scenario, OnDisk]:
    """Read a scenario and note its file. Raises DeliberateError as `reading.read` does."""
    before = _stamp(path)  # taken first: whatever is written meanwhile shows as another stamp
    data = read_bytes(path)
    return decode(data), OnDisk(_digest(data), before)


def write_noting(scenario: Scenario, path: Path) -> OnDisk:
    """Save a scenario whole or not at all and note its file. Raises DeliberateError as `writing.write` does."""
    data = encode(validate(scenario))
    replace_file(path, data)
    clear_half_written(path.parent)
    return OnDisk(_digest(data), _stamp(path))


def look(path: Path, known: OnDisk | None = None) -> OnDisk:
    """What the file at `path` holds now; its digest is GONE or UNREADABLE where there is nothing to be seen.

    Another digest than the `known` one is a change, a new date alone is none. The content is read only when size,
    time or place on the disk differ from what is known.
    """
    stamp = _stamp(path)
    if stamp is None:
        return OnDisk(GONE)
    if known is not None and stamp == known.stamp:
        return known
    try:
        return OnDisk(_digest(read_bytes(path)), stamp)
    except DeliberateError:
        return OnDisk(UNREADABLE, stamp)


def _digest(data: bytes) -> str:
    return hashlib.sha256(data).hexdigest()


def _stamp(path: Path) -> Stamp | None:
    try:
        status = os.stat(path)
    except (OSError, ValueError):
        return None
    return status.st_ino, status.st_size, status.st_mtime_ns
