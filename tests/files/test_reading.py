"""Reading scenario files: what is refused, in which words, and that nothing else ever escapes."""

from __future__ import annotations

import codecs
import json
import resource
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest
from documents import SOUND, as_bytes, sound_with, sound_without, tampered
from hypothesis import given
from hypothesis import strategies as st
from strategies import scenarios

import deliberate.files.reading as reading
from deliberate.errors import DeliberateError
from deliberate.files import decode, encode, read
from deliberate.scenario.checks import validate
from deliberate.scenario.values import Scenario, Stage

HEAD = b'{"format": "deliberate-scenario", "version": 1, '
FIRST = ("variants", 0, "people", 0)
ARROW = ("variants", 0, "arrows", 0)
STAGE = ("variants", 0, "plan", "stages", 0)
AN_ID = "must be an id of 1 to 64 of A-Z, a-z, 0-9, _, . and -"
ONE_LINE = "must be one line of text without control characters"
WHOLE = "between 0 and 9007199254740991"
DOUBLE_RANGE = "must be a number within double range, which ends at about 1.8e308"

# What is not a JSON document of the right kind at all: the bytes, and the whole message.
NOT_A_SCENARIO: list[tuple[bytes, str]] = [
    (b"", "is empty, must hold a scenario"),
    (b" \r\n\t\n", "is empty, must hold a scenario"),
    (codecs.BOM_UTF8, "is empty, must hold a scenario"),
    (b"null", 'must be an object with "format": "deliberate-scenario", is null'),
    (b"[]", 'must be an object with "format": "deliberate-scenario", is a list'),
    (b"1e999", 'must be an object with "format": "deliberate-scenario", is Infinity'),
    (b"1" * 5_000, 'must be an object with "format": "deliberate-scenario", is Infinity'),
    (b"{}", 'format: is missing, must be "deliberate-scenario"'),
    (b'{"format": "something", "version": 7}', 'format: must be "deliberate-scenario", is "something"'),
    (b'{"format": "deliberate-scenario"}', "version: is missing, must be 1"),
    (
        b'{"format": "deliberate-scenario", "version": 2, "colour": "new"}',
        "version: is 2, newer than this program reads (1); a newer Deliberate can",
    ),
    (
        b'{"format": "deliberate-scenario", "version": 1.5}',
        "version: is 1.5, newer than this program reads (1); a newer Deliberate can",
    ),
    (
        HEAD + b'"title": "A", "colour": 1}',
        "colour: is not a known key; "
        "known here are title, questions, variants, format, version, notes, ballot and polls",
    ),
    (HEAD + b'"titel": "A"}', 'titel: is not a known key; did you mean "title"?'),
    (HEAD + b'"title": "A"}', "questions: is missing, must be a list"),
    (HEAD + b'"title": "\\ud800"}', "questions: is missing, must be a list"),
    # not JSON
    (b"{\n  'a': 1}", "line 2, column 3: is not JSON: expecting property name enclosed in double quotes"),
    (b'{\n  "a": nope}', "line 2, column 8: is not JSON: expecting value"),
    (b'{"a": 1 "b": 2}', "line 1, column 9: is not JSON: expecting ',' delimiter"),
    (b'{"a" 1}', "line 1, column 6: is not JSON: expecting ':' delimiter"),
    (b'{"a": 1}\n}', "line 2, column 1: is not JSON: extra data"),
    (b'{"a": "x', "line 1, column 7: is not JSON: unterminated string starting at"),
    (b'{"a": "\t"}', "line 1, column 8: is not JSON: invalid control character at"),
    (b'{"a": 01}', "line 1, column 8: is not JSON: expecting ',' delimiter"),
    (b"\x00" + HEAD, "line 1, column 1: is not JSON: expecting value"),
    # not UTF-8
    (b'{"a":\n "\xc3\xa9\xff"}', "line 2, column 4: byte 0xff is not UTF-8 text"),
    (b'{"a": "\xed\xa0\x80"}', "line 1, column 8: byte 0xed is not UTF-8 text"),
    ("{}".encode("utf-16"), "is UTF-16 text, must be saved as UTF-8"),
    # repeated keys and depth
    (b'{"a": 1, "a": 1}', "a: stands more than once, must stand once"),
    (
        b'{"a": [0, {"b": {"two words": 1, "two words": 2}}]}',
        'a[1].b["two words"]: stands more than once, must stand once',
    ),
    (b"[" * 65 + b"]" * 65, "[0]" * 20 + "…: is nested more than 64 deep"),
    (b'{"a":' * 65 + b"1" + b"}" * 65, "a" + ".a" * 29 + ".…: is nested more than 64 deep"),
    (b"[" * 100_000, "is nested more than 64 deep"),
]

