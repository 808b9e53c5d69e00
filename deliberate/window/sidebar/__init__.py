"""The left bar: people and their points, the question, the ballot rule, the meeting."""

from deliberate.window.sidebar.sidebar import Sidebar

__all__ = ["Sidebar"]
