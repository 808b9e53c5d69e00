"""People and the arrows among them on the clipboard: as a value of our own, and as plain names for other programs."""

from __future__ import annotations

import msgspec
from PySide6.QtCore import QByteArray, QMimeData

from deliberate.errors import DeliberateError
from deliberate.scenario.edits.clips import Clip
from deliberate.scenario.values import Person

FORMAT = "application/x-deliberate-people+json"
MOST_BYTES = 64_000_000
MOST_NAMES = 500
NOBODY = "there is nobody on the clipboard"


def to_mime(clip: Clip) -> QMimeData:
    """The clip for the clipboard."""
    data = QMimeData()
    data.setData(FORMAT, QByteArray(msgspec.json.encode(clip)))
    data.setText("\n".join(person.shown_name for person in clip.people))
    return data


def from_mime(data: QMimeData | None) -> Clip:
    """The clip on the clipboard, checked; names from another program, one a line, become people.

    Raises DeliberateError where there is nothing that can be pasted.
    """
    if data is None:
        raise DeliberateError(NOBODY)
    if data.hasFormat(FORMAT):
        raw = data.data(FORMAT).data()
        if len(raw) > MOST_BYTES:
            raise DeliberateError("there is too much on the clipboard")
        try:
            clip = msgspec.json.decode(raw, type=Clip)
        except (msgspec.DecodeError, RecursionError) as error:
            raise DeliberateError(f"what is on the clipboard cannot be pasted here ({error})") from None
        ids = [person.id for person in clip.people]
        if len(set(ids)) < len(ids):
            raise DeliberateError("what is on the clipboard cannot be pasted here: it names somebody twice")
        return clip
    names = [" ".join(line.split()) for line in data.text()[:MOST_BYTES].splitlines()] if data.hasText() else []
    names = ["".join(letter for letter in name if letter.isprintable())[:200] for name in names if name]
    names = [name for name in names if name]
    if not names:
        raise DeliberateError(NOBODY)
    if len(names) > MOST_NAMES:
        raise DeliberateError(
            f"there are {len(names)} lines on the clipboard: paste up to {MOST_NAMES} names at a time"
        )
    return Clip(tuple(Person(id=f"p{place}", name=name) for place, name in enumerate(names)))
