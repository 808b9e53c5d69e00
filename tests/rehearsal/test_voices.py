"""The voices of the listening ring against the share matrices that the rounds are played with."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from meetings import meeting, meetings
from strategies import scenarios

from deliberate.dynamics.shares import shares
from deliberate.rehearsal.assemble import assemble
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.voices import Voices, voices
from deliberate.scenario.values import Plan, Scenario, Stage, Variant


def voices_of(points, stage: Stage | None = None, **asked) -> Voices:
    """The voices of a meeting with one stage."""
    plan = Plan((stage or Stage("Plenary", 1),))
    (variant,) = meeting(points, [50] * len(points), plan=plan, **asked).variants
    return voices(variant, 0)


def by_pair(heard: Voices) -> dict[tuple[int, int], float]:
    ends = zip(heard.listener.tolist(), heard.source.tolist(), strict=True)
    return dict(zip(ends, heard.share.tolist(), strict=True))


def as_matrix(heard: Voices) -> np.ndarray:
    """(n, n) what each person's next belief takes from whose present one."""
    matrix = np.diag(heard.own)
    np.add.at(matrix, (heard.listener, heard.source), heard.share)
    return matrix


def agree_with_the_dynamics(scenario: Scenario, variant: Variant) -> None:
    process = assemble(variant, scenario.questions[0]).process
    for number, block in enumerate(process.blocks):
        heard = voices(variant, number)
        expected = shares(process.network, block.heard, block.unheard).as_full()
        assert as_matrix(heard) == pytest.approx((1 - process.firmness)[:, None] * expected, rel=1e-12, abs=1e-15)
        assert heard.firm == pytest.approx(process.firmness)
        assert heard.firm + as_matrix(heard).sum(axis=1) == pytest.approx(np.ones(len(variant.people)))


@given(meetings())
def test_voices_are_the_shares_of_the_rounds(scenario: Scenario) -> None:
    agree_with_the_dynamics(scenario, scenario.variants[0])


@settings(max_examples=40)
@given(scenarios())
def test_voices_are_the_shares_whatever_the_weights(scenario: Scenario) -> None:
    for variant in scenario.variants:
        agree_with_the_dynamics(scenario, variant)


@given(meetings())
def test_the_mix_of_the_ring_is_the_next_belief(scenario: Scenario) -> None:
    question = scenario.questions[0]
    if question.hearing_range is not None:
        return
    variant, rehearsal = scenario.variants[0], rehearse(scenario)
    now, heard = rehearsal.rounds[0], voices(scenario.variants[0], 0)
    assert len(variant.people) == len(now)
    assert as_matrix(heard) @ now + heard.firm * now == pytest.approx(rehearsal.rounds[1], abs=1e-9)


def test_points_are_shares_of_the_own_sum() -> None:
    heard = voices_of([[40, 60, 0], [25, 50, 25], [0, 0, 7]])
    assert heard.own == pytest.approx([0.4, 0.5, 1])
    assert by_pair(heard) == pytest.approx({(0, 1): 0.6, (1, 0): 0.25, (1, 2): 0.25})


def test_firmness_takes_its_part_first() -> None:
    heard = voices_of([[40, 60], [100, 0]], people={"a": {"firmness": 0.5}, "b": {"firmness": 1}})
    assert heard.firm == pytest.approx([0.5, 1])
    assert heard.own == pytest.approx([0.2, 0])
    assert by_pair(heard) == pytest.approx({(0, 1): 0.3, (1, 0): 0})


def test_nobody_to_hear_is_the_own_view() -> None:
    assert voices_of([[0, 0], [1, 0]]).own == pytest.approx([1, 0])


@pytest.mark.parametrize(("unheard", "own", "share"), [("own", 0.75, 0.25), ("rescale", 0.5, 0.5)])
def test_what_is_unheard_goes_where_the_stage_says(unheard, own, share) -> None:
    points = [[25, 25, 50], [0, 100, 0], [0, 0, 100]]
    stage = Stage("Tables", 1, "tables", unheard=unheard, tables=(("a", "b"), ("c",)))
    heard = voices_of(points, stage)
    assert heard.own == pytest.approx([own, 1, 1])
    assert by_pair(heard) == pytest.approx({(0, 1): share})
    absent = voices_of(points, Stage("Plenary", 1, unheard=unheard), people={"c": {"present": False}})
    assert by_pair(absent) == pytest.approx({(0, 1): share})


@pytest.mark.parametrize(
    ("stage", "pairs"),
    [
        (Stage("All", 1), {(0, 1), (0, 2), (1, 0), (1, 2), (2, 0), (2, 1)}),
        (Stage("Silence", 1, "silence"), set()),
        (Stage("Panel", 1, "panel", speakers=("b",)), {(0, 1), (2, 1)}),
        (Stage("Pairs", 1, "pairs", pairs=(("a", "c"),)), {(0, 2), (2, 0)}),
        (Stage("Tables", 1, "tables", tables=(("a", "b"),)), {(0, 1), (1, 0)}),
    ],
    ids=lambda stage: stage.setting if isinstance(stage, Stage) else "",
)
def test_a_setting_lets_through_what_it_says(stage, pairs) -> None:
    heard = voices_of([[1] * 3] * 3, stage)
    assert set(by_pair(heard)) == pairs


def test_the_largest_and_the_smallest_weights_there_are() -> None:
    assert voices_of([[1.5e308, 1.5e308], [5e-324, 5e-324]]).own == pytest.approx([0.5, 0.5])


def test_nobody() -> None:
    assert len(voices_of([]).own) == 0