# One change to a sound document: the place, the value there, and what is said about it.
MISFITS: list[tuple[tuple[str | int, ...], Any, str]] = [
    (("version",), 0, "version: must be 1, is 0"),
    (("version",), True, "version: must be 1, is true"),
    (("version",), "1", 'version: must be 1, is "1"'),
    (("version",), None, "version: must be 1, is null"),
    (("title",), 7, f"title: {ONE_LINE}, is 7"),
    (("title",), "a\x85", f'title: {ONE_LINE}, is "a\\u0085"'),
    (("title",), "x" * 201, "title: must have at most 200 characters, has 201"),
    (("notes",), "x" * 20_001, "notes: must have at most 20,000 characters, has 20,001"),
    (("questions",), {}, "questions: must be a list, is an object"),
    (("questions",), [], "questions: must have at least 1, is empty"),
    (("questions", 0), "levy", 'questions[0]: must be an object, is "levy"'),
    (("questions", 0, "low"), "0", 'questions[0].low: must be a number, is "0"'),
    (("questions", 0, "low"), float("nan"), "questions[0].low: must be a number, is NaN"),
    (("questions", 0, "high"), float("inf"), f"questions[0].high: {DOUBLE_RANGE}"),
    (("questions", 0, "high"), 0, "questions[0].high: must be more than low (0), is 0"),
    (("questions", 0, "pass_mark"), False, "questions[0].pass_mark: must be a number or null, is false"),
    (
        ("questions", 0, "agreement"),
        [{"test": "vote"}],
        "questions[0].agreement[0].test: "
        'must be "quartile-range", "rand-ucla", "share-within" or "spread", is "vote"',
    ),
    (("ballot",), {"quorum": "half"}, 'ballot.quorum: must be a fraction such as "2/3", is "half"'),
    (
        ("ballot",),
        {"quorum": True},
        'ballot.quorum: must be a number between 0 and 1, a fraction such as "2/3" or null, is true',
    ),
    (("variants", 0, "people"), None, "variants[0].people: must be a list, is null"),
    ((*FIRST, "id"), "", f'variants[0].people[0].id: {AN_ID}, is ""'),
    ((*FIRST, "id"), "x" * 65, f'variants[0].people[0].id: {AN_ID}, is "{"x" * 60}…"'),
    ((*FIRST, "name"), None, f"variants[0].people[0].name: {ONE_LINE}, is null"),
    (
        (*FIRST, "name"),
        "\ud800",
        'variants[0].people[0].name: must be text without half a surrogate pair, is "\\ud800"',
    ),
    ((*FIRST, "firmness"), 1.5, "variants[0].people[0].firmness: must be between 0 and 1, is 1.5"),
    ((*FIRST, "firmnes"), 0.5, 'variants[0].people[0].firmnes: is not a known key; did you mean "firmness"?'),
    ((*FIRST, "beliefs"), [0.7], "variants[0].people[0].beliefs: must be an object, is a list"),
    ((*FIRST, "beliefs", "levy"), "0.7", 'variants[0].people[0].beliefs.levy: must be a number, is "0.7"'),
    (
        (*FIRST, "beliefs", "levy"),
        -1e-9,
        'variants[0].people[0].beliefs.levy: must lie on the scale of "levy", from 0 to 1, is -1e-09',
    ),
    (
        (*FIRST, "beliefs", "a.b"),
        1,
        'variants[0].people[0].beliefs["a.b"]: "a.b" is not the id of a question; known: "levy"',
    ),
    ((*FIRST, "margins"), {"levy": -1}, "variants[0].people[0].margins.levy: must be 0 or more, is -1"),
    ((*ARROW, "weight"), -2, "variants[0].arrows[0].weight: must be more than 0, is -2"),
    ((*ARROW, "weight"), 0, "variants[0].arrows[0].weight: must be more than 0, is 0"),
    ((*ARROW, "weight"), 10**309, f"variants[0].arrows[0].weight: {DOUBLE_RANGE}"),
    ((*ARROW, "weight"), -(10**5_000 - 1), f"variants[0].arrows[0].weight: {DOUBLE_RANGE}"),
    ((*ARROW, "source"), "zoe", 'variants[0].arrows[0].source: "zoe" is not the id of a person in this variant'),
    ((*STAGE, "rounds"), 2.5, "variants[0].plan.stages[0].rounds: must be a whole number, is 2.5"),
    ((*STAGE, "rounds"), 10_001, "variants[0].plan.stages[0].rounds: must be between 1 and 10000, is 10001"),
    (
        (*STAGE, "pairs"),
        [["ines", "tomas", "noor"]],
        "variants[0].plan.stages[0].pairs[0]: must be a list of 2, has 3",
    ),
    (("polls", 0, "after_round"), 10**25, f"polls[0].after_round: must be {WHOLE}, is {10**25}"),
    (
        ("polls", 0, "after_round"),
        10**70,
        f"polls[0].after_round: must be {WHOLE}, is a number of more than 60 digits",
    ),
]

