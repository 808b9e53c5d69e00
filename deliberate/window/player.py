"""Where in the talk we are, and the clock that moves it on while it plays."""

from __future__ import annotations

import math

from PySide6.QtCore import QElapsedTimer, QObject, Qt, QTimer, Signal

FRAME_MS = 16
STEP_SECONDS = 0.45
REST_SHARE = 0.35  # of each round's time the picture rests on the round, so that it can be read
SPEEDS = (0.25, 0.5, 1.0, 2.0, 4.0, 8.0)  # rounds a second


class Player(QObject):
    """The present position in rounds (a float while the picture glides), from 0 to `last`.

    No timer runs unless it plays or glides.
    """

    moved = Signal(float)
    playing_changed = Signal(bool)
    settings_changed = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.last = 0
        self.position = 0.0
        self.speed = 1.0
        self.loop = False
        self.still = False
        self._from = 0.0
        self._target: float | None = None
        self._seconds = 1.0
        self._clock = QElapsedTimer()
        self._timer = QTimer(self)
        self._timer.setInterval(FRAME_MS)
        self._timer.setTimerType(Qt.TimerType.PreciseTimer)
        self._timer.timeout.connect(self._tick)
        self._playing = False

    @property
    def playing(self) -> bool:
        """Whether it goes on by itself from round to round."""
        return self._playing

    @property
    def round(self) -> int:
        """The whole round shown or being left."""
        return int(self.position + 1e-9)

    def set_last(self, last: int) -> None:
        """The plan has `last` rounds now; the present round is kept where it exists."""
        self.last = last
        if self.position > last:
            self.seek(last)
        self.settings_changed.emit()

    def set_speed(self, speed: float) -> None:
        """Rounds a second."""
        self.speed = speed
        self.settings_changed.emit()

    def set_loop(self, loop: bool) -> None:
        """Begin again at the end, or stop there."""
        self.loop = loop
        self.settings_changed.emit()

    def seek(self, position: float) -> None:
        """Go to `position` at once; what was gliding stops, what was playing goes on from there."""
        self._target = None
        self._move(min(max(position, 0.0), float(self.last)))
        if self._playing:
            self._set_off()
        else:
            self._timer.stop()

    def play(self) -> None:
        """Go on round by round; from the start when at the end."""
        if self._playing or self.last == 0:
            return
        if self.position >= self.last:
            self._move(0.0)
        self._playing = True
        self.playing_changed.emit(True)
        self._set_off()

    def pause(self) -> None:
        """Stop at the round being approached."""
        if not self._playing:
            return
        self._playing = False
        self.playing_changed.emit(False)
        if self._target is None:
            self._timer.stop()

    def toggle(self) -> None:
        """Play or pause."""
        if self._playing:
            self.pause()
        else:
            self.play()

    def step(self, by: int) -> None:
        """Glide to the next whole round (`by` = 1) or the one before (-1)."""
        self.pause()
        here = self._target if self._target is not None else self.position
        target = math.floor(here + 1e-9) + 1 if by > 0 else math.ceil(here - 1e-9) - 1
        self._glide_to(float(min(max(target, 0), self.last)), seconds=STEP_SECONDS)

    def _set_off(self) -> None:
        if self.position >= self.last:
            if not self.loop:
                self.pause()
                return
            self._move(0.0)
        self._glide_to(float(self.round + 1), seconds=1.0 / self.speed)

    def _glide_to(self, target: float, seconds: float) -> None:
        if target == self.position:
            self._target = None
            self._timer.stop()
            return
        self._from, self._target, self._seconds = self.position, target, seconds
        if self.still and not self._playing:
            self._arrive()
            return
        self._clock.start()
        self._timer.start()

    def _tick(self) -> None:
        if self._target is None:
            self._timer.stop()
            return
        share = self._clock.elapsed() / 1000 / self._seconds
        if share >= 1.0:
            self._arrive()
        elif not self.still:
            rest = REST_SHARE if self._playing else 0.0
            glide = max(0.0, (share - rest) / (1.0 - rest))
            eased = glide * glide * (3 - 2 * glide)
            self._move(self._from + (self._target - self._from) * eased)

    def _arrive(self) -> None:
        target, self._target = self._target, None
        if target is not None:
            self._move(target)
        if self._playing:
            self._set_off()
        else:
            self._timer.stop()

    def _move(self, position: float) -> None:
        if position != self.position:
            self.position = position
            self.moved.emit(position)
