"""Gliding to new places after an arrangement, so that the eye can follow."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QElapsedTimer, QObject, QTimer

if TYPE_CHECKING:
    from deliberate.window.canvas.canvas import Canvas
    from deliberate.window.canvas.picture import Floats

GLIDE_MS = 380
FRAME_MS = 16


class Glide(QObject):
    """Shows people between where they were and where they are now. No timer runs but while it does."""

    def __init__(self, canvas: Canvas) -> None:
        super().__init__(canvas)
        self._canvas = canvas
        self._clock = QElapsedTimer()
        self._timer = QTimer(self, interval=FRAME_MS)
        self._timer.timeout.connect(self._go_on)
        self._before = canvas.picture.scene.places

    def begin(self, before: Floats) -> None:
        """Set out from the places `before`."""
        after = self._canvas.picture.scene.places
        if self._canvas.look.still or len(before) != len(after) or np.array_equal(before, after):
            return
        self._before = before
        self._show(0.0)
        self._clock.start()
        self._timer.start()

    def stop(self) -> None:
        """Be there at once."""
        if self._timer.isActive():
            self._timer.stop()
            self._canvas.picture.move(None)

    def _go_on(self) -> None:
        share = self._clock.elapsed() / GLIDE_MS
        if share >= 1:
            self.stop()
        else:
            self._show(share * share * (3 - 2 * share))
        self._canvas.stir()

    def _show(self, share: float) -> None:
        after = self._canvas.picture.scene.places
        everybody = np.ones(len(after), dtype=bool)
        self._canvas.picture.move(everybody, self._before + (after - self._before) * share)
