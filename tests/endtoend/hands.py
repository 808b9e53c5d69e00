"""Mouse and keyboard on a screen, by xdotool: real events, as a person's."""

from __future__ import annotations

import os
import subprocess
import time

PAUSE = 0.12  # a program that is asked too fast sees several moves as one
Point = tuple[int, int]


class Hands:
    """Moves, clicks, drags and types on the screen `display`."""

    def __init__(self, display: str) -> None:
        self._environment = {**os.environ, "DISPLAY": display}

    def turn_to(self, title: str) -> None:
        """Give the keys to the window with this in its title, as a window manager would; there is none here."""
        self._do("search", "--sync", "--onlyvisible", "--name", title, "windowfocus", "--sync")

    def click(self, at: Point, times: int = 1) -> None:
        """Click there with the left button."""
        self._do("mousemove", *at)
        self._do("click", "--repeat", times, "--delay", 60, 1)

    def drag(self, start: Point, end: Point) -> None:
        """Press at `start`, move to `end` in a few steps, let go there."""
        self._do("mousemove", *start)
        self._do("mousedown", 1)
        for step in range(1, 6):
            self._do("mousemove", *(a + (b - a) * step // 5 for a, b in zip(start, end, strict=True)))
        self._do("mouseup", 1)

    def press(self, *keys: str) -> None:
        """Press keys one after the other, as xdotool names them: "ctrl+s", "Tab"."""
        for key in keys:
            self._do("key", key)

    def write(self, text: str) -> None:
        """Type a text."""
        self._do("type", "--delay", 30, text)

    def _do(self, *words: object) -> None:
        subprocess.run(["xdotool", *map(str, words)], env=self._environment, check=True, timeout=30)
        time.sleep(PAUSE)
