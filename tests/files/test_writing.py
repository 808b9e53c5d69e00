"""What a scenario file looks like, and that nothing is lost in it."""

from __future__ import annotations

import json

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st
from strategies import scenarios

from deliberate.errors import DeliberateError
from deliberate.files import decode, demo_scenarios, encode, read, write
from deliberate.scenario.values import (
    AgreementTest,
    Arrow,
    FrozenDict,
    Person,
    Plan,
    Poll,
    Question,
    Scenario,
    Stage,
    Variant,
)

HARBOUR = Scenario(
    title="Fähre und Größe",
    notes="Two lines\nof notes",
    questions=(
        Question(
            id="levy",
            text="Raise the harbour levy?",
            low=0,
            high=100,
            pass_mark=50,
            agreement=(AgreementTest(test="spread", at_most=0.5),),
        ),
    ),
    variants=(
        Variant(
            name="As it stands",
            people=(
                Person(id="ines", name="Inès 港", own_weight=25, beliefs=FrozenDict(levy=70), firmness=0.25),
                Person(id="tomas", present=False),
            ),
            arrows=(Arrow("ines", "tomas", 75), Arrow("tomas", "ines", 12.5, "stated")),
            plan=Plan(
                stages=(Stage(), Stage(name="Tables", rounds=3, setting="tables", tables=(("ines", "tomas"),)))
            ),
        ),
    ),
    polls=(Poll(question="levy", after_round=2, beliefs=FrozenDict(ines=60)),),
)

AS_WRITTEN = """\
{
  "format": "deliberate-scenario",
  "version": 1,
  "title": "Fähre und Größe",
  "notes": "Two lines\\nof notes",
  "questions": [
    {
      "id": "levy",
      "text": "Raise the harbour levy?",
      "low": 0,
      "high": 100,
      "pass_mark": 50,
      "agreement": [
        {"test": "spread", "at_most": 0.5}
      ]
    }
  ],
  "ballot": {
    "name": "Simple majority",
    "quorum": "1/2",
    "tests": [
      {"side": "for", "count": "ballots", "of": "cast", "more_than": "1/2"}
    ]
  },
  "variants": [
    {
      "name": "As it stands",
      "people": [
        {"id": "ines", "name": "Inès 港", "own_weight": 25, "firmness": 0.25, "beliefs": {"levy": 70}},
        {"id": "tomas", "present": false, "own_weight": 1}
      ],
      "arrows": [
        {"listener": "ines", "source": "tomas", "weight": 75},
        {"listener": "tomas", "source": "ines", "weight": 12.5, "basis": "stated"}
      ],
      "plan": {
        "stages": [
          {"name": "Plenary", "rounds": 12, "setting": "plenary"},
          {"name": "Tables", "rounds": 3, "setting": "tables", "tables": [["ines", "tomas"]]}
        ],
        "afterwards": "last"
      }
    }
  ],
  "polls": [
    {"question": "levy", "after_round": 2, "beliefs": {"ines": 60}}
  ]
}
"""


def test_a_file_is_laid_out_for_people() -> None:
    assert encode(HARBOUR).decode() == AS_WRITTEN


def test_people_come_even_when_there_are_none() -> None:
    empty = Scenario(title="A", questions=HARBOUR.questions, variants=(Variant(name="A", people=()),))
    assert '"people": [],' in encode(empty).decode()
    assert decode(encode(empty)) == empty


@given(scenarios())
def test_writing_what_was_read_gives_the_same_bytes(scenario: Scenario) -> None:
    data = encode(scenario)
    assert encode(decode(data)) == data


def test_the_demos_are_laid_out_as_they_would_be_saved() -> None:
    assert demo_scenarios()
    for path in demo_scenarios():
        assert encode(read(path)) == path.read_bytes(), path.name


@given(scenarios(), st.integers(0, 2))
def test_one_changed_person_is_one_changed_line(scenario: Scenario, which: int) -> None:
    variant = scenario.variants[which % len(scenario.variants)]
    if not variant.people:
        return
    changed = msgspec.structs.replace(variant.people[0], role=variant.people[0].role + "!")
    people = (changed, *variant.people[1:])
    variants = tuple(
        msgspec.structs.replace(variant, people=people) if each is variant else each for each in scenario.variants
    )
    before = encode(scenario).splitlines()
    after = encode(msgspec.structs.replace(scenario, variants=variants)).splitlines()
    assert len(before) == len(after)
    assert sum(old != new for old, new in zip(before, after, strict=True)) == 1


@given(st.floats(min_value=0, exclude_min=True, allow_infinity=False))
def test_weights_keep_every_bit(weight: float) -> None:
    variant = msgspec.structs.replace(HARBOUR.variants[0], arrows=(Arrow("ines", "tomas", weight),))
    data = encode(msgspec.structs.replace(HARBOUR, variants=(variant,)))
    assert decode(data).variants[0].arrows[0].weight == weight
    assert json.loads(data)["variants"][0]["arrows"][0]["weight"] == weight


@pytest.mark.parametrize(
    ("weight", "digits"),
    [(2.0, "2"), (0.1, "0.1"), (1e15, "1000000000000000"), (1e300, "1e300"), (5e-324, "5e-324"), (2.5, "2.5")],
)
def test_whole_numbers_are_written_without_a_point(weight: float, digits: str) -> None:
    variant = msgspec.structs.replace(HARBOUR.variants[0], arrows=(Arrow("ines", "tomas", weight),))
    assert f'"weight": {digits}}}' in encode(msgspec.structs.replace(HARBOUR, variants=(variant,))).decode()


def test_what_does_not_fit_is_not_written(tmp_path) -> None:
    path = tmp_path / "levy.deliberate.json"
    write(HARBOUR, path)
    stray = msgspec.structs.replace(HARBOUR.variants[0], arrows=(Arrow("ines", "zoe", 1),))
    with pytest.raises(DeliberateError, match=r"variants\[0\]\.arrows\[0\]\.source"):
        write(msgspec.structs.replace(HARBOUR, variants=(stray,)), path)
    assert path.read_text(encoding="utf-8") == AS_WRITTEN
    assert read(path) == HARBOUR
