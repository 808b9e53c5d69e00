"""The rules of a scenario that hold for values built in Python: each refusal with its place and its reason."""

from __future__ import annotations

import re
from typing import Any

import msgspec
import numpy as np
import pytest
from hypothesis import given
from strategies import scenarios

from deliberate.errors import DeliberateError
from deliberate.scenario.checks import validate
from deliberate.scenario.values import (
    AgreementTest,
    Arrow,
    Ballot,
    BallotTest,
    FrozenDict,
    Person,
    Plan,
    Poll,
    Question,
    Scenario,
    Stage,
    Variant,
)

LEVY = Question(id="levy", text="Raise the harbour levy?", low=0, high=1)
NINE = Question(id="fit", text="How fitting?", low=1, high=9)
PEOPLE = (Person(id="ines"), Person(id="tomas"), Person(id="noor"))


def meeting(**changes: Any) -> Scenario:
    """A small valid meeting with `changes`; those of the one variant go by `people`, `arrows` and `stages`."""
    stages = changes.pop("stages", (Stage(),))
    inner = {"name": "As it stands", "people": PEOPLE, "plan": Plan(stages=stages)}
    inner |= {key: changes.pop(key) for key in ("people", "arrows", "notes_of_variant") if key in changes}
    return Scenario(**{"title": "Harbour levy", "questions": (LEVY,), "variants": (Variant(**inner),)} | changes)


def asked(**changes: Any) -> Scenario:
    return meeting(questions=(msgspec.structs.replace(LEVY, **changes),))


def fit(*agreement: AgreementTest) -> Scenario:
    return meeting(questions=(msgspec.structs.replace(NINE, agreement=agreement),))


def person(**changes: Any) -> Scenario:
    return meeting(people=(Person(id="ines", **changes),))


def arrows(*ends: tuple[Any, ...]) -> Scenario:
    return meeting(arrows=tuple(Arrow(*end) for end in ends))


def stage(**changes: Any) -> Scenario:
    return meeting(stages=(Stage(**changes),))


def ballot(**changes: Any) -> Scenario:
    return meeting(ballot=Ballot(**changes))


def poll(**changes: Any) -> Scenario:
    return meeting(polls=(Poll(**{"question": "levy", "after_round": 2} | changes),))


ONE_OF = "must have exactly one of more_than, at_least, at_most or less_than"

