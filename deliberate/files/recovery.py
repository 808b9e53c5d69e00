"""Copies of unsaved work that survive a crash, in a folder that only their owner can look into.

A copy is one file: a line of JSON that says which meeting it is and when it was kept, then the scenario. Which copies
are left over from a crash, and which belong to a window that is open, the window knows (see `window.recovery`).
"""

from __future__ import annotations

import contextlib
import os
import stat
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import Literal

import msgspec

from deliberate.errors import DeliberateError
from deliberate.files.atomic import replace_file
from deliberate.files.reading import decode, read_bytes
from deliberate.scenario.values import Scenario

SUFFIX = ".recovery"


class Head(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """What a copy says about itself. `path` is the meeting's file and `digest` (SHA-256, hex) what it held when the
    meeting was read from it or saved to it last; both None for a meeting that was never saved."""

    title: str
    variant: str
    kept: datetime
    path: str | None = None
    digest: str | None = None
    format: Literal["deliberate-recovery"] = "deliberate-recovery"
    version: Literal[1] = 1


@dataclass(frozen=True)
class Copy:
    """Unsaved work: the meeting, and where it belongs."""

    head: Head
    scenario: Scenario


def make_private(folder: Path) -> Path:
    """`folder`, made where it is missing, closed to everybody but its owner. Raises DeliberateError."""
    try:
        folder.mkdir(parents=True, exist_ok=True, mode=0o700)
        if os.name != "nt" and stat.S_IMODE(folder.stat().st_mode) != 0o700:
            folder.chmod(0o700)
    except OSError as error:
        raise DeliberateError(f"cannot be saved: {folder} cannot be used ({error.strerror})") from None
    return folder


def keep(copy: Copy, path: Path) -> None:
    """Write a copy, whole or not at all, readable by its owner only. Raises DeliberateError."""
    # The quick encoding, all keys in one line: nobody reads this file, and it is written every few seconds.
    data = msgspec.json.encode(copy.head) + b"\n" + msgspec.json.encode(copy.scenario)
    replace_file(path, data, private=True)


def bring_back(path: Path) -> Copy:
    """Read a copy. Raises DeliberateError where it is damaged."""
    head, _, scenario = read_bytes(path).partition(b"\n")
    return Copy(_head(head), decode(scenario))


def head_of(path: Path) -> Head:
    """What a copy says about itself. Raises DeliberateError where it is damaged."""
    return _head(read_bytes(path).partition(b"\n")[0])


def copies(folder: Path) -> tuple[Path, ...]:
    """The copies in `folder`, the newest first; none where there is no such folder."""
    return tuple(sorted(folder.glob(f"*{SUFFIX}"), key=_changed, reverse=True))


def forget(path: Path) -> None:
    """Remove a copy, if it is there."""
    with contextlib.suppress(OSError):
        path.unlink(missing_ok=True)


def _head(line: bytes) -> Head:
    try:
        return msgspec.json.decode(line, type=Head)
    except (msgspec.MsgspecError, ValueError):
        raise DeliberateError("this copy is damaged") from None


def _changed(path: Path) -> float:
    try:
        return path.stat().st_mtime
    except OSError:
        return 0.0
