"""What the command line prints, whatever the terminal can write and whoever reads it."""

from __future__ import annotations

import os
import sys
from typing import Any

OTHERWISE = 1  # exit status


def put_json(data: dict[str, Any]) -> None:
    """Write `data` to standard output, as JSON on one line."""
    from msgspec import json

    put(json.encode(data) + b"\n")


def put(text: str | bytes) -> None:
    """Write to standard output now. Bytes are UTF-8 whatever the terminal speaks; text is spelt out where the
    terminal lacks a letter. A reader who has left ends the program quietly."""
    out = sys.stdout
    if out is None:
        return
    try:
        if isinstance(text, bytes):
            out.flush()
            out.buffer.write(text)
        else:
            out.reconfigure(errors="backslashreplace")
            out.write(text if text.isascii() else _fit_for(out.encoding, text))
        out.flush()
    except OSError as error:
        os.dup2(os.open(os.devnull, os.O_WRONLY), out.fileno())  # or the interpreter's last flush fails as well
        if not isinstance(error, BrokenPipeError):
            say(f"deliberate: the output cannot be written: {error.strerror}")
        raise SystemExit(OTHERWISE) from None


def _fit_for(encoding: str, text: str) -> str:
    """`text` without the marks around names that are read from right to left, where these cannot be written."""
    from deliberate.rehearsal.words import ISOLATED, without_marks

    return text if ISOLATED.encode(encoding, "ignore") else without_marks(text)


def say(message: str) -> None:
    """One line on standard error, whatever a file's name or the message holds."""
    if sys.stderr is not None:
        print("".join(c if c.isprintable() else repr(c)[1:-1] for c in message), file=sys.stderr)