REFUSED: list[tuple[Scenario, str]] = [
    # questions
    (meeting(questions=()), "questions: must have at least 1, is empty"),
    (meeting(questions=(LEVY, LEVY)), 'questions[1].id: "levy" is taken by questions[0].id'),
    (asked(low=1.0), "questions[0].high: must be more than low (1), is 1"),
    (asked(low=2, high=-2.5), "questions[0].high: must be more than low (2), is -2.5"),
    (
        asked(low=-1.7e308, high=1.7e308),
        "questions[0].high: must lie closer to low: the width of the scale is outside double range",
    ),
    (
        asked(low=0, high=1e-300, pass_mark=None),
        "questions[0].high: must lie further from low: parts of the scale are outside double range",
    ),
    (asked(pass_mark=1.5), 'questions[0].pass_mark: must lie on the scale of "levy", from 0 to 1, is 1.5'),
    (asked(undecided=-0.1), "questions[0].undecided: must be 0 or more, is -0.1"),
    (asked(hearing_range=-1), "questions[0].hearing_range: must be 0 or more, is -1"),
    (asked(truth=float("nan")), "questions[0].truth: must be a number, is NaN"),
    (
        asked(objection_mark=float("inf")),
        "questions[0].objection_mark: must be a number within double range, which ends at about 1.8e308",
    ),
    (asked(text="A\nB"), 'questions[0].text: must be one line of text without control characters, is "A\\nB"'),
    # agreement
    (
        asked(agreement=(AgreementTest(test="rand-ucla"),)),
        "questions[0].agreement[0].test: a rand-ucla test needs a scale from 1 to 9, this one goes from 0 to 1",
    ),
    (
        fit(AgreementTest(test="rand-ucla", at_most=1)),
        "questions[0].agreement[0].at_most: does not belong to a rand-ucla test, which takes no figures",
    ),
    (
        fit(AgreementTest(test="rand-ucla"), AgreementTest(test="share-within", low=7, high=9)),
        "questions[0].agreement[1].at_least: is missing, a share-within test takes low, high and at_least",
    ),
    (
        fit(AgreementTest(test="share-within", low=9, high=7, at_least=0.5)),
        "questions[0].agreement[0].high: must not be less than low (9), is 7",
    ),
    (
        fit(AgreementTest(test="share-within", low=7, high=9, at_least="4/3")),
        'questions[0].agreement[0].at_least: must be between 0 and 1, is "4/3"',
    ),
    (
        fit(AgreementTest(test="spread", at_most=1, low=1)),
        "questions[0].agreement[0].low: does not belong to a spread test, which takes at_most",
    ),
    (
        fit(AgreementTest(test="quartile-range")),
        "questions[0].agreement[0].at_most: is missing, a quartile-range test takes at_most",
    ),
    # variants and people
    (meeting(variants=()), "variants: must have at least 1, is empty"),
    (
        meeting(variants=(Variant(name="A", people=()), Variant(name="A", people=()))),
        'variants[1].name: "A" is taken by variants[0].name',
    ),
    (
        meeting(people=(*PEOPLE, Person(id="ines"))),
        'variants[0].people[3].id: "ines" is taken by variants[0].people[0].id',
    ),
    (
        meeting(people=(Person(id="Inès"),)),
        'variants[0].people[0].id: must be an id of 1 to 64 of A-Z, a-z, 0-9, _, . and -, is "Inès"',
    ),
    (
        meeting(people=(Person(id="ines\n"),)),
        'variants[0].people[0].id: must be an id of 1 to 64 of A-Z, a-z, 0-9, _, . and -, is "ines\\n"',
    ),
    (person(name=""), "variants[0].people[0].name: must not be empty"),
    (person(name="x" * 201), "variants[0].people[0].name: must have at most 200 characters, has 201"),
    (
        person(name="a\ud800"),
        'variants[0].people[0].name: must be text without half a surrogate pair, is "a\\ud800"',
    ),
    (person(own_weight=-1), "variants[0].people[0].own_weight: must be 0 or more, is -1"),
    (person(own_weight=True), "variants[0].people[0].own_weight: must be a number, is true"),
    (
        person(own_weight=10**400),
        "variants[0].people[0].own_weight: must be a number within double range, which ends at about 1.8e308",
    ),
    (person(firmness=1.01), "variants[0].people[0].firmness: must be between 0 and 1, is 1.01"),
    (person(firmness=None), "variants[0].people[0].firmness: must be a number between 0 and 1, is null"),
    (person(ballots=float("nan")), "variants[0].people[0].ballots: must be a number, is NaN"),
    (person(present=1), "variants[0].people[0].present: must be true or false, is 1"),
    (person(x=float("nan")), "variants[0].people[0].x: must be a number, is NaN"),
    (person(y="left"), 'variants[0].people[0].y: must be a number or null, is "left"'),
    (person(x=1j), "variants[0].people[0].x: must be a number or null, is a complex"),
    (
        person(beliefs={"levy": 1.5}),
        'variants[0].people[0].beliefs.levy: must lie on the scale of "levy", from 0 to 1, is 1.5',
    ),
    (
        person(beliefs={"sea wall": 0.5}),
        'variants[0].people[0].beliefs["sea wall"]: "sea wall" is not the id of a question; known: "levy"',
    ),
    (person(beliefs={1: 0.5}), "variants[0].people[0].beliefs[1]: must be text, is 1"),
    (person(margins={"levy": -0.1}), "variants[0].people[0].margins.levy: must be 0 or more, is -0.1"),
    (
        person(margins={"dues": 0.1}),
        'variants[0].people[0].margins.dues: "dues" is not the id of a question; known: "levy"',
    ),
    # arrows
    (arrows(("ines", "tomas", -2)), "variants[0].arrows[0].weight: must be more than 0, is -2"),
    (arrows(("ines", "tomas", 0.0)), "variants[0].arrows[0].weight: must be more than 0, is 0"),
    (arrows(("ines", "tomas", float("nan"))), "variants[0].arrows[0].weight: must be a number more than 0, is NaN"),
    (
        arrows(("ines", "tomas", float("inf"))),
        "variants[0].arrows[0].weight: must be a number within double range, which ends at about 1.8e308",
    ),
    (
        arrows(("ines", "tomas", 1, "hunch")),
        'variants[0].arrows[0].basis: must be "guess", "observed" or "stated", is "hunch"',
    ),
    (
        arrows(("ines", "tomas", 1), ("ines", "zoe", 1)),
        'variants[0].arrows[1].source: "zoe" is not the id of a person in this variant',
    ),
    (
        arrows(("zoe", "ines", 1)),
        'variants[0].arrows[0].listener: "zoe" is not the id of a person in this variant',
    ),
    (
        arrows(("ines", "ines", 1)),
        "variants[0].arrows[0].source: must be somebody else than the listener; the own view counts by own_weight",
    ),
    (
        arrows(("ines", "tomas", 1), ("tomas", "ines", 1), ("ines", "tomas", 2)),
        'variants[0].arrows[2]: "ines" already listens to "tomas" in variants[0].arrows[0]',
    ),
    # the plan
    (meeting(stages=()), "variants[0].plan.stages: must have at least 1, is empty"),
    (meeting(stages=(Stage(),) * 201), "variants[0].plan.stages: must have at most 200, has 201"),
    (stage(rounds=0), "variants[0].plan.stages[0].rounds: must be between 1 and 10000, is 0"),
    (stage(rounds=2.5), "variants[0].plan.stages[0].rounds: must be a whole number, is 2.5"),
    (
        stage(setting="circle"),
        'variants[0].plan.stages[0].setting: must be "pairs", "panel", "plenary", "silence" or "tables", is "circle"',
    ),
    (
        stage(tables=(("ines",), ("zoe",))),
        'variants[0].plan.stages[0].tables[1][0]: "zoe" is not the id of a person in this variant',
    ),
    (
        stage(tables=(("ines", "tomas"), ("noor", "ines"))),
        'variants[0].plan.stages[0].tables[1][1]: "ines" already sits at variants[0].plan.stages[0].tables[0][0]',
    ),
    (
        stage(speakers=("ines", "zoe")),
        'variants[0].plan.stages[0].speakers[1]: "zoe" is not the id of a person in this variant',
    ),
    (
        stage(speakers=("ines", "noor", "ines")),
        'variants[0].plan.stages[0].speakers[2]: "ines" is already variants[0].plan.stages[0].speakers[0]',
    ),
    (stage(pairs=(("ines",),)), "variants[0].plan.stages[0].pairs[0]: must be a list of 2, has 1"),
    (
        stage(pairs=(("ines", "zoe"),)),
        'variants[0].plan.stages[0].pairs[0][1]: "zoe" is not the id of a person in this variant',
    ),
    (stage(pairs=(("ines", "ines"),)), 'variants[0].plan.stages[0].pairs[0]: must be two people, is "ines" twice'),
    (
        stage(pairs=(("ines", "noor"), ("noor", "ines"))),
        'variants[0].plan.stages[0].pairs[1]: "noor" and "ines" are already variants[0].plan.stages[0].pairs[0]',
    ),
    # the ballot
    (ballot(quorum="3/2"), 'ballot.quorum: must be between 0 and 1, is "3/2"'),
    (
        ballot(quorum="1/0"),
        'ballot.quorum: must be a fraction such as "2/3", is "1/0"',
    ),
    (ballot(quorum=1.5), "ballot.quorum: must be between 0 and 1, is 1.5"),
    (ballot(casting_vote="zoe"), 'ballot.casting_vote: "zoe" is not the id of a person in any variant'),
    (ballot(tests=(BallotTest(side="for"),)), f"ballot.tests[0]: {ONE_OF}, has none"),
    (
        ballot(tests=(BallotTest(side="for", at_least=0.5), BallotTest(side="for", at_least=0.5, at_most=1))),
        f"ballot.tests[1]: {ONE_OF}, has at_least and at_most",
    ),
    (
        ballot(tests=(BallotTest(side="against", less_than="5/4"),)),
        'ballot.tests[0].less_than: must be between 0 and 1, is "5/4"',
    ),
    # polls
    (poll(question="dues"), 'polls[0].question: "dues" is not the id of a question; known: "levy"'),
    (poll(after_round=-1), "polls[0].after_round: must be between 0 and 9007199254740991, is -1"),
    (poll(beliefs={"zoe": 0.5}), 'polls[0].beliefs.zoe: "zoe" is not the id of a person in any variant'),
    (
        poll(beliefs={"ines": 7}),
        'polls[0].beliefs.ines: must lie on the scale of "levy", from 0 to 1, is 7',
    ),
    # the whole
    (meeting(title=""), "title: must not be empty"),
    (
        meeting(notes="\x07"),
        'notes: must be text without control characters other than tabs and line breaks, is "\\u0007"',
    ),
    (meeting(format="sketch"), 'format: must be "deliberate-scenario", is "sketch"'),
    (meeting(version=2), "version: must be 1, is 2"),
    (
        meeting(polls=({"question": "levy", "after_round": 1, "colour": 2},)),
        "polls[0].colour: is not a known key; known here are question, after_round and beliefs",
    ),
]


