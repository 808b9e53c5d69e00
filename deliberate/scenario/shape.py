"""What the types of `values` say about plain data, told in a person's words.

msgspec decides fast whether data fit, but names neither the mapping key nor the value that does not. This module
is asked only after that, or for values that did not come out of a file: it walks the same types, and either says
what is wrong and where, or gives the data back as a Scenario.
"""

from __future__ import annotations

import json
import math
import numbers
import re
from collections.abc import Iterable, Mapping
from difflib import get_close_matches
from functools import cache
from typing import Any, NoReturn

import msgspec
from msgspec import UNSET, Struct, inspect

from deliberate.errors import DeliberateError
from deliberate.scenario.values import Scenario

SHOWN_LENGTH = 60

_PLAIN_KEY = re.compile(r"[A-Za-z0-9_-]{1,64}")


def conform(raw: Any) -> Scenario:
    """Turn plain data (dicts, lists, text, numbers) into a Scenario; raise a DeliberateError for what the types
    refuse. Whole numbers written as 2.0 are taken for 2, as JSON Schema does."""
    return msgspec.convert(_fit(raw, _scenario_type(), ""), Scenario)


def plain(value: Any) -> Any:
    """Values as the dicts, lists, text and numbers that a file would hold; numpy's numbers become Python's."""
    if isinstance(value, Struct):
        fields = ((name, getattr(value, name)) for name in value.__struct_fields__)
        return {name: plain(member) for name, member in fields if member is not UNSET}
    if isinstance(value, Mapping):
        return {key: plain(member) for key, member in value.items()}
    if isinstance(value, list | tuple):
        return [plain(member) for member in value]
    if isinstance(value, numbers.Real) and not isinstance(value, bool):
        return int(value) if isinstance(value, numbers.Integral) else float(value)
    return value


def shown(value: Any) -> str:
    """A value as part of a message: on one line, printable, and no longer than a reader wants it."""
    if isinstance(value, str):
        quoted = json.dumps(value if len(value) <= SHOWN_LENGTH else value[:SHOWN_LENGTH] + "…", ensure_ascii=False)
        return "".join(c if c.isprintable() else json.dumps(c)[1:-1] for c in quoted)
    if value is None or isinstance(value, bool):
        return json.dumps(value)
    if isinstance(value, int):
        return str(value) if abs(value) < 10**SHOWN_LENGTH else f"a number of more than {SHOWN_LENGTH} digits"
    if isinstance(value, float):
        return str(int(value)) if abs(value) < 1e15 and value.is_integer() else json.dumps(value)
    if isinstance(value, list | tuple):
        return "a list"
    return "an object" if isinstance(value, Mapping) else f"a {type(value).__name__}"


def listed(names: Iterable[str], last: str = "and") -> str:
    """``a, b and c``."""
    *first, final = names
    return f"{', '.join(first)} {last} {final}" if first else final


def key_path(where: str, key: Any) -> str:
    """The place of `key` in the object at `where`, such as ``people[2].beliefs.levy``."""
    if not (isinstance(key, str) and _PLAIN_KEY.fullmatch(key)):
        return f"{where}[{shown(key)}]"
    return f"{where}.{key}" if where else key


def refuse(what: str, where: str) -> NoReturn:
    """Raise the error that a person gets to read."""
    raise DeliberateError(what, where)


@cache
def _scenario_type() -> inspect.Type:
    return inspect.type_info(Scenario)


def _fit(value: Any, kind: inspect.Type, where: str) -> Any:
    """`value` as `kind` wants it, or a DeliberateError."""
    if not _is_sort(value, kind):
        refuse(f"must be {_wanted(kind)}, is {shown(value)}", where)
    match kind:
        case inspect.UnionType():
            return _fit(value, next(option for option in kind.types if _is_sort(value, option)), where)
        case inspect.Metadata():
            _check_text(value, kind.type, _wanted(kind), where)
        case inspect.StrType():
            _check_text(value, kind, "text", where)
        case inspect.FloatType() | inspect.IntType():
            return _fit_number(value, kind, where)
        case inspect.LiteralType():
            return kind.values[kind.values.index(value)]  # 1 for 1.0
        case inspect.StructType():
            return _fit_struct(value, kind, where)
        case inspect.DictType():
            for key in value:
                _fit(key, kind.key_type, key_path(where, key))
            return {key: _fit(member, kind.value_type, key_path(where, key)) for key, member in value.items()}
        case inspect.VarTupleType():
            _check_length(value, kind, where)
            return [_fit(member, kind.item_type, f"{where}[{i}]") for i, member in enumerate(value)]
        case inspect.TupleType(item_types=items):
            if len(value) != len(items):
                refuse(f"must be a list of {len(items)}, has {len(value)}", where)
            return [_fit(member, items[i], f"{where}[{i}]") for i, member in enumerate(value)]
    return value