MISSING: list[tuple[tuple[str | int, ...], str]] = [
    (("format",), 'format: is missing, must be "deliberate-scenario"'),
    (("version",), "version: is missing, must be 1"),
    (("title",), f"title: is missing, {ONE_LINE}"),
    (("questions", 0, "id"), f"questions[0].id: is missing, {AN_ID}"),
    (("questions", 0, "high"), "questions[0].high: is missing, must be a number"),
    (("variants",), "variants: is missing, must be a list"),
    (("variants", 0, "name"), f"variants[0].name: is missing, {ONE_LINE}"),
    (("variants", 0, "people"), "variants[0].people: is missing, must be a list"),
    ((*ARROW, "weight"), "variants[0].arrows[0].weight: is missing, must be a number more than 0"),
    (("polls", 0, "after_round"), f"polls[0].after_round: is missing, must be a whole number {WHOLE}"),
]


def refusal_of(data: bytes) -> str:
    with pytest.raises(DeliberateError) as refusal:
        decode(data)
    return str(refusal.value)


def test_the_sound_document_is_read() -> None:
    scenario = decode(as_bytes(SOUND))
    ines, tomas, noor = scenario.variants[0].people
    assert (scenario.title, ines.beliefs, tomas.name) == ("Harbour levy", {"levy": 0.7}, "Tomás")
    assert (noor.shown_name, noor.own_weight, noor.present) == ("noor", 1.0, True)
    assert scenario.variants[0].plan.stages == (Stage(rounds=3),)
    assert scenario.ballot.tests[0].more_than == "1/2"


@pytest.mark.parametrize(("data", "message"), NOT_A_SCENARIO, ids=lambda part: str(part)[:40])
def test_what_is_no_scenario_file(data: bytes, message: str) -> None:
    assert refusal_of(data) == message


@pytest.mark.parametrize(("path", "value", "message"), MISFITS, ids=[message[:50] for *_, message in MISFITS])
def test_what_does_not_fit(path: tuple[str | int, ...], value: Any, message: str) -> None:
    limit = sys.get_int_max_str_digits()
    sys.set_int_max_str_digits(0)  # to write down the large number, not to read it
    try:
        data = json.dumps(sound_with(path, value)).encode()
    finally:
        sys.set_int_max_str_digits(limit)
    assert refusal_of(data) == message


