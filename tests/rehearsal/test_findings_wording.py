"""What holds for the words of every finding, whatever the meeting."""

from __future__ import annotations

import math
import re

from hypothesis import given, settings
from meetings import meetings
from strategies import scenarios

from deliberate.rehearsal.findings import findings
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import Finding, Rehearsal
from deliberate.scenario.values import Scenario

# Words about arrangements only: nothing about character, nothing about what people will do.
NEVER_SAID = re.compile(
    r"stubborn|\bblock|\bweak|\bstrong|forecast|predict|\bwill\b|\bshould\b|\bwins?\b|\bloses?\b|resist|refus|dominat",
    re.IGNORECASE,
)
NO_FIGURE = re.compile(r"\bnan\b|\binf\b|\bNone\b(?! of \d)|\bTrue\b|\bFalse\b|\de[+-]\d")
ONE_OF_MANY = re.compile(
    r"(?<![\d.,])1 (rounds|people|arrows|votes|views|groups|others|starts|parts|sides|ratings)\b"
)
MANY_OF_ONE = re.compile(
    r"(?<![\d.,])(?!1 )[\d.,]+ (round|person|arrow|vote|view|group|other|start|part|side|rating)\b"
)
POINTS_BACK = re.compile(r"^(it|they|these|this|that|she|he|then)\b", re.IGNORECASE)


def found_in(scenario: Scenario) -> list[tuple[Rehearsal, Finding]]:
    return [
        (rehearsal, finding)
        for variant in scenario.variants
        for question in scenario.questions
        for rehearsal in [rehearse(scenario, variant.name, question.id)]
        for finding in findings(scenario, rehearsal)
    ]


def is_sound(rehearsal: Rehearsal, finding: Finding) -> None:
    """Ids are known, figures are numbers, and words are there."""
    known = set(rehearsal.people)
    assert set(finding.people) <= known
    assert len(set(finding.people)) == len(finding.people)
    assert all(set(group) <= known for group in finding.groups)
    assert all(group for group in finding.groups)
    assert all(set(arrow) <= known for arrow in finding.arrows)
    assert all(type(figure) in (int, float) and math.isfinite(figure) for figure in finding.figures.values())
    for text in (finding.says, finding.why):
        assert text.endswith(".")
        assert not text.endswith("..")
        assert "\n" not in text


def reads_well(finding: Finding) -> None:
    """Plain sentences in which the numbers agree with their nouns."""
    for text in (finding.says, finding.why):
        assert text[0].isupper() or text[0].isdigit() or re.match(r"^[a-p]\b", text), text
        assert not NEVER_SAID.search(text), text
        assert not NO_FIGURE.search(text), text
        assert not ONE_OF_MANY.search(text), text
        assert not MANY_OF_ONE.search(text.replace("every", "")), text
        assert "  " not in text, text
        assert not re.search(r" [,;.]", text), text
    assert not POINTS_BACK.match(finding.says), finding.says


@settings(max_examples=60)
@given(scenarios())
def test_findings_of_any_meeting_are_sound(scenario: Scenario) -> None:
    for rehearsal, finding in found_in(scenario):
        is_sound(rehearsal, finding)


@given(meetings())
def test_findings_of_small_meetings_read_well(scenario: Scenario) -> None:
    for rehearsal, finding in found_in(scenario):
        is_sound(rehearsal, finding)
        reads_well(finding)
