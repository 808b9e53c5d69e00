"""The JSON Schema of scenario files, made from the same types that decode them.

``python -m deliberate.files.schema`` prints it; `resources/scenario.schema.json` is that output, held by a test.
"""

from __future__ import annotations

import json
from typing import Any

import msgspec

from deliberate.scenario.checks import AGREEMENT_KEYS, RAND_UCLA_SCALE, THRESHOLDS
from deliberate.scenario.values import Scenario

_ABOUT = (
    "One meeting for Deliberate. Beyond this schema a reader checks what no schema can say: that ids are unique and "
    "exist, that nobody listens to herself, listens twice to the same person or sits at two tables, that low is "
    "below high and beliefs lie on the scale, that fractions are at most 1, that no key stands twice and that "
    "numbers are finite."
)


def scenario_schema() -> dict[str, Any]:
    """The schema (draft 2020-12) of a scenario file, version 1."""
    made = msgspec.json.schema(Scenario)
    definitions = made["$defs"]
    for definition in definitions.values():
        # the docstring, which some versions of Python and msgspec indent and others do not
        definition["description"] = " ".join(definition["description"].split())
    _require_head(definitions["Scenario"])
    _tell_agreement_tests_apart(definitions["AgreementTest"])
    _bind_scale_of_rand_ucla(definitions["Question"])
    definitions["BallotTest"]["oneOf"] = [{"required": [threshold]} for threshold in THRESHOLDS]
    _let_people_stand_once(definitions["Stage"])
    an_id = definitions["Person"]["properties"]["id"]
    for definition, key in (("Person", "beliefs"), ("Person", "margins"), ("Poll", "beliefs")):
        definitions[definition]["properties"][key]["propertyNames"] = an_id
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "Deliberate scenario, version 1",
        "description": _ABOUT,
        **made,
    }


def schema_text() -> str:
    """The schema as the file that ships."""
    return json.dumps(scenario_schema(), indent=2, ensure_ascii=False) + "\n"


def _require_head(scenario: dict[str, Any]) -> None:
    """Values made in Python have the format and the version by default; a file must say them."""
    head = ["format", "version"]
    scenario["required"] = head + scenario["required"]
    for key in head:
        del scenario["properties"][key]["default"]


def _tell_agreement_tests_apart(test: dict[str, Any]) -> None:
    figures = {key for keys in AGREEMENT_KEYS.values() for key in keys}
    test["oneOf"] = [
        {
            "properties": {"test": {"const": name}, **dict.fromkeys(sorted(figures.difference(keys)), False)},
            "required": list(keys),
        }
        for name, keys in AGREEMENT_KEYS.items()
    ]


def _bind_scale_of_rand_ucla(question: dict[str, Any]) -> None:
    rand_ucla = {"properties": {"test": {"const": "rand-ucla"}}, "required": ["test"]}
    low, high = RAND_UCLA_SCALE
    question["if"] = {"properties": {"agreement": {"contains": rand_ucla}}, "required": ["agreement"]}
    question["then"] = {"properties": {"low": {"const": low}, "high": {"const": high}}}


def _let_people_stand_once(stage: dict[str, Any]) -> None:
    properties = stage["properties"]
    for people in (properties["tables"]["items"], properties["speakers"], properties["pairs"]):
        people["uniqueItems"] = True
    properties["pairs"]["items"]["uniqueItems"] = True


if __name__ == "__main__":
    print(schema_text(), end="")
