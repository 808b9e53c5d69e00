"""Scenario files as plain JSON data, sound ones and ones that were tampered with."""

from __future__ import annotations

import copy
import json
from typing import Any

from hypothesis import strategies as st
from strategies import scenarios

from deliberate.files import encode

SOUND: dict[str, Any] = {
    "format": "deliberate-scenario",
    "version": 1,
    "title": "Harbour levy",
    "questions": [{"id": "levy", "text": "Raise the harbour levy?", "low": 0, "high": 1, "pass_mark": 0.5}],
    "variants": [
        {
            "name": "As it stands",
            "people": [{"id": "ines", "beliefs": {"levy": 0.7}}, {"id": "tomas", "name": "Tomás"}, {"id": "noor"}],
            "arrows": [{"listener": "ines", "source": "tomas", "weight": 2.5}],
            "plan": {"stages": [{"rounds": 3}]},
        }
    ],
    "polls": [{"question": "levy", "after_round": 2, "beliefs": {"ines": 0.6}}],
}

Path = tuple[str | int, ...]


def sound_with(path: Path, value: Any) -> dict[str, Any]:
    """A copy of SOUND with `value` at `path`."""
    document = copy.deepcopy(SOUND)
    parent(document, path)[path[-1]] = value
    return document


def sound_without(path: Path) -> dict[str, Any]:
    """A copy of SOUND without what is at `path`."""
    document = copy.deepcopy(SOUND)
    del parent(document, path)[path[-1]]
    return document


def as_bytes(document: Any) -> bytes:
    """The document as a file."""
    return json.dumps(document, ensure_ascii=False).encode("utf-8", "surrogatepass")


def parent(document: Any, path: Path) -> Any:
    """The object or list that holds what is at `path`."""
    for step in path[:-1]:
        document = document[step]
    return document


def paths(document: Any, here: Path = ()) -> list[Path]:
    """The paths of everything inside `document`."""
    if not isinstance(document, dict | list):
        return []
    steps = document if isinstance(document, dict) else range(len(document))
    return [path for step in steps for path in ((*here, step), *paths(document[step], (*here, step)))]


_WORDS = (
    "",
    "ines",
    "levy",
    "spread",
    "rand-ucla",
    "for",
    "own",
    "pairs",
    "1/2",
    "3/2",
    "2/0",
    "ines\n",
    "x" * 201,
    "é",
)
_NUMBERS = (0, 1, -1, 2, 2.0, 9, 12.5, 1e300, 2**53, 10**25, -0.0, 0.1, 10_001)
_KEYS = (
    "id",
    "name",
    "at_least",
    "at_most",
    "low",
    "colour",
    "ines",
    "levy",
    "Q.3",
    "quorum",
    "speakers",
    "agreement",
)

values = st.recursive(
    st.one_of(st.none(), st.booleans(), st.sampled_from(_WORDS), st.sampled_from(_NUMBERS), st.text(max_size=3)),
    lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(st.sampled_from(_KEYS), inner, max_size=3)),
    max_leaves=4,
)


def _alike(value: Any) -> st.SearchStrategy[Any]:
    """Something else of the same sort, which often fits."""
    if isinstance(value, bool) or value is None:
        return st.sampled_from((True, False, None))
    if isinstance(value, int | float):
        return st.sampled_from((*_NUMBERS, value, value / 2, value + 1))
    return st.sampled_from((*_WORDS, value + "x", "tomas")) if isinstance(value, str) else st.just(type(value)())


@st.composite
def tampered(draw: st.DrawFn) -> Any:
    """A sound document in which one or two things were nudged, replaced, removed, added, repeated or moved."""
    document = json.loads(encode(draw(scenarios())))
    for _ in range(draw(st.integers(1, 2))):
        places = paths(document)
        if not places:
            break
        path = draw(st.sampled_from(places))
        holder = parent(document, path)
        match draw(st.sampled_from(("nudge", "nudge", "replace", "remove", "add", "repeat", "move"))):
            case "nudge":
                holder[path[-1]] = draw(_alike(holder[path[-1]]))
            case "replace":
                holder[path[-1]] = draw(values)
            case "remove":
                del holder[path[-1]]
            case "add" if isinstance(holder, dict):
                holder[draw(st.sampled_from(_KEYS))] = draw(values)
            case "repeat" if isinstance(holder, list):
                holder.append(copy.deepcopy(holder[path[-1]]))
            case _:
                other = draw(st.sampled_from(places))
                holder[path[-1]] = copy.deepcopy(parent(document, other)[other[-1]])
    return document
