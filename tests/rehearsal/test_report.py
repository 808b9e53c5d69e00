import math
from typing import Any

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st
from meetings import meeting, meetings
from strategies import scenarios

from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.report import to_json
from deliberate.rehearsal.summary import CAUTION, summary
from deliberate.scenario.values import AgreementTest, Question

NUMBER = (int, float)
KEYS = {
    "format": str,
    "version": int,
    "variant": str,
    "question": str,
    "people": list,
    "rounds": list,
    "spread": list,
    "settles_from_any_start": bool,
    "settles": bool,
    "consensus_from_any_start": bool,
    "consensus": bool,
    "limit": (list, type(None)),
    "cycle": (dict, type(None)),
    "long_run_average": list,
    "closed_groups": list,
    "outside": list,
    "influence": dict,
    "effective_voices": NUMBER,
    "pace": dict,
    "ballot": (list, type(None)),
    "ballot_at_limit": (dict, type(None)),
    "agreement": list,
    "agreement_at_limit": (list, type(None)),
    "unknown_starts": list,
    "notes": list,
}


def written(scenario, **asked) -> dict[str, Any]:
    """What a reader of the JSON gets."""
    return msgspec.json.decode(msgspec.json.encode(to_json(rehearse(scenario, **asked))))


def numbers_in(value):
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list):
        return [number for one in value for number in numbers_in(one)]
    return [value] if isinstance(value, float | int) and not isinstance(value, bool) else []


@given(meetings())
def test_keys_types_and_lengths_are_as_promised(scenario):
    data = written(scenario, rounds=4)
    people = [person.id for person in scenario.variants[0].people]
    assert list(data) == list(KEYS)
    for key, kind in KEYS.items():
        assert isinstance(data[key], kind), key
    assert (data["format"], data["version"]) == ("deliberate-rehearsal", 1)
    assert data["people"] == people
    assert [len(beliefs) for beliefs in data["rounds"]] == [len(people)] * 5
    assert len(data["spread"]) == len(data["agreement"]) == 5
    assert list(data["influence"]) == people
    assert list(data["pace"]) == ["rate", "rounds_to_agree"]
    assert (data["limit"] is None) == (not data["settles"])
    if data["cycle"] is not None:
        assert list(data["cycle"]) == ["period", "beliefs"]
        assert len(data["cycle"]["beliefs"]) == data["cycle"]["period"]
    for group in data["closed_groups"]:
        assert list(group) == ["people", "period", "influence", "anchored"]
    tallies = [*(data["ballot"] or []), *([data["ballot_at_limit"]] if data["ballot_at_limit"] else [])]
    for tally in tallies:
        assert list(tally) == ["for", "against", "abstain", "objecting", "quorum_met", "passes"]
    if data["ballot"] is None:
        assert data["ballot_at_limit"] is None
    else:
        assert len(data["ballot"]) == 5
        assert (data["ballot_at_limit"] is None) == (data["limit"] is None)
    assert (data["agreement_at_limit"] is None) == (data["limit"] is None)
    for verdicts in data["agreement"]:
        assert [list(one) for one in verdicts] == [["test", "verdict", "figure"]] * 2


@given(meetings())
def test_every_number_survives_the_writing_and_is_finite(scenario):
    rehearsal = rehearse(scenario, rounds=4)
    data = msgspec.json.decode(msgspec.json.encode(to_json(rehearsal)))
    assert all(math.isfinite(number) for number in numbers_in(data))
    assert data["rounds"] == rehearsal.rounds.tolist()
    assert data["long_run_average"] == rehearsal.long_run_average.tolist()
    assert data["pace"]["rate"] == rehearsal.rate


def test_a_question_without_agreement_tests_has_empty_lists_for_them():
    data = written(meeting([[1, 1], [1, 1]], [0, 1]), rounds=2)
    assert data["agreement"] == [[], [], []]
    assert data["agreement_at_limit"] == []


def test_verdicts_of_agreement_tests():
    question = Question("q", "t", 0, 1, agreement=(AgreementTest("spread", at_most=0.1),))
    data = written(meeting([[1, 1], [1, 1]], [0, 1], question=question), rounds=1)
    assert data["agreement"] == [
        [{"test": "spread", "verdict": "neither", "figure": 1}],
        [{"test": "spread", "verdict": "agreement", "figure": 0}],
    ]


@pytest.mark.parametrize("beliefs", [[80, 20], [None, None]])
def test_unknown_starts_are_listed(beliefs):
    data = written(meeting([[1, 1], [1, 1]], beliefs))
    assert data["unknown_starts"] == [one for one, belief in zip("ab", beliefs, strict=True) if belief is None]


def test_nobody_at_all_can_be_written():
    data = written(meeting([], []), rounds=1)
    assert data["rounds"] == [[], []]
    assert data["spread"] == [0, 0]
    assert data["influence"] == {}


@given(scenarios(), st.data())
def test_any_valid_meeting_gives_finite_numbers_and_a_readable_page(scenario, data):
    """Weights from 1e-300 to 1e300, scales from 1 to millions, any settings."""
    variant = data.draw(st.sampled_from([variant.name for variant in scenario.variants]))
    question = data.draw(st.sampled_from([question.id for question in scenario.questions]))
    rehearsal = rehearse(scenario, variant, question, rounds=data.draw(st.integers(0, 9)))
    assert all(math.isfinite(number) for number in numbers_in(to_json(rehearsal)))
    assert rehearsal.influence.sum() == pytest.approx(1 if rehearsal.people else 0, rel=1e-12)
    page = summary(scenario, rehearsal, ())
    assert page.endswith(f"{CAUTION}\n")
    assert all(len(line) <= 80 for line in page.splitlines() if line.isascii())
