"""Saving as a person does it, by the file dialog."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from hands import Hands
from patience import until
from screen_reader import ScreenReader

SUFFIX = ".deliberate.json"


def save_as(hands: Hands, reader: ScreenReader, path: Path) -> Any:
    """Save a meeting that has no file yet as `path` (without suffix), and return what is in the file."""
    hands.press("ctrl+s")
    until("it asks where to", lambda: reader.find("Save the meeting as"))
    hands.turn_to("Save the meeting as")
    hands.press("ctrl+a")
    hands.write(str(path))
    hands.press("Return")
    saved = path.with_name(path.name + SUFFIX)
    until("the file is there", saved.exists)
    return json.loads(saved.read_text(encoding="utf-8"))
