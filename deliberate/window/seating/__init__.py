"""The dialog that finds who should sit with whom at mixed tables."""

from deliberate.window.seating.dialog import SeatingDialog

__all__ = ["SeatingDialog"]
