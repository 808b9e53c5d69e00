"""The shipped JSON Schema: made from the types, and of one mind with the reader."""

from __future__ import annotations

import json
import re
from typing import Any

import pytest
from documents import SOUND, as_bytes, sound_with, sound_without, tampered
from hypothesis import event, given
from jsonschema import Draft202012Validator
from PySide6.QtCore import QCoreApplication
from PySide6.QtQml import QJSEngine
from strategies import scenarios

from deliberate.errors import DeliberateError
from deliberate.files import decode, encode, read, schema_path
from deliberate.files.resources import demo_scenarios
from deliberate.files.schema import schema_text
from deliberate.scenario.values import Fraction, Id, Line, Notes, OptionalLine, Scenario

VALIDATOR = Draft202012Validator(json.loads(schema_text()))

# What only the reader can know, as its messages say it: what hangs on other parts of the file, and on values.
READER_ONLY = re.compile(
    r"is not the id of a (question|person)"
    r"|is taken by"  # an id or a name that is there already
    r"|must lie on the scale"
    r"|must be more than low|must lie closer to low"
    r"|must not be less than low"
    r'|must be between 0 and 1, is "'  # the value of a fraction
    r"|must be somebody else than the listener"
    r"|already listens to|already sits at|are already"
)


def test_the_shipped_file_is_what_the_types_make() -> None:
    assert schema_path().read_text(encoding="utf-8") == schema_text()


def test_it_is_a_schema_of_its_draft() -> None:
    schema = json.loads(schema_text())
    assert schema["$schema"] == "https://json-schema.org/draft/2020-12/schema"
    Draft202012Validator.check_schema(schema)


def test_it_requires_what_the_reader_requires() -> None:
    required = {name: set(kind["required"]) for name, kind in VALIDATOR.schema["$defs"].items()}
    assert required == {
        "Scenario": {"format", "version", "title", "questions", "variants"},
        "Question": {"id", "text", "low", "high"},
        "AgreementTest": {"test"},
        "Ballot": set(),
        "BallotTest": {"side"},
        "Variant": {"name", "people"},
        "Person": {"id"},
        "Arrow": {"listener", "source", "weight"},
        "Plan": set(),
        "Stage": set(),
        "Poll": {"question", "after_round"},
    }


@given(scenarios())
def test_both_accept_what_is_written(scenario: Scenario) -> None:
    VALIDATOR.validate(json.loads(encode(scenario)))


def test_both_accept_the_demos() -> None:
    assert demo_scenarios()
    for path in demo_scenarios():
        read(path)
        VALIDATOR.validate(json.loads(path.read_bytes()))


@given(tampered())
def test_both_judge_tampered_documents_alike(document: Any) -> None:
    _judge_alike(document)


def _judge_alike(document: Any) -> None:
    accepted = VALIDATOR.is_valid(document)
    try:
        decode(as_bytes(document))
    except DeliberateError as error:
        refusal = str(error)
        event("refused by both" if not accepted else "refused by the reader alone")
        assert not accepted or READER_ONLY.search(refusal), refusal
    else:
        event("accepted by both")
        assert accepted, [error.message for error in VALIDATOR.iter_errors(document)]


STAGE = ("variants", 0, "plan", "stages", 0)
FIRST = ("variants", 0, "people", 0)
ARROW = {"listener": "ines", "source": "noor", "weight": 1}
AGREEMENT = ("questions", 0, "agreement")
NINE = {"id": "levy", "text": "How fitting?", "low": 1, "high": 9}
NOBODY = {"name": "Nobody", "people": []}


@pytest.mark.parametrize(
    "document",
    [
        *(sound_without((key,)) for key in ("format", "version", "title", "questions", "variants")),
        sound_with(("colour",), 1),
        sound_with(("version",), 2),
        sound_with(("version",), True),
        sound_with(("title",), "A\n"),
        sound_with(("variants", 0, "people", 2, "id"), "noor\n"),
        sound_with(("variants", 0, "people", 2, "beliefs"), {"a key": 0.5}),
        sound_with(("ballot",), {"quorum": "1/0"}),
        sound_with(("ballot",), {"quorum": "1/2\n"}),
        sound_with(("ballot",), {"tests": [{"side": "for"}]}),
        sound_with(("ballot",), {"tests": [{"side": "for", "at_least": 0.5, "more_than": 0.5}]}),
        sound_with(AGREEMENT, [{"test": "rand-ucla"}]),
        sound_with(("questions", 0), NINE | {"agreement": [{"test": "rand-ucla", "at_most": 1}]}),
        sound_with(AGREEMENT, [{"test": "spread"}]),
        sound_with(AGREEMENT, [{"test": "spread", "at_most": 1, "low": 0}]),
        sound_with(AGREEMENT, [{"test": "share-within", "low": 0, "high": 1}]),
        sound_with((*STAGE, "speakers"), ["ines", "ines"]),
        sound_with((*STAGE, "tables"), [["ines", "ines"]]),
        sound_with((*STAGE, "pairs"), [["ines", "ines"]]),
        sound_with((*STAGE, "pairs"), [["ines", "noor"], ["ines", "noor"]]),
        sound_with((*STAGE, "pairs"), [["ines"]]),
        sound_with((*STAGE, "rounds"), 2.5),
        sound_with(("polls", 0, "after_round"), 10**25),
    ],
)
def test_both_refuse(document: Any) -> None:
    assert not VALIDATOR.is_valid(document)
    with pytest.raises(DeliberateError):
        decode(as_bytes(document))


