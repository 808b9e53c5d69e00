"""Writing scenario files so that a person can read them and versions differ by line.

Two spaces of indentation; each person, arrow, stage, test and poll takes one line. Keys come in the order in which
formats.md shows them. A key at its default is left out, but for those in `_ALWAYS`, which a reader looks for: the own
weight as one of a person's points, the ballot rule in full, the plan with its stages.
"""

from __future__ import annotations

import os
from collections.abc import Iterator, Mapping
from functools import cache
from typing import Any

import msgspec
from msgspec import UNSET, Struct

from deliberate.files.atomic import replace_file
from deliberate.scenario.checks import validate
from deliberate.scenario.values import (
    AgreementTest,
    Arrow,
    Ballot,
    BallotTest,
    Person,
    Plan,
    Poll,
    Scenario,
    Stage,
    Variant,
)

_ONE_LINE = (AgreementTest, Arrow, BallotTest, Person, Poll, Stage)
_ORDER: dict[type[Struct], tuple[str, ...]] = {
    Scenario: ("format", "version", "title", "notes", "questions", "ballot", "variants", "polls"),
    Variant: ("name", "notes", "people", "arrows", "plan"),
}
_ALWAYS: dict[type[Struct], tuple[str, ...]] = {
    Scenario: ("format", "version", "ballot"),
    Ballot: ("name", "quorum", "tests"),
    BallotTest: ("count", "of"),
    Variant: ("plan",),
    Plan: ("stages", "afterwards"),
    Stage: ("name", "rounds", "setting"),
    Person: ("own_weight",),
}
_LARGEST_WHOLE = 2**53  # above it a float's neighbours are more than 1 apart, and digits would only pretend

_encoder = msgspec.json.Encoder()


def write(scenario: Scenario, path: str | os.PathLike[str]) -> None:
    """Save a scenario: after a crash at any moment the file is the old one or the new one, whole.

    Raises a DeliberateError, and leaves the file as it was, for a scenario that does not fit the file format and for
    a place that cannot be written to.
    """
    replace_file(path, encode(validate(scenario)))


def encode(scenario: Scenario) -> bytes:
    """The bytes of the file for a valid scenario; equal scenarios give equal bytes."""
    return (_text(scenario, "") + "\n").encode()


def _text(value: Any, indent: str) -> str:
    inner = indent + "  "
    if isinstance(value, Struct) and not isinstance(value, _ONE_LINE):
        members = (f'"{key}": {_text(member, inner)}' for key, member in _members(value))
        return f"{{\n{inner}" + f",\n{inner}".join(members) + f"\n{indent}}}"
    if isinstance(value, tuple) and value and isinstance(value[0], Struct):
        return f"[\n{inner}" + f",\n{inner}".join(_text(entry, inner) for entry in value) + f"\n{indent}]"
    return msgspec.json.format(_encoder.encode(_plain(value)), indent=0).decode()


def _members(value: Struct) -> Iterator[tuple[str, Any]]:
    """The keys to write, with their values, in order."""
    kind = type(value)
    always = _ALWAYS.get(kind, ())
    defaults = _defaults(kind)
    for key in _ORDER.get(kind, kind.__struct_fields__):
        member = getattr(value, key)
        if member is not UNSET and (key in always or key not in defaults or member != defaults[key]):
            yield key, member


@cache
def _defaults(kind: type[Struct]) -> dict[str, Any]:
    defaults = kind.__struct_defaults__
    return dict(zip(kind.__struct_fields__[len(kind.__struct_fields__) - len(defaults) :], defaults, strict=True))


def _plain(value: Any) -> Any:
    """What JSON holds: whole numbers without a point, text and lists as they are."""
    if isinstance(value, float):
        return int(value) if abs(value) < _LARGEST_WHOLE and value.is_integer() else value
    if isinstance(value, Struct):
        return {key: _plain(member) for key, member in _members(value)}
    if isinstance(value, Mapping):
        return {key: _plain(member) for key, member in value.items()}
    if isinstance(value, tuple):
        return [_plain(member) for member in value]
    return value
