"""Points per 100: read, set, and read again."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
from harbour import AS_IT_STANDS, HARBOUR, MIXED
from hypothesis import assume, given
from hypothesis import strategies as st
from strategies import scenarios

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.access import arrow_between
from deliberate.scenario.edits import points_of
from deliberate.scenario.values import Scenario, Variant


def row(scenario: Scenario, listener: str) -> dict[str, float]:
    return points_of(scenario.variants[0], listener)


def exact_shares(variant: Variant, listener: str) -> dict[str, Fraction]:
    """The definition of formats.md in exact fractions: own weight and arrow weights divided by their sum."""
    weights = {listener: Fraction(next(p.own_weight for p in variant.people if p.id == listener))}
    weights |= {arrow.source: Fraction(arrow.weight) for arrow in variant.arrows if arrow.listener == listener}
    total = sum(weights.values())
    return {one: weight / total for one, weight in weights.items()} if total else {listener: Fraction(1)}


def test_points_are_shown_per_hundred_the_own_view_first() -> None:
    assert list(row(HARBOUR, "ines").items()) == [("ines", 40), ("tomas", 20), ("noor", 40)]
    assert row(HARBOUR, "tomas") == {"tomas": 60, "ines": 30, "wei": 10}
    assert row(HARBOUR, "noor") == {"noor": 0, "tomas": 75, "wei": 25}  # stored as 3 and 1
    assert row(HARBOUR, "wei") == {"wei": 100}
    assert points_of(HARBOUR.variants[1], "noor") == {"noor": 100}  # all weights 0: hears only herself


@given(scenarios(), st.data())
def test_points_are_a_hundred_times_the_shares(scenario, data) -> None:
    variant = data.draw(st.sampled_from(scenario.variants))
    assume(variant.people)
    listener = data.draw(st.sampled_from(variant.people)).id
    points = points_of(variant, listener)
    shares = exact_shares(variant, listener)
    assert points.keys() == shares.keys()
    for one, share in shares.items():
        assert math.isclose(points[one], 100 * share, rel_tol=1e-7, abs_tol=1e-300)
        assert (points[one] > 0) == (share > 0)


def test_a_row_is_stored_as_given_and_replaces_what_was_there() -> None:
    given_points = {"ines": 33.3, "wei": 66.7, "tomas": 0}
    after = edits.give_points(HARBOUR, "ines", given_points, variant=AS_IT_STANDS, basis="stated")
    assert row(after, "ines") == {"ines": 33.3, "wei": 66.7}
    assert arrow_between(after.variants[0], "ines", "wei").basis == "stated"
    assert arrow_between(after.variants[0], "ines", "noor") is None
    assert row(after, "tomas") == row(HARBOUR, "tomas")


def test_arrows_that_keep_their_weight_are_shared_and_keep_their_basis() -> None:
    after = edits.give_points(HARBOUR, "ines", {"ines": 20, "tomas": 20, "noor": 60}, variant=AS_IT_STANDS)
    assert after.variants[0].arrows[0] is HARBOUR.variants[0].arrows[0]
    assert after.variants[0].arrows[1].weight == 60
    assert after.variants[0].people[1] is HARBOUR.variants[0].people[1]
    same = edits.give_points(HARBOUR, "ines", row(HARBOUR, "ines"), variant=AS_IT_STANDS)
    assert same is HARBOUR


def test_a_row_must_add_to_a_hundred() -> None:
    with pytest.raises(DeliberateError, match=r"Ines's points add to 99\.9, not to 100"):
        edits.give_points(HARBOUR, "ines", {"ines": 33.3, "wei": 33.3, "tomas": 33.3}, variant=AS_IT_STANDS)
    with pytest.raises(DeliberateError, match="must lie between 0 and 100, is 120"):
        edits.give_points(HARBOUR, "ines", {"ines": 120, "wei": -20}, variant=AS_IT_STANDS)
    with pytest.raises(DeliberateError, match='nobody with the id "jun"'):
        edits.give_points(HARBOUR, "ines", {"ines": 20, "jun": 80}, variant=AS_IT_STANDS)


def test_setting_one_entry_rescales_the_others_in_proportion() -> None:
    after = edits.set_points(HARBOUR, "ines", "tomas", 60, variant=AS_IT_STANDS)
    assert row(after, "ines") == {"ines": 20, "tomas": 60, "noor": 20}
    after = edits.set_points(HARBOUR, "ines", "ines", 70, variant=AS_IT_STANDS)
    assert row(after, "ines") == {"ines": 70, "tomas": 10, "noor": 20}


def test_a_new_source_is_introduced_and_a_source_without_points_goes() -> None:
    after = edits.set_points(HARBOUR, "ines", "wei", 10, variant=AS_IT_STANDS)
    assert row(after, "ines") == {"ines": 36, "tomas": 18, "noor": 36, "wei": 10}
    back = edits.set_points(after, "ines", "wei", 0, variant=AS_IT_STANDS)
    assert row(back, "ines") == row(HARBOUR, "ines")
    alone = edits.set_points(HARBOUR, "ines", "ines", 100, variant=AS_IT_STANDS)
    assert row(alone, "ines") == {"ines": 100}


def test_the_others_can_keep_their_points_while_the_own_view_settles_the_difference() -> None:
    after = edits.set_points(HARBOUR, "ines", "tomas", 50, variant=AS_IT_STANDS, others="keep")
    assert row(after, "ines") == {"ines": 10, "tomas": 50, "noor": 40}
    after = edits.set_points(HARBOUR, "ines", "tomas", 0, variant=AS_IT_STANDS, others="keep")
    assert row(after, "ines") == {"ines": 60, "noor": 40}
    with pytest.raises(DeliberateError, match="Ines's own view leaves no more than 60 points"):
        edits.set_points(HARBOUR, "ines", "tomas", 61, variant=AS_IT_STANDS, others="keep")


def test_a_row_can_be_typed_entry_by_entry() -> None:
    typed = HARBOUR
    for source, points in (("ines", 20), ("tomas", 25), ("noor", 15.5)):
        typed = edits.set_points(typed, "wei", source, points, variant=AS_IT_STANDS, others="keep")
    assert row(typed, "wei") == {"wei": 39.5, "ines": 20, "tomas": 25, "noor": 15.5}


def test_where_nobody_else_counts_the_rest_is_the_own_view() -> None:
    after = edits.set_points(HARBOUR, "wei", "ines", 30, variant=AS_IT_STANDS)
    assert row(after, "wei") == {"wei": 70, "ines": 30}
    only = edits.set_points(HARBOUR, "wei", "ines", 100, variant=AS_IT_STANDS)
    assert row(only, "wei") == {"wei": 0, "ines": 100}
    less = edits.set_points(only, "wei", "ines", 40, variant=AS_IT_STANDS)
    assert row(less, "wei") == {"wei": 60, "ines": 40}
    with pytest.raises(DeliberateError, match="hears nobody else, so all 100 points stay with the own view"):
        edits.set_points(HARBOUR, "wei", "wei", 40, variant=AS_IT_STANDS)


def test_own_points_of_several_people() -> None:
    after = edits.set_own_points(HARBOUR, ["ines", "noor", "wei"], 20, variant=AS_IT_STANDS)
    assert row(after, "ines")["ines"] == row(after, "noor")["noor"] == 20
    assert row(after, "noor") == {"noor": 20, "tomas": 60, "wei": 20}
    assert row(after, "wei") == {"wei": 100}  # hears nobody
    with pytest.raises(DeliberateError, match="hears nobody else"):
        edits.set_own_points(HARBOUR, "noor", 20, variant=MIXED)


@given(scenarios(), st.data())
def test_points_that_were_set_are_read_again_exactly(scenario, data) -> None:
    variant = data.draw(st.sampled_from([one for one in scenario.variants if len(one.people) > 1] or [None]))
    assume(variant is not None)
    ids = st.sampled_from([person.id for person in variant.people])
    for _ in range(3):
        listener, source = data.draw(ids), data.draw(ids)
        points = data.draw(st.one_of(st.integers(1, 99), st.floats(0.001, 99.999)))
        try:
            scenario = edits.set_points(scenario, listener, source, points, variant=variant.name)
        except DeliberateError:
            assert listener == source
            continue
        after = next(one for one in scenario.variants if one.name == variant.name)
        read = points_of(after, listener)
        assert read[source] == points
        assert math.isclose(math.fsum(read.values()), 100, rel_tol=1e-8)
        assert edits.give_points(scenario, listener, read, variant=variant.name) is scenario


def test_weights_at_the_ends_of_double_range() -> None:
    after = edits.set_weight(HARBOUR, [("ines", "tomas"), ("ines", "noor")], 1.7e308, variant=AS_IT_STANDS)
    assert row(after, "ines")["tomas"] == pytest.approx(50)
    after = edits.set_weight(after, [("ines", "tomas")], 5e-324, variant=AS_IT_STANDS)
    assert 0 < row(after, "ines")["tomas"] < 1e-300
    after = edits.set_points(after, "ines", "noor", 50, variant=AS_IT_STANDS)
    assert arrow_between(after.variants[0], "ines", "tomas") is not None
    faint = edits.set_weight(HARBOUR, [("noor", "tomas"), ("noor", "wei")], 5e-324, variant=AS_IT_STANDS)
    assert row(faint, "noor") == {"noor": 0, "tomas": 50, "wei": 50}
