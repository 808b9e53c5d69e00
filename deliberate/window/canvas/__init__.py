"""The picture of the committee: people as discs with their listening rings, arrows, and editing in place."""

from deliberate.window.canvas.canvas import Canvas

__all__ = ["Canvas"]
