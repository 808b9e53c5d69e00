"""Arrows, names and places, without a screen."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from deliberate.window.canvas import arrange, geometry, labels
from deliberate.window.canvas.places import RADIUS, disc_radius, free_place
from deliberate.window.canvas.viewport import Viewport, fitted

places_of = st.lists(st.tuples(st.floats(-500, 500), st.floats(-500, 500)), min_size=2, max_size=9, unique=True).map(
    lambda rows: np.array(rows, dtype=float)
)


def everyone(count: int) -> tuple[np.ndarray, np.ndarray]:
    """Arrows from everybody to everybody else."""
    one, other = np.divmod(np.arange(count * count), count)
    return one[one != other], other[one != other]


@given(places_of)
def test_arrows_end_at_rings(places: np.ndarray) -> None:
    listener, source = everyone(len(places))
    bend = geometry.bends(places, listener, source, 30.0)
    curves = geometry.curves(places, listener, source, bend, 30.0, gap=2.0)
    far = np.hypot(*(places[source] - places[listener]).T)
    apart = far > 2 * 32.0 / 0.96
    leaves = np.hypot(*(curves.start - places[listener]).T)
    arrives = np.hypot(*(curves.tip - places[source]).T)
    assert leaves[apart] == pytest.approx(32.0)
    assert arrives[apart] == pytest.approx(32.0)
    assert (leaves <= 32.0 + 1e-9).all()


def test_the_two_arrows_of_a_pair_do_not_touch() -> None:
    places = np.array([[0.0, 0.0], [300.0, 40.0]])
    listener, source = np.array([0, 1]), np.array([1, 0])
    curves = geometry.curves(places, listener, source, geometry.bends(places, listener, source, 36.0), 36.0)
    part = np.linspace(0, 1, 40)
    one, other = curves.at(part)
    assert np.hypot(*np.moveaxis(one[:, None] - other[None], -1, 0)).min() > 8.0


def test_an_arrow_goes_round_somebody_in_between() -> None:
    places = np.array([[0.0, 0.0], [400.0, 0.0], [200.0, 4.0]])
    listener, source = np.array([0]), np.array([1])
    bend = geometry.bends(places, listener, source, 36.0)
    assert bend[0] != 0
    points = geometry.curves(places, listener, source, bend, 36.0).at(np.linspace(0, 1, 60))[0]
    assert np.hypot(*(points - places[2]).T).min() > 36.0
    alone = geometry.bends(places[:2], listener, source, 36.0)
    assert alone[0] == 0


def test_strokes_cover_the_curve_and_dashes_half_of_it() -> None:
    curve = geometry.Curves(np.array([[0.0, 0.0]]), np.array([[50.0, 0.0]]), np.array([[100.0, 0.0]]))
    whole, owner = geometry.strokes(curve, np.array([8]))
    assert owner.tolist() == [0] * 8
    assert np.hypot(*(whole[:, 2:] - whole[:, :2]).T).sum() == pytest.approx(100.0)
    assert whole[0, :2].tolist() == [0, 0]
    assert whole[-1, 2:].tolist() == [100, 0]
    dashes, _ = geometry.strokes(curve, np.array([10]), inked=0.5)
    assert np.hypot(*(dashes[:, 2:] - dashes[:, :2]).T).sum() == pytest.approx(50.0)


def test_heads_point_along_the_end_of_the_curve() -> None:
    curve = geometry.Curves(np.array([[0.0, 0.0]]), np.array([[50.0, 0.0]]), np.array([[50.0, 60.0]]))
    head = geometry.heads(curve, np.array([10.0]), np.array([4.0]))[0]
    assert head[0].tolist() == [50, 60]
    assert sorted(head[1:, 0].tolist()) == [46, 54]
    assert head[1:, 1].tolist() == [50, 50]


@given(places_of, st.floats(-600, 600), st.floats(-600, 600))
def test_the_nearest_person_is_found(places: np.ndarray, x: float, y: float) -> None:
    found = geometry.nearest_person(places, np.array([x, y]), 100.0)
    distance = [math.dist(place, (x, y)) for place in places.tolist()]
    if found is None:
        assert min(distance) > 100.0
    else:
        assert distance[found] == pytest.approx(min(distance))


def test_the_nearest_arrow_is_found_along_its_curve() -> None:
    places = np.array([[0.0, 0.0], [300.0, 0.0], [0.0, 200.0]])
    listener, source = np.array([0, 0]), np.array([1, 2])
    curves = geometry.curves(places, listener, source, np.array([0.1, 0.0]), 20.0)
    on_the_first = curves.at(np.array([0.37]))[0, 0]
    assert geometry.nearest_arrow(curves, on_the_first + 2, 7.0) == 0
    assert geometry.nearest_arrow(curves, np.array([1.0, 100.0]), 7.0) == 1
    assert geometry.nearest_arrow(curves, np.array([150.0, 150.0]), 7.0) is None


def test_names_go_below_unless_something_is_there() -> None:
    places = np.array([[0.0, 0.0], [0.0, 60.0], [300.0, 0.0]])
    sizes = np.full((3, 2), [60.0, 16.0])
    chosen, cost = labels.place_labels(places, 25.0, sizes, np.zeros((0, 4)))
    offset = labels.offsets(chosen, 25.0, sizes)
    assert offset[2].tolist() == [0, 25.0 + labels.GAP + 8]
    assert offset[0, 1] <= 0  # the second person stands below the first
    assert cost.tolist() == [0, 0, 0]


def test_names_keep_clear_of_arrows() -> None:
    places = np.array([[0.0, 0.0]])
    sizes = np.array([[60.0, 16.0]])
    through_below = np.array([[-80.0, 38.0, 80.0, 38.0]])
    chosen, cost = labels.place_labels(places, 25.0, sizes, through_below)
    assert labels.offsets(chosen, 25.0, sizes)[0].tolist() == [0, -(25.0 + labels.GAP + 8)]
    assert cost[0] == 0


@given(places_of)
def test_names_on_each_other_are_reported(places: np.ndarray) -> None:
    sizes = np.full((len(places), 2), [90.0, 16.0])
    chosen, cost = labels.place_labels(places, 20.0, sizes, np.zeros((0, 4)))
    middle = places + labels.offsets(chosen, 20.0, sizes)
    apart = np.abs(middle[:, None] - middle[None]) - sizes[0]
    over = (apart < -1e-9).all(axis=-1)
    np.fill_diagonal(over, False)
    # Of two names that lie on each other at least one says so, and is not painted.
    readable = cost < labels.OVER_SOMETHING
    assert not over[np.ix_(readable, readable)].any()


@pytest.mark.parametrize("count", [0, 1, 2, 3, 7, 12, 40])
def test_arrangements_keep_people_apart(count: int) -> None:
    listener, source = (np.zeros(0, dtype=np.intp),) * 2
    if count > 1:
        listener, source = np.arange(count), (np.arange(count) + 1) % count
    half = list(range(count // 2))
    for placed in (
        arrange.circle(count),
        arrange.grid(count),
        arrange.by_group([half], count),
        arrange.by_hearing(listener, source, count),
    ):
        assert placed.shape == (count, 2)
        assert np.isfinite(placed).all()
        if count > 1:
            between = np.hypot(*np.moveaxis(placed[:, None] - placed[None], -1, 0))
            np.fill_diagonal(between, np.inf)
            assert between.min() > 0.9 * arrange.SPACING


def test_groups_stand_apart() -> None:
    groups = [[0, 2, 4], [1, 3, 5, 7], [6, 8]]
    placed = arrange.by_group(groups, 10)
    for group in [*groups, [9]]:
        middle = placed[group].mean(axis=0)
        reach = np.hypot(*(placed[group] - middle).T).max()
        others = np.setdiff1d(np.arange(10), group)
        assert np.hypot(*(placed[others] - middle).T).min() > reach


def test_who_hears_whom_brings_neighbours_together() -> None:
    # A chain of eight: the distance on the picture follows the number of arrows between (rank correlation near 1).
    chain = np.arange(7)
    placed = arrange.by_hearing(chain, chain + 1, 8)
    between = np.hypot(*np.moveaxis(placed[:, None] - placed[None], -1, 0))
    steps = np.abs(np.arange(8)[:, None] - np.arange(8)[None])
    assert all(between[steps == near].max() < between[steps == near + 2].min() for near in range(1, 6))


def test_the_same_committee_gets_the_same_picture() -> None:
    one, other = everyone(9)
    keep = (one * 7 + other * 5) % 3 == 0
    first = arrange.by_hearing(one[keep], other[keep], 9)
    assert (first == arrange.by_hearing(one[keep], other[keep], 9)).all()


@given(places_of)
def test_a_free_place_is_free(places: np.ndarray) -> None:
    place = free_place(places, places.mean(axis=0), 120.0)
    assert np.hypot(*(places - place).T).min() >= 120.0


def test_people_are_as_large_as_their_places_allow() -> None:
    assert disc_radius(arrange.grid(12)) >= RADIUS
    assert disc_radius(arrange.grid(12) / 300) == pytest.approx(RADIUS / 300)
    assert disc_radius(np.zeros((1, 2))) == RADIUS
    for spread in (0.001, 0.5, 1.0, 2.0, 5.0, 900.0):
        assert 2 * disc_radius(arrange.grid(30) * spread) < arrange.SPACING * spread


@given(st.floats(0.1, 5), st.floats(-900, 900), st.floats(-900, 900), st.floats(0.5, 2), st.floats(0, 900))
def test_zoom_keeps_what_is_under_the_pointer(zoom: float, x: float, y: float, factor: float, at: float) -> None:
    view = Viewport(zoom, x, y)
    before = view.to_scene(np.array([at, at / 2]))
    after = view.zoomed(factor, at, at / 2, 36.0)
    assert after.to_screen(before) == pytest.approx([at, at / 2], abs=1e-6)


@given(places_of)
def test_fit_shows_everybody(places: np.ndarray) -> None:
    view = fitted(places, 36.0, 800, 600, (20, 30, 20, 40))
    points = view.to_screen(places)
    reach = 36.0 * view.zoom
    assert (points[:, 0] - reach >= 19).all()
    assert (points[:, 0] + reach <= 781).all()
    assert (points[:, 1] - reach >= 29).all()
    assert (points[:, 1] + reach <= 561).all()
