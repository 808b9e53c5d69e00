"""How long work tells how far it is, and learns that nobody waits for it any more. Free of numpy: a window can load
it at once."""

from __future__ import annotations

from collections.abc import Callable

Progress = Callable[[float], object]  # told the part that is done, 0 to 1
Stopped = Callable[[], bool]  # asked now and then; once it is true, the best answer so far comes back soon


def no_report(part: float) -> None:
    """Nobody wants to know how far it is."""


def never() -> bool:
    """Nobody wants to stop."""
    return False
