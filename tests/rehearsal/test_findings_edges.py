"""Knife edges, against re-running the meeting with one start after another moved."""

from __future__ import annotations

import numpy as np
import pytest
from meetings import meeting
from telling import all_told, kinds, share_rows, talk, told

from deliberate.rehearsal.results import Finding
from deliberate.scenario.values import Ballot, BallotTest, Question, Scenario

LEVY = Question("q", "Raise the levy?", 0, 100, pass_mark=50)
KEEP = np.eye(3, dtype=int).tolist()
STEP = 0.02
NEAR = 5.0  # a twentieth of the scale


def passes(rows: np.ndarray, starts: np.ndarray, rounds: int) -> bool:
    """More than half of the votes cast are for."""
    ends = np.linalg.matrix_power(rows, rounds) @ starts
    return bool((ends > 50 + 1e-10).sum() > (ends < 50 - 1e-10).sum())


def nearest_by_trying(rows: np.ndarray, starts: np.ndarray, rounds: int) -> float | None:
    """The smallest change of one start on a grid that turns the vote; None where none within reach does."""
    now = passes(rows, starts, rounds)
    for size in np.arange(STEP, NEAR + STEP / 2, STEP):
        for person in range(len(starts)):
            for change in (-size, size):
                moved = starts.copy()
                moved[person] += change
                if 0 <= moved[person] <= 100 and passes(rows, moved, rounds) != now:
                    return float(size)
    return None


def edges(scenario: Scenario) -> list[Finding]:
    return [finding for finding in all_told(scenario) if finding.kind == "knife-edge"]


@pytest.mark.parametrize("seed", range(24))
def test_the_smallest_change_is_the_one_that_trying_finds(seed: int) -> None:
    random = np.random.default_rng(seed)
    people, rounds = int(random.integers(3, 7)), int(random.integers(1, 4))
    points = random.integers(0, 8, (people, people)) + 4 * np.eye(people, dtype=int)
    starts = np.clip(50 + 12 * random.standard_normal(people), 0, 100).round(1)
    rows = share_rows(points)
    expected = nearest_by_trying(rows, starts, rounds)
    found = edges(meeting(points.tolist(), starts.tolist(), question=LEVY, plan=talk(rounds)))
    if expected is None:
        assert not found or abs(found[0].figures["change"]) > NEAR - STEP
        return
    (finding,) = found
    # The finding names a change that is written with one decimal, and the grid has steps.
    assert abs(finding.figures["change"]) == pytest.approx(expected, abs=0.1 + STEP)
    person = "abcdefg".index(finding.people[0])
    moved = starts.copy()
    moved[person] = finding.figures["turns_at"]
    assert passes(rows, moved, rounds) != passes(rows, starts, rounds)
    back = starts.copy()
    back[person] += 0.97 * finding.figures["change"] - np.copysign(0.1, finding.figures["change"])
    assert passes(rows, back, rounds) == passes(rows, starts, rounds)


def test_too_close_to_call() -> None:
    people = {"b": {"margins": {"q": 2}}, "c": {"margins": {"q": 1}}}
    finding = told(meeting(KEEP, [80, 51.5, 20], question=LEVY, people=people), "knife-edge")
    assert finding.says == "Too close to call: with b starting 1.6 lower, at 49.9 instead of 51.5, it does not pass."
    assert finding.why == (
        "The vote at the plan's end would then be 1 for, 2 against;"
        " that is within the margin of 2 given for this start."
    )
    assert finding.figures == pytest.approx({"change": -1.6, "start": 51.5, "margin": 2, "turns_at": 49.9, "also": 0})


def test_a_close_vote_beyond_the_margin() -> None:
    people = {"b": {"margins": {"q": 1}}}
    finding = told(meeting(KEEP, [80, 51.5, 20], question=LEVY, people=people), "knife-edge")
    assert finding.says.startswith("A close vote: with b starting 1.6 lower")
    assert finding.why.endswith("that is more than the margin of 1 given for this start.")


def test_others_could_turn_it_as_well() -> None:
    people = {one: {"margins": {"q": 5}} for one in "abc"}
    finding = told(meeting(KEEP, [54, 51.5, 20], question=LEVY, people=people), "knife-edge")
    assert finding.people == ("b", "a")
    assert finding.why.endswith("given for this start; a could turn it within the margin as well.")


def test_a_wide_margin_reaches_further_than_near() -> None:
    people = {"b": {"margins": {"q": 20}}}
    assert "knife-edge" not in kinds(meeting(KEEP, [80, 62, 20], question=LEVY))
    assert told(meeting(KEEP, [80, 62, 20], question=LEVY, people=people), "knife-edge").figures["turns_at"] == 49.9


def test_a_vote_at_rest() -> None:
    assert "knife-edge" not in kinds(meeting(KEEP, [80, 70, 60], question=LEVY))
    assert "knife-edge" not in kinds(meeting(KEEP, [54, 51.5, 20]))


def test_under_two_thirds_another_start_decides() -> None:
    rule = Ballot(tests=(BallotTest("for", at_least="2/3"),))
    finding = told(meeting(KEEP, [80, 47, 20], question=LEVY, ballot=rule), "knife-edge")
    assert finding.says == "Too close to call: with b starting 3.1 higher, at 50.1 instead of 47, it passes."


@pytest.mark.parametrize(
    ("low", "high", "told_as"),
    [
        (0, 0.001, "0.000003 lower, at 0.000499 instead of 0.000502"),
        (0, 1000, "3 lower, at 499 instead of 502"),
        (-500_000, 500_000, "2,001 lower, at -1 instead of 2,000"),
    ],
)
def test_digits_fit_the_scale(low: float, high: float, told_as: str) -> None:
    width = high - low
    question = Question("q", "Raise the levy?", low, high, pass_mark=low + width / 2)
    starts = [low + part * width for part in (0.8, 0.502, 0.2)]
    assert told_as in told(meeting(KEEP, starts, question=question), "knife-edge").says


def test_a_start_that_is_not_known_has_no_margin_to_be_judged_by() -> None:
    """One for, one against, and nobody hears anybody: the one who is not known stands at the mark."""
    (finding,) = edges(meeting(KEEP, [80, None, 20], question=LEVY, plan=talk(1)))
    assert finding.people[0] == "b"
    assert "this start is not known and taken to be in the middle" in finding.why
