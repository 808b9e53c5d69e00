"""Thin bridges, against all ways to cut a group in two."""

from __future__ import annotations

from itertools import combinations

import numpy as np
import pytest
from meetings import meeting
from telling import after, kinds, share_rows, talk, told

from deliberate.rehearsal.findings.cuts import parting


def sides(small: int, large: int, across: float, seed: int | None = None) -> np.ndarray:
    """Points of two sides that hear all of their own, and one person of each hears one of the other."""
    people = small + large
    points = np.zeros((people, people))
    points[:small, :small] = points[small:, small:] = 1
    if seed is not None:
        points *= np.random.default_rng(seed).integers(1, 10, (people, people))
    points[0, small] = points[small, 0] = across
    return points


def influence_of(rows: np.ndarray) -> np.ndarray:
    return np.linalg.matrix_power(rows, 100_000)[0]


def thinnest_cut(rows: np.ndarray) -> frozenset[int]:
    """The side with person 0 of the cut with the least flow for the influence of its lesser side, of all cuts with
    two people or more on either side (Jerrum and Sinclair 1989)."""
    people, influence = len(rows), influence_of(rows)
    flow = influence[:, None] * rows
    best = None
    for size in range(2, people - 1):
        for side in combinations(range(people), size):
            if 0 not in side:
                continue
            rest = [at for at in range(people) if at not in side]
            across = flow[np.ix_(side, rest)].sum() + flow[np.ix_(rest, side)].sum()
            thin = across / min(influence[list(side)].sum(), influence[rest].sum())
            if best is None or thin < best[0]:
                best = thin, frozenset(side)
    return best[1]


def second_modulus(rows: np.ndarray) -> float:
    return float(np.sort(np.abs(np.linalg.eigvals(rows)))[-2])


def halving(rate: float) -> float:
    return float(np.log(0.5) / np.log(rate))


@pytest.mark.parametrize(("small", "large"), [(2, 2), (2, 6), (3, 4), (4, 4), (3, 7)])
@pytest.mark.parametrize("seed", [None, 1, 2, 3])
def test_sides_are_the_thinnest_of_all_cuts(small: int, large: int, seed: int | None) -> None:
    points = sides(small, large, 0.05, seed)
    rows = share_rows(points)
    shuffled = np.random.default_rng(seed or 0).permutation(small + large)
    mixed = rows[np.ix_(shuffled, shuffled)]
    found = parting(mixed, influence_of(mixed))
    side = next(part for part in found.parts if 0 in part)
    assert frozenset(side.tolist()) == thinnest_cut(mixed)
    assert found.across == pytest.approx(halving(second_modulus(rows)), rel=1e-6)
    own = np.diag(1 - rows[:small, :small].sum(axis=1)), np.diag(1 - rows[small:, small:].sum(axis=1))
    inside = max(
        second_modulus(rows[:small, :small] + own[0]),
        second_modulus(rows[small:, small:] + own[1]),
    )
    assert found.inside == pytest.approx(halving(inside), rel=1e-6)


def test_a_bridge_of_two_arrows() -> None:
    scenario = meeting(sides(4, 4, 0.2), [70, 80, 90, 60, 20, 30, 40, 10], plan=talk(4))
    finding = told(scenario, "bridge")
    rows = share_rows(sides(4, 4, 0.2))
    assert finding.figures["across"] == pytest.approx(halving(second_modulus(rows)))
    assert finding.groups == (("a", "b", "c", "d"), ("e", "f", "g", "h"))
    assert finding.arrows == (("a", "e"), ("e", "a"))
    assert finding.people == ("a", "e")
    every = f"{halving(second_modulus(rows)):.0f}"
    assert (
        finding.says == f"Two sides hang together by 2 arrows only: the gap between them halves every {every} rounds."
    )
    # 0.2 of 4.2 points
    assert finding.why.startswith(
        "Only a and e hear across, with 4.8 of 100 points; among a, b and 2 others, and among"
    )
    assert after(scenario, finding).rehearsal.rounds_to_halve < finding.figures["across"]


def test_a_bridge_is_the_reason_for_a_slow_pace() -> None:
    found = kinds(meeting(sides(4, 4, 0.2), [70, 80, 90, 60, 20, 30, 40, 10], plan=talk(4)))
    assert "bridge" in found
    assert "slow" not in found


def test_three_parts() -> None:
    points = np.kron(np.eye(3), np.ones((3, 3)))
    for one, other in ((0, 3), (3, 6), (6, 0)):
        points[one, other] = points[other, one] = 0.1
    finding = told(meeting(points, [0, 10, 20, 40, 50, 60, 80, 90, 100]), "bridge")
    assert finding.figures["parts"] == 3
    assert finding.says.startswith("Three parts hang together by 6 arrows only: the gap between them halves every ")
    assert "inside each part it " in finding.why


@pytest.mark.parametrize(
    "points",
    [
        np.ones((8, 8)),
        np.ones((8, 8)) + 60 * np.eye(8),
        np.eye(12) * 8 + np.roll(np.eye(12), 1, axis=1) + np.roll(np.eye(12), -1, axis=1),
        sides(1, 6, 0.05),
        sides(4, 4, 4.0),
    ],
    ids=["all hear all", "all keep much", "a slow ring", "one person by herself", "sides that hear each other"],
)
def test_no_bridge(points: np.ndarray) -> None:
    starts = np.linspace(0, 100, len(points)).tolist()
    assert "bridge" not in kinds(meeting(points.tolist(), starts))


def test_firm_people_hang_together_by_more_than_arrows() -> None:
    people = {one: {"firmness": 0.2} for one in "abcdefgh"}
    assert "bridge" not in kinds(meeting(sides(4, 4, 0.2), [70, 80, 90, 60, 20, 30, 40, 10], people=people))
