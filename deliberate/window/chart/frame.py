"""Where rounds and beliefs lie in pixels."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QRectF


@dataclass(frozen=True)
class Frame:
    """A rectangle on screen, and the rounds and beliefs at its edges."""

    rect: QRectF
    left: float
    right: float
    low: float
    high: float

    def x(self, rounds: NDArray[np.float64] | float) -> NDArray[np.float64] | float:
        """Pixels from rounds."""
        return self.rect.left() + (rounds - self.left) / (self.right - self.left) * self.rect.width()

    def y(self, beliefs: NDArray[np.float64] | float) -> NDArray[np.float64] | float:
        """Pixels from beliefs."""
        return self.rect.bottom() - (beliefs - self.low) / (self.high - self.low) * self.rect.height()