@pytest.mark.parametrize(("path", "message"), MISSING, ids=[message[:50] for _, message in MISSING])
def test_what_is_missing(path: tuple[str | int, ...], message: str) -> None:
    assert refusal_of(as_bytes(sound_without(path))) == message


@pytest.mark.parametrize("path", [(), FIRST, (*FIRST, "beliefs"), ARROW, STAGE])
def test_a_key_that_stands_twice_is_found_wherever_it_is(path: tuple[str | int, ...]) -> None:
    """The second one says the same as the first, so only the repetition can be what is refused."""
    holder: Any = SOUND
    for step in path:
        holder = holder[step]
    key = next(iter(holder))
    text = json.dumps(SOUND)
    doubled = text.replace(
        json.dumps(holder), "{" + f'"{key}": {json.dumps(holder[key])}, ' + json.dumps(holder)[1:], 1
    )
    assert doubled != text
    assert refusal_of(doubled.encode()).endswith(f"{key}: stands more than once, must stand once")


def test_a_byte_order_mark_and_whole_numbers_with_a_point_are_read() -> None:
    data = as_bytes(sound_with((*STAGE, "rounds"), 12.0)).replace(b'"version": 1', b'"version": 1.0')
    scenario = decode(codecs.BOM_UTF8 + data)
    assert scenario.variants[0].plan.stages[0].rounds == 12
    assert type(scenario.variants[0].plan.stages[0].rounds) is type(scenario.version) is int