@pytest.mark.parametrize(("scenario", "message"), REFUSED, ids=[message[:60] for _, message in REFUSED])
def test_refusals_name_place_and_reason(scenario: Scenario, message: str) -> None:
    with pytest.raises(DeliberateError) as refusal:
        validate(scenario)
    assert str(refusal.value) == message


@pytest.mark.parametrize(
    "scenario",
    [
        meeting(),
        meeting(people=()),
        asked(pass_mark=1.0, objection_mark=-7, truth=99),
        fit(AgreementTest(test="rand-ucla"), AgreementTest(test="share-within", low=7, high=7, at_least="3/4")),
        stage(setting="silence", tables=(("ines",), ()), speakers=("noor",)),
        stage(setting="pairs", pairs=(("ines", "noor"), ("noor", "tomas"))),
        ballot(quorum=None, tests=(), casting_vote="tomas"),
        ballot(quorum="1000/1000"),
        poll(beliefs={"ines": 1}),
        meeting(notes="Room 3\n\tbring name cards\n"),
        person(name="Ines \U0001f6a2\u2028"),
    ],
)
def test_what_fits_comes_back_itself(scenario: Scenario) -> None:
    assert validate(scenario) is scenario


def test_the_casting_vote_and_polls_may_name_somebody_of_another_variant() -> None:
    both = (Variant(name="A", people=PEOPLE), Variant(name="B", people=(Person(id="zoe"),)))
    named = Poll(question="levy", after_round=0, beliefs=FrozenDict(zoe=0.5, ines=0.5))
    scenario = meeting(variants=both, ballot=Ballot(casting_vote="zoe"), polls=(named,))
    assert validate(scenario) is scenario


