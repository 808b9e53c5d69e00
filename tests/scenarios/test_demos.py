"""The demo meetings that come with the program load, are drawn with care, and play as plain numpy plays them."""

from __future__ import annotations

import math
import re
from itertools import combinations

import numpy as np
import pytest
from demo import DEMOS, NOW, Demo, load, rehearsed
from plain_rounds import plain_rounds

from deliberate.files import decode, encode

CAUTION = "This is a sketch of who hears whom, not a forecast of anybody."
ROOM = 150  # scene units between two people, discs and names included


def test_there_are_enough() -> None:
    assert len(DEMOS) >= 12


@pytest.mark.parametrize("slug", DEMOS)
def test_saving_a_demo_changes_nothing(slug: str) -> None:
    content = DEMOS[slug].read_bytes()
    assert encode(decode(content)) == content


@pytest.mark.parametrize("slug", DEMOS)
def test_a_demo_is_complete(slug: str) -> None:
    scenario = load(slug)
    assert len(scenario.title) < 40
    assert scenario.notes.endswith(CAUTION)
    assert 4 <= len(re.findall(r"[.?](?:\s|$)", scenario.notes)) <= 9
    assert len(scenario.notes.split(". ")[0]) < 120  # the gallery shows the first sentence
    assert len(scenario.variants) >= 2
    assert scenario.variants[0].name == NOW
    assert all(variant.notes for variant in scenario.variants)


VARIANTS = [(slug, variant.name) for slug in DEMOS for variant in load(slug).variants]


@pytest.mark.parametrize(("slug", "name"), VARIANTS)
def test_points_places_and_margins(slug: str, name: str) -> None:
    variant = Demo(slug).variant(name)
    assert 5 <= len(variant.people) <= 40
    points = {person.id: person.own_weight for person in variant.people}
    for arrow in variant.arrows:
        points[arrow.listener] += arrow.weight
    assert set(points.values()) == {100}
    for one, other in combinations(variant.people, 2):
        assert math.dist((one.x, one.y), (other.x, other.y)) > ROOM - 1
    for person in variant.people:
        assert person.name
        assert set(person.margins) == set(person.beliefs)
        assert all(margin > 0 for margin in person.margins.values())


def test_weights_say_where_they_come_from() -> None:
    bases = {arrow.basis for slug in DEMOS for variant in load(slug).variants for arrow in variant.arrows}
    assert bases == {"guess", "stated", "observed"}


@pytest.mark.parametrize(("slug", "name"), VARIANTS)
def test_the_program_plays_what_plain_numpy_plays(slug: str, name: str) -> None:
    scenario = load(slug)
    for question in scenario.questions:
        result = rehearsed(slug, name, question.id, 40)
        expected = plain_rounds(scenario, name, question.id, 40)
        np.testing.assert_allclose(result.rounds, expected, rtol=1e-12, atol=1e-12 * question.width)
        np.testing.assert_allclose(result.spread, np.ptp(expected, axis=1), atol=1e-11 * question.width)
