"""The round bar: the whole plan along the foot of the window, with playback and plan editing."""

from deliberate.window.roundbar.bar import RoundBar

__all__ = ["RoundBar"]