@given(scenarios())
def test_valid_meetings_come_back_themselves(scenario: Scenario) -> None:
    assert validate(scenario) is scenario


def test_numbers_of_numpy_and_lists_come_back_as_plain_values() -> None:
    given_people = [
        Person(id="ines", x=np.float64(0.5), own_weight=np.float32(2), beliefs={"levy": np.float64(0.25)})
    ]
    checked = validate(meeting(people=given_people, stages=[Stage(rounds=np.int64(3)), Stage(rounds=4.0)]))
    assert checked == meeting(
        people=(Person(id="ines", x=0.5, own_weight=2.0, beliefs={"levy": 0.25}),),
        stages=(Stage(rounds=3), Stage(rounds=4)),
    )
    assert type(checked.variants[0].people[0].x) is float
    assert type(checked.variants[0].plan.stages[1].rounds) is int


def test_something_that_holds_itself_is_refused() -> None:
    circle: list[Any] = []
    circle.append(circle)
    with pytest.raises(DeliberateError, match="holds itself"):
        validate(meeting(people=circle))


def test_something_else_than_a_meeting_is_refused() -> None:
    with pytest.raises(DeliberateError, match=re.escape("must be an object, is 5")):
        validate(5)  # type: ignore[arg-type]


@pytest.mark.parametrize("number", [np.float64("nan"), float("nan"), float("inf"), -np.float32("inf"), 10**309])
@pytest.mark.parametrize("key", ["x", "y", "own_weight", "firmness", "ballots"])
def test_no_number_of_a_person_may_be_endless_or_none_at_all(key: str, number: float) -> None:
    with pytest.raises(DeliberateError) as refusal:
        validate(person(**{key: number}))
    assert refusal.value.where == f"variants[0].people[0].{key}"
