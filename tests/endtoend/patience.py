"""Waiting for another program, with an end to it."""

from __future__ import annotations

import time
from collections.abc import Callable

PATIENCE_SECONDS = 30.0


def until(what: str, true: Callable[[], object]) -> None:
    """Wait until something is so; the sentence says what, for when it never is."""
    deadline = time.monotonic() + PATIENCE_SECONDS
    while not true():
        assert time.monotonic() < deadline, f"not in {PATIENCE_SECONDS:g} s: {what}"
        time.sleep(0.05)
