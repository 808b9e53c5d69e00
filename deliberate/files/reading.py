"""Reading scenario files: strict, and with the place and the reason for whatever is refused.

The usual file takes the fast way: msgspec decodes into the types, a second pass looks for repeated keys, which
msgspec lets pass, and the references are checked. Whatever stumbles on that way is read once more by the careful
way, which is slower and knows where it is.
"""

from __future__ import annotations

import codecs
import errno
import json
import math
import os
import stat
from pathlib import Path
from typing import Any, Literal

import msgspec

from deliberate.errors import DeliberateError
from deliberate.scenario.checks import check_references
from deliberate.scenario.shape import SHOWN_LENGTH, conform, key_path, refuse, shown
from deliberate.scenario.values import Scenario

SIZE_LIMIT = 2**30  # bytes; 100,000 people and 2,000,000 arrows with the longest ids need about half of it
NESTING_LIMIT = 64
FORMAT = "deliberate-scenario"
VERSION = 1


def read(path: str | os.PathLike[str]) -> Scenario:
    """Read the scenario file at `path`; raise a DeliberateError for a file that cannot be read or does not hold
    a scenario."""
    return decode(read_bytes(path))


def read_bytes(path: str | os.PathLike[str]) -> bytes:
    """The content of the file at `path`, cut off right after the size that `decode` refuses; raise a DeliberateError
    for a file that cannot be read."""
    try:
        with Path(path).open("rb") as file:
            status = os.fstat(file.fileno())
            # A pipe does not know its size; asking for no more than needed keeps small files cheap.
            size = status.st_size if stat.S_ISREG(status.st_mode) else SIZE_LIMIT
            return file.read(min(size, SIZE_LIMIT) + 1)
    except (OSError, ValueError) as error:
        raise DeliberateError(_why_unreadable(error)) from None


def decode(data: bytes) -> Scenario:
    """Decode the bytes of a scenario file (UTF-8 JSON, with or without a byte order mark)."""
    if len(data) > SIZE_LIMIT:
        raise DeliberateError(f"is larger than the {SIZE_LIMIT // 2**20:,} MiB that a scenario file may have")
    data = data.removeprefix(codecs.BOM_UTF8)
    text = _text(data)
    try:
        _head_decoder.decode(data)
        scenario = _decoder.decode(data)
        _repetition_finder.decode(text)
    except (msgspec.MsgspecError, ValueError, RecursionError):
        scenario = _read_carefully(text)
    check_references(scenario)
    return scenario


class _Head(msgspec.Struct):
    """What a file must say about itself; values made in Python have it by default."""

    format: Literal["deliberate-scenario"]
    version: Literal[1]


class _Repeating(dict[str, Any]):
    """A JSON object in which `repeated_key` stands more than once."""

    repeated_key: str


def _refuse_repetition(pairs: list[tuple[str, Any]]) -> None:
    # Nothing is kept of what this pass reads, so that large files need no memory for it.
    if len(dict(pairs)) != len(pairs):
        raise ValueError


def _note_repetition(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    members = dict(pairs)
    if len(members) == len(pairs):
        return members
    repeating = _Repeating(members)
    seen: set[str] = set()
    for key, _ in pairs:
        if key in seen:
            repeating.repeated_key = key
            break
        seen.add(key)
    return repeating


def _whole(digits: str) -> int | float:
    # Python refuses to read whole numbers of some thousand digits; as a float they are out of range and found later.
    return int(digits) if len(digits) <= 400 else math.copysign(math.inf, -1 if digits.startswith("-") else 1)


_head_decoder = msgspec.json.Decoder(_Head)
_decoder = msgspec.json.Decoder(Scenario)
_repetition_finder = json.JSONDecoder(object_pairs_hook=_refuse_repetition)
_careful_parser = json.JSONDecoder(object_pairs_hook=_note_repetition, parse_int=_whole)


def _text(data: bytes) -> str:
    if data.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE)):
        raise DeliberateError("is UTF-16 text, must be saved as UTF-8")
    try:
        return data.decode()
    except UnicodeDecodeError as error:
        line_start = data.rfind(b"\n", 0, error.start) + 1
        line = data.count(b"\n", 0, error.start) + 1
        column = len(data[line_start : error.start].decode()) + 1
        where = f"line {line}, column {column}"
        raise DeliberateError(f"byte 0x{data[error.start]:02x} is not UTF-8 text", where) from None


def _read_carefully(text: str) -> Scenario:
    if not text.strip():
        raise DeliberateError("is empty, must hold a scenario")
    try:
        raw = _careful_parser.decode(text)
    except json.JSONDecodeError as error:
        reason = error.msg[:1].lower() + error.msg[1:]
        raise DeliberateError(f"is not JSON: {reason}", f"line {error.lineno}, column {error.colno}") from None
    except RecursionError:
        raise DeliberateError(f"is nested more than {NESTING_LIMIT} deep") from None
    _check_tree(raw, "", NESTING_LIMIT)
    _check_head(raw)
    return conform(raw)


def _check_tree(raw: Any, where: str, levels_left: int) -> None:
    """Refuse repeated keys and deep nesting, whatever the keys mean."""
    if not isinstance(raw, dict | list):
        return
    if levels_left == 0:
        refuse(f"is nested more than {NESTING_LIMIT} deep", where[:SHOWN_LENGTH] + "…")
    if isinstance(raw, _Repeating):
        refuse("stands more than once, must stand once", key_path(where, raw.repeated_key))
    for key, member in raw.items() if isinstance(raw, dict) else enumerate(raw):
        if isinstance(member, dict | list):
            place = key_path(where, key) if isinstance(raw, dict) else f"{where}[{key}]"
            _check_tree(member, place, levels_left - 1)


def _check_head(raw: Any) -> None:
    """Say first that a file is something else, or newer, before its other keys are held against this version."""
    if not isinstance(raw, dict):
        refuse(f'must be an object with "format": "{FORMAT}", is {shown(raw)}', "")
    if "format" not in raw:
        refuse(f'is missing, must be "{FORMAT}"', "format")
    if raw["format"] != FORMAT:
        refuse(f'must be "{FORMAT}", is {shown(raw["format"])}', "format")
    if "version" not in raw:
        refuse(f"is missing, must be {VERSION}", "version")
    version = raw["version"]
    if isinstance(version, int | float) and not isinstance(version, bool) and version > VERSION:
        refuse(f"is {shown(version)}, newer than this program reads ({VERSION}); a newer Deliberate can", "version")


def _why_unreadable(error: OSError | ValueError) -> str:
    if not isinstance(error, OSError):
        return "is not a possible file name"
    reasons = {
        errno.ENOENT: "there is no such file",
        errno.ENOTDIR: "there is no such file",
        errno.EISDIR: "is a folder, must be a scenario file",
        errno.EACCES: "may not be read with your permissions",
        errno.ENAMETOOLONG: "the file name is too long",
        errno.ELOOP: "its symbolic links lead in a circle",
    }
    return reasons.get(error.errno or 0, f"cannot be read: {error.strerror or error}")
