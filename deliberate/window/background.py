"""What work on other threads needs from the whole process.

Python's collector must not run on such a thread: it would delete Qt objects of dropped windows, with their timers,
off their own thread. So it is off while other threads work. Plain functions, since entering and leaving must not make
anything that the collector would count (a bound method is enough).
"""

from __future__ import annotations

import gc
import threading

_lock = threading.Lock()
_working = 0


def pause_collector() -> None:
    """First thing of a worker: from here on nothing is collected."""
    global _working
    _lock.acquire()
    _working += 1
    gc.disable()
    _lock.release()


def resume_collector() -> None:
    """Last thing of a worker, in a ``finally``: the last one that ends turns the collector on again."""
    global _working
    _lock.acquire()
    _working -= 1
    if not _working:
        gc.enable()
    _lock.release()
