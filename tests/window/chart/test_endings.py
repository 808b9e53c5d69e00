from __future__ import annotations

import numpy as np
import pytest
from circles import AS_IT_STANDS, CIRCLES, LABEL, SWAP, meeting, person

from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario.values import Arrow
from deliberate.window.chart.endings import ballot_in_words, clusters, endings

EVERYBODY = np.ones(6, dtype=bool)


def test_two_closed_circles_end_at_two_values() -> None:
    found = endings(rehearse(CIRCLES), LABEL, EVERYBODY)
    assert [round(value, 6) for value, _ in found.lines] == [20, 80]
    assert [words for _, words in found.lines] == ["ends at 20", "ends at 80"]
    assert found.warning == ""


def test_a_swing_is_warned_of_with_its_values() -> None:
    found = endings(rehearse(SWAP), LABEL, np.ones(2, dtype=bool))
    assert found.warning == "keeps swinging between 20 and 80"
    assert [value for value, _ in found.lines] == [20, 80]


def test_a_ring_of_three_swings_between_three_values() -> None:
    people = tuple(
        person(name, start, (i * 100.0, 0.0), own=0.0)
        for i, (name, start) in enumerate([("A", 10.0), ("B", 50.0), ("C", 90.0)])
    )
    ring = meeting(people, (Arrow("a", "b", 1.0), Arrow("b", "c", 1.0), Arrow("c", "a", 1.0)))
    assert endings(rehearse(ring), LABEL, np.ones(3, dtype=bool)).warning == "keeps swinging between 10, 50 and 90"


def test_many_endings_are_told_by_the_lowest_and_the_highest() -> None:
    people = tuple(person(f"P{i}", 10.0 * i, (i * 100.0, 0.0)) for i in range(8))
    found = endings(rehearse(meeting(people, ())), LABEL, np.ones(8, dtype=bool))
    assert [words for _, words in found.lines] == ["from 0", "to 70"]


def test_somebody_absent_does_not_count() -> None:
    present = np.array([True, True, True, False, False, False])
    assert [words for _, words in endings(rehearse(CIRCLES), LABEL, present).lines] == ["ends at 80"]
    assert endings(rehearse(CIRCLES), LABEL, np.zeros(6, dtype=bool)).lines == ()


@pytest.mark.parametrize(
    ("values", "apart", "means"),
    [([], 1, []), ([5], 1, [5]), ([5, 5.5, 9], 1, [5.25, 9]), ([3, 1, 2], 1, [2]), ([1, 3], 1, [1, 3])],
)
def test_clusters_are_runs_of_close_values(values: list[float], apart: float, means: list[float]) -> None:
    assert clusters(np.array(values, dtype=float), apart) == means


def test_the_ballot_is_told_in_one_line() -> None:
    assert ballot_in_words(rehearse(CIRCLES)) == "3 for, 3 against: does not pass at any round"
    assert ballot_in_words(rehearse(SWAP)) == "1 for, 1 against: does not pass at any round"
    people = (person("A", 90.0, (0.0, 0.0), own=50.0), person("B", 40.0, (100.0, 0.0), own=50.0))
    rising = meeting(people, (Arrow("b", "a", 50.0),))
    unknown = (person("A", None, (0.0, 0.0)), person("B", 40.0, (100.0, 0.0)))
    assert ballot_in_words(rehearse(meeting(unknown, ()))) == (
        "0 for, 1 against, 1 abstaining: does not pass at any round"
    )
    assert ballot_in_words(rehearse(meeting((), ()))) == "nobody votes"
    told = ballot_in_words(rehearse(rising, AS_IT_STANDS))
    assert told == "2 for, 0 against: passes from round 1 on"