def test_a_file_over_the_size_limit_is_refused(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(reading, "SIZE_LIMIT", 2**20)
    path = tmp_path / "large.deliberate.json"
    path.write_bytes(as_bytes(SOUND) + b" " * 2**20)
    with pytest.raises(DeliberateError, match="is larger than the 1 MiB that a scenario file may have"):
        read(path)


def test_the_size_limit_admits_the_largest_meeting() -> None:
    """100,000 people and 2,000,000 arrows with ids of 64 characters, every number with 17 digits."""
    number = "-1.2345678901234567e-100"
    an_id = "x" * 64
    arrow = f'        {{"listener": "{an_id}", "source": "{an_id}", "weight": {number}, "basis": "observed"}},\n'
    numbers = ", ".join(f'"{key}": {number}' for key in ("x", "y", "own_weight", "firmness", "ballots"))
    names = ", ".join(f'"{key}": "{"é" * 200}"' for key in ("name", "role"))
    person = (
        f'        {{"id": "{an_id}", {names}, {numbers}, "beliefs": {{"{an_id}": {number}}}, "present": false}},\n'
    )
    assert 100_000 * len(person.encode()) + 2_000_000 * len(arrow) < reading.SIZE_LIMIT


@pytest.mark.parametrize(
    ("name", "message"),
    [
        ("nothing.deliberate.json", "there is no such file"),
        ("file/inside.deliberate.json", "there is no such file"),
        (".", "is a folder, must be a scenario file"),
        ("x" * 300, "the file name is too long"),
        ("a\0b", "is not a possible file name"),
        ("circle", "its symbolic links lead in a circle"),
    ],
)
def test_files_that_cannot_be_read(tmp_path: Path, name: str, message: str) -> None:
    (tmp_path / "file").touch()
    (tmp_path / "circle").symlink_to(tmp_path / "circle")
    with pytest.raises(DeliberateError) as refusal:
        read(tmp_path / name)
    assert str(refusal.value) == message


@given(scenarios())
def test_reading_what_was_written_gives_the_same(scenario: Scenario) -> None:
    assert decode(encode(scenario)) == scenario


@given(tampered())
def test_only_the_declared_error_escapes_from_documents(document: Any) -> None:
    _read_or_refuse(as_bytes(document))


@given(st.data())
def test_only_the_declared_error_escapes_from_bytes(data: st.DataObject) -> None:
    """A sound file with a piece cut out, put elsewhere or overwritten with anything."""
    whole = encode(data.draw(scenarios()))
    for _ in range(data.draw(st.integers(1, 3))):
        start, stop, target = (data.draw(st.integers(0, len(whole))) for _ in range(3))
        cut = whole[start : min(stop, start + 40)]
        put = data.draw(st.one_of(st.just(cut), st.just(b""), st.binary(max_size=8), _PIECES))
        whole = whole[: min(target, start)] + put + whole[start + len(cut) :]
    _read_or_refuse(whole)


_PIECES = st.sampled_from(
    (b'"', b"{", b"}", b"[", b"]", b",", b":", b"\\u", b"\\ud83d", b"-", b"1e999", b"NaN", b"\n", b"\xff")
)


@given(
    st.one_of(
        st.binary(), st.text().map(str.encode), st.from_regex(r'\A[\[\]{}",:0-9eE.\\ nultrefas-]*\Z').map(str.encode)
    )
)
def test_only_the_declared_error_escapes_from_noise(data: bytes) -> None:
    _read_or_refuse(data)


def _read_or_refuse(data: bytes) -> None:
    try:
        scenario = decode(data)
    except DeliberateError as error:
        refusal = str(error)
    else:
        assert validate(scenario) is scenario
        return
    assert refusal.isprintable()
    assert len(refusal) < 1_000


NASTY = r"""
HEAD = b'{"format": "deliberate-scenario", "version": 1, '
million = 10**6
nasty = {
    "nested lists": b"[" * million,
    "nested objects": b'{"a":' * million,
    "nested and closed": HEAD + b'"notes": ' + b"[" * 900 + b"]" * 900 + b"}",
    "a number of a million digits": HEAD + b'"title": ' + b"7" * million + b"}",
    "a fraction of a million digits": HEAD + b'"title": 0.' + b"7" * million + b"}",
    "a large exponent": HEAD + b'"title": 1e' + b"9" * million + b"}",
    "a list of a million numbers": HEAD + b'"questions": [' + b"0," * million + b"0]}",
    "a list of a million objects": HEAD + b'"questions": [' + b"{}," * million + b"{}]}",
    "a million keys": b"{" + b",".join(b'"%d":0' % i for i in range(million // 4)) + b"}",
    "a key a million times": b"{" + b'"a":0,' * million + b'"a":0}',
    "a long key": b'{"' + b"k" * 10 * million + b'": 1}',
    "a long text": HEAD + b'"title": "' + b"x" * 10 * million + b'"}',
    "a long text of line breaks": HEAD + b'"notes": "' + b"\\n" * million + b'"}',
    "backslashes": b'"' + b"\\" * million,
    "white space": b" " * 10 * million,
    "zeros": bytes(10 * million),
    "bytes that are no text": b"\xff" * 10 * million,
}
"""


def test_nasty_input_is_refused_within_a_second_and_bounded_memory() -> None:
    """In a process of its own that may not grow beyond 1 GiB; the second is of processor time, as clocks stray."""
    script = NASTY + (
        "import time\n"
        "from deliberate.errors import DeliberateError\n"
        "from deliberate.files import decode\n"
        "for name, data in nasty.items():\n"
        "    start = time.process_time()\n"
        "    try:\n"
        "        decode(data)\n"
        "    except DeliberateError as refusal:\n"
        "        took = time.process_time() - start\n"
        "        assert took < 1, f'{name}: {took:.2f} s'\n"
        "        assert len(str(refusal)) < 500, name\n"
        "        print(name)\n"
    )
    printed = subprocess.run(
        [sys.executable, "-c", script],
        capture_output=True,
        text=True,
        timeout=120,
        preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_AS, (2**30, 2**30)),
        cwd=Path(reading.__file__).parents[2],
    )
    assert printed.stderr == ""
    assert len(printed.stdout.splitlines()) == NASTY.count('\n    "')