@pytest.mark.parametrize(
    "document",
    [
        SOUND,
        sound_with((*STAGE, "rounds"), 2.0),
        sound_with(("version",), 1.0),
        SOUND | {"questions": [NINE | {"agreement": [{"test": "rand-ucla"}]}], "variants": [NOBODY], "polls": []},
        sound_with(AGREEMENT, [{"test": "share-within", "low": 0, "high": 1, "at_least": "3/4"}]),
        sound_with(("ballot",), {"quorum": None, "tests": [{"side": "for", "at_least": "000/1"}]}),
        sound_with((*STAGE, "tables"), [["ines", "tomas"], [], ["noor"]]),
        SOUND | {"variants": [NOBODY], "polls": []},
    ],
)
def test_both_accept(document: Any) -> None:
    VALIDATOR.validate(document)
    decode(as_bytes(document))


@pytest.mark.parametrize(
    "document",
    [
        sound_with((*FIRST, "beliefs"), {"dues": 0.5}),
        sound_with((*FIRST, "beliefs"), {"levy": 1.5}),
        sound_with((*FIRST, "id"), "noor"),
        sound_with(("questions", 0, "high"), -1),
        sound_with(("questions", 0), NINE | {"low": -1.7e308, "high": 1.7e308}),
        sound_with(AGREEMENT, [{"test": "share-within", "low": 1, "high": 0, "at_least": 0.5}]),
        sound_with(("ballot",), {"quorum": "3/2"}),
        sound_with(("ballot",), {"casting_vote": "zoe"}),
        sound_with(("variants", 0, "arrows", 0, "source"), "ines"),
        sound_with(("variants", 0, "arrows"), [ARROW, ARROW | {"weight": 3}]),
        sound_with((*STAGE, "tables"), [["ines"], ["ines"]]),
        sound_with((*STAGE, "pairs"), [["ines", "noor"], ["noor", "ines"]]),
        sound_with((*STAGE, "speakers"), ["zoe"]),
        sound_with(("polls", 0, "question"), "dues"),
    ],
)
def test_only_the_reader_can_see_how_parts_hang_together(document: Any) -> None:
    VALIDATOR.validate(document)
    with pytest.raises(DeliberateError, match=READER_ONLY):
        decode(as_bytes(document))


@pytest.mark.parametrize(
    "text",
    [
        json.dumps(sound_with((*STAGE, "name"), "\ud800")),
        json.dumps(sound_with(("variants", 0, "arrows", 0, "weight"), float("inf"))).replace("Infinity", "1e999"),
        json.dumps(SOUND)[:-1] + ', "title": "Again"}',
    ],
    ids=["half a surrogate pair", "outside double range", "a repeated key"],
)
def test_only_the_reader_sees_what_a_parser_has_already_lost(text: str) -> None:
    VALIDATOR.validate(json.loads(text))
    with pytest.raises(DeliberateError):
        decode(text.encode())


TEXTS = [
    "",
    "a",
    "a\n",
    "\na",
    "a\nb",
    "a\r",
    "a\tb",
    "a\x00",
    "\x1f",
    "a\x7f",
    "\x85",
    "\x9f",
    "\xa0",
    "a b",
    "Inès",
]
TEXTS += ["\u2028", "a\u2028", "\U0001f6a2", "x" * 64, "x" * 65, "A.b-c_9", "1/2", "1/2\n", "0/00", "7/0", "1/010"]
TEXTS += ["1" * 9 + "/" + "1" * 9, "1" * 10 + "/1", "1/" + "1" * 10, "-1/2", "1/2/3", "\u0661/\u0662", "1 / 2"]


@pytest.mark.parametrize(
    "kind", [Id, Line, OptionalLine, Notes, Fraction], ids=["id", "line", "optional", "notes", "fraction"]
)
def test_patterns_mean_the_same_in_python_and_in_javascript(kind: Any, qapp: QCoreApplication) -> None:
    """Qt's JavaScript engine follows ECMA-262, whose regular expressions JSON Schema uses (with the flag u)."""
    pattern = kind.__metadata__[0].pattern
    engine = QJSEngine()
    matches = engine.evaluate("(function (pattern, text) { return new RegExp(pattern, 'u').test(text) })")
    for text in TEXTS:
        in_javascript = matches.call([engine.toScriptValue(part) for part in (pattern, text)]).toBool()
        assert in_javascript == bool(re.search(pattern, text)), text
