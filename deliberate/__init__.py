"""Deliberate: rehearse a contested meeting before it happens.

From Python: `read` a scenario file, `rehearse` one of its variants, `write` it back; `doubt` says how sure that is
when every number is a guess, `leverage` what the result hangs on, `remedies` which change of process helps, `seat`
who should sit with whom; `to_networkx` and `from_networkx` exchange a variant with other programs. What a person gave
wrongly raises `DeliberateError`.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

from deliberate.errors import DeliberateError

if TYPE_CHECKING:
    from deliberate.files import read, write
    from deliberate.rehearsal.doubt import doubt
    from deliberate.rehearsal.interchange import from_networkx, to_networkx
    from deliberate.rehearsal.leverage import leverage
    from deliberate.rehearsal.rehearse import rehearse
    from deliberate.rehearsal.remedies import remedies
    from deliberate.rehearsal.seating.seat import seat
    from deliberate.rehearsal.seating.wish import Wish

__all__ = [
    "DeliberateError",
    "Wish",
    "doubt",
    "from_networkx",
    "leverage",
    "read",
    "rehearse",
    "remedies",
    "seat",
    "to_networkx",
    "write",
]


def __getattr__(name: str) -> Any:
    """Load what is asked for when it is asked for: the command line and the window start without the rest."""
    match name:
        case "read" | "write":
            module = "deliberate.files"
        case "rehearse":
            module = "deliberate.rehearsal.rehearse"
        case "doubt":
            module = "deliberate.rehearsal.doubt"
        case "leverage":
            module = "deliberate.rehearsal.leverage"
        case "remedies":
            module = "deliberate.rehearsal.remedies"
        case "seat":
            module = "deliberate.rehearsal.seating.seat"
        case "Wish":
            module = "deliberate.rehearsal.seating.wish"
        case "to_networkx" | "from_networkx":
            module = "deliberate.rehearsal.interchange"
        case _:
            raise AttributeError(f"module 'deliberate' has no attribute {name!r}")
    return getattr(import_module(module), name)


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})