def _is_sort(value: Any, kind: inspect.Type) -> bool:
    """Whether `value` is of the right sort (text, number, list ...), whatever its bounds."""
    match kind:
        case inspect.UnionType():
            return any(_is_sort(value, option) for option in kind.types)
        case inspect.Metadata():
            return _is_sort(value, kind.type)
        case inspect.StrType():
            return isinstance(value, str)
        case inspect.FloatType() | inspect.IntType():
            return isinstance(value, int | float) and not isinstance(value, bool)
        case inspect.BoolType():
            return isinstance(value, bool)
        case inspect.NoneType():
            return value is None
        case inspect.LiteralType():
            return not isinstance(value, bool) and isinstance(value, str | int | float) and value in kind.values
        case inspect.StructType() | inspect.DictType():
            return isinstance(value, Mapping)
    return isinstance(value, list | tuple)


def _wanted(kind: inspect.Type) -> str:
    """How the sentence "must be ..." ends."""
    match kind:
        case inspect.UnionType():
            return listed([_wanted(option) for option in kind.types], "or")
        case inspect.Metadata():
            return kind.extra_json_schema["description"]
        case inspect.StrType():
            return "text"
        case inspect.FloatType() | inspect.IntType():
            noun = "a number" if isinstance(kind, inspect.FloatType) else "a whole number"
            return f"{noun} {_bounds(kind)}" if kind.le is not None or kind.gt is not None else noun
        case inspect.BoolType():
            return "true or false"
        case inspect.NoneType():
            return "null"
        case inspect.LiteralType():
            return listed([shown(value) for value in kind.values], "or")
        case inspect.StructType() | inspect.DictType():
            return "an object"
    return "a list"


def _bounds(kind: inspect.FloatType | inspect.IntType) -> str:
    if kind.gt is not None:
        return f"more than {shown(kind.gt)}"
    return f"{shown(kind.ge)} or more" if kind.le is None else f"between {shown(kind.ge)} and {shown(kind.le)}"


def _fit_number(value: float, kind: inspect.FloatType | inspect.IntType, where: str) -> float:
    if isinstance(value, float) and math.isnan(value):
        refuse(f"must be {_wanted(kind)}, is NaN", where)
    try:
        finite = math.isfinite(value)
    except OverflowError:
        finite = False
    if not finite:
        refuse("must be a number within double range, which ends at about 1.8e308", where)
    if isinstance(kind, inspect.IntType):
        if value != int(value):
            refuse(f"must be a whole number, is {shown(value)}", where)
        value = int(value)
    low_enough = kind.le is None or value <= kind.le
    high_enough = (kind.ge is None or value >= kind.ge) and (kind.gt is None or value > kind.gt)
    if not (low_enough and high_enough):
        refuse(f"must be {_bounds(kind)}, is {shown(value)}", where)
    return value


def _check_text(value: str, kind: inspect.Type, wanted: str, where: str) -> None:
    try:
        value.encode()
    except UnicodeEncodeError:
        refuse(f"must be text without half a surrogate pair, is {shown(value)}", where)
    if not isinstance(kind, inspect.StrType):
        return
    if kind.min_length is not None and len(value) < kind.min_length:
        refuse("must not be empty", where)
    if kind.max_length is not None and len(value) > kind.max_length:
        refuse(f"must have at most {kind.max_length:,} characters, has {len(value):,}", where)
    if kind.pattern is not None and not re.search(kind.pattern, value):
        refuse(f"must be {wanted}, is {shown(value)}", where)


def _check_length(value: Any, kind: inspect.VarTupleType, where: str) -> None:
    if kind.min_length is not None and len(value) < kind.min_length:
        refuse(f"must have at least {kind.min_length:,}, is empty", where)
    if kind.max_length is not None and len(value) > kind.max_length:
        refuse(f"must have at most {kind.max_length:,}, has {len(value):,}", where)


def _fit_struct(value: Mapping[str, Any], kind: inspect.StructType, where: str) -> dict[str, Any]:
    fields = {field.name: field for field in kind.fields}
    for key in value:
        if key not in fields:
            close = get_close_matches(str(key)[:SHOWN_LENGTH], fields, n=1)
            hint = f'did you mean "{close[0]}"?' if close else f"known here are {listed(list(fields))}"
            refuse(f"is not a known key; {hint}", key_path(where, key))
    for name, field in fields.items():
        if field.required and name not in value:
            refuse(f"is missing, must be {_wanted(field.type)}", key_path(where, name))
    return {key: _fit(member, fields[key].type, key_path(where, key)) for key, member in value.items()}
