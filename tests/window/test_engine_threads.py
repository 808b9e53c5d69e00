"""What the worker of the engine must not do."""

from __future__ import annotations

import gc
import threading
from collections.abc import Callable

from circles import CIRCLES

from deliberate.window.session import Session


def test_the_worker_never_runs_the_collector(open_session: Callable[..., Session]) -> None:
    # It would delete Qt objects with running timers off their own thread, and the program with them.
    threads: set[int] = set()

    def note(phase: str, info: dict[str, int]) -> None:
        threads.add(threading.get_ident())

    before = gc.get_threshold()
    gc.callbacks.append(note)
    gc.set_threshold(20)
    try:
        open_session(CIRCLES)  # the first rehearsal always comes from the worker
    finally:
        gc.set_threshold(*before)
        gc.callbacks.remove(note)
    assert threads == {threading.get_ident()}
    assert gc.isenabled()
