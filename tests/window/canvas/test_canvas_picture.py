"""What is painted: rings in their proportions, lit findings, stages, choosing, long names, crowds."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np
import pytest
from canvas_hands import at, click, on_arrow, settle
from circles import AS_IT_STANDS, CIRCLES, circle, meeting, person
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec.structs import replace
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QFont, QImage
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from deliberate.rehearsal.results import Finding
from deliberate.rehearsal.voices import voices
from deliberate.scenario.values import Arrow, Person, Plan, Stage, Variant
from deliberate.window.canvas import Canvas
from deliberate.window.canvas.layers import MARKED, PALE, QUIET, WEAK
from deliberate.window.canvas.names import wrapped
from deliberate.window.canvas.scene import DRAWN, STRONG, points_words
from deliberate.window.canvas.sprites import RING, RingSprites, directions
from deliberate.window.theme import DARK, LIGHT, Look, shades

Open = Callable[..., Canvas]
TABLES = Plan(
    (
        Stage("Plenary", 2),
        Stage("Tables", 2, "tables", tables=(("amina", "bilal", "chiara"), ("davor", "emeka", "farah"))),
        Stage("Panel", 2, "panel", speakers=("amina",)),
        Stage("Pairs", 2, "pairs", pairs=(("amina", "davor"),)),
    )
)
STAGED = meeting(CIRCLES.variants[0].people, (*CIRCLES.variants[0].arrows, Arrow("chiara", "davor", 5.0)), TABLES)


def finding(kind: str, *groups: tuple[str, ...], arrows: tuple[tuple[str, str], ...] = ()) -> Finding:
    people = tuple(one for group in groups for one in group)
    return Finding(kind, "Says.", "Why.", people, {}, groups, arrows)  # type: ignore[arg-type]


def colored(image: QImage, color: str, around: QPoint, reach: int) -> int:
    """How many pixels in a square have about this colour."""
    want = np.array([int(color[i : i + 2], 16) for i in (1, 3, 5)])
    found = 0
    for x in range(around.x() - reach, around.x() + reach):
        for y in range(around.y() - reach, around.y() + reach):
            got = np.array(image.pixelColor(x, y).getRgb()[:3])
            found += int(np.abs(got - want).max() <= 12)
    return found


# Rings


@settings(max_examples=40)
@given(
    st.lists(st.floats(0.5, 50), min_size=0, max_size=6),
    st.floats(0, 50),
    st.one_of(st.just(0.0), st.floats(0.05, 0.95)),
    st.sampled_from([20.0, 36.0, 60.0]),
)
def test_a_ring_gives_every_voice_its_share(weights: list[float], own: float, firmness: float, radius: float) -> None:
    listener = Person(id="me", own_weight=own, firmness=firmness)
    others = tuple(Person(id=f"p{number}") for number in range(len(weights)))
    arrows = tuple(Arrow("me", f"p{number}", weight) for number, weight in enumerate(weights))
    heard = voices(Variant(name="v", people=(listener, *others), arrows=arrows), 0)
    places = np.array([[0.0, 0.0], *[[np.sin(k), np.cos(k)] for k in range(len(weights))]])
    angle = directions(places, heard.listener, heard.source)
    count = 1 + len(weights)
    shade = np.linspace(20, 235, 2 * count).astype(np.intp)
    rings = RingSprites(count, heard, angle, radius, 2.0, LIGHT, shade[count:])
    rings.color(shade[:count])
    pixels = np.asarray(rings.image.constBits()).view(np.uint32).reshape(rings.image.height(), rings.image.width())
    mine = pixels[: rings.cell, : rings.cell]
    wanted = [heard.own[0], *[heard.share[heard.source == k].sum() for k in range(1, count)]]
    solid = [int((mine == shades(LIGHT)[index].rgba()).sum()) for index in shade[:count]]
    band = np.pi * 4 * radius**2 * (RING[1] ** 2 - RING[0] ** 2)
    for share, inked in zip(wanted, solid, strict=True):
        # Less the gaps, the antialiased edges and the hairline, never more than the share.
        assert inked <= band * share * 1.05 + 12
        if share > 0.15:
            assert inked > band * share * 0.3


def test_the_own_view_is_at_the_top() -> None:
    variant = Variant(
        name="v", people=(Person(id="a", own_weight=30.0), Person(id="b")), arrows=(Arrow("a", "b", 70.0),)
    )
    heard = voices(variant, 0)
    rings = RingSprites(2, heard, np.array([np.pi]), 40.0, 1.0, LIGHT, np.array([0, 0]))
    rings.color(np.array([10, 200]))
    middle = rings.cell // 2
    reach = round(40 * (RING[0] + RING[1]) / 2)
    assert rings.image.pixelColor(middle, middle - reach) == shades(LIGHT)[10]
    assert rings.image.pixelColor(middle, middle + reach) == shades(LIGHT)[200]
    assert rings.image.pixelColor(middle + reach, middle) == shades(LIGHT)[200]


# Lit findings


def test_a_lit_group_is_painted_in_accent(open_canvas: Open, qtbot: QtBot, look: Look) -> None:
    canvas = open_canvas()
    before = canvas.grab().toImage()
    canvas.session.light(finding("closed-groups", ("amina", "bilal", "chiara"), ("davor", "emeka", "farah")))
    settle(qtbot, canvas)
    after = canvas.grab().toImage()
    spot = on_arrow(canvas, "amina", "bilal")
    assert colored(before, look.theme.accent, spot, 8) == 0
    assert colored(after, look.theme.accent, spot, 8) > 0
    assert [ground.title for ground in canvas.picture.grounds] == ["hear only each other"] * 2
    canvas.session.light(None)
    settle(qtbot, canvas)
    assert canvas.grab().toImage() == before


def test_phases_have_letters_and_their_arrows_run_between(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.session.light(finding("swing", ("amina",), ("bilal",)))
    assert [ground.title for ground in canvas.picture.grounds] == ["phase A", "phase B"]
    lit = {canvas.picture.scene.pair(arrow) for arrow in canvas.picture.emphasis.lit_arrows}
    assert lit == {("amina", "bilal"), ("bilal", "amina")}


def test_a_bridge_lights_its_arrows_only(open_canvas: Open) -> None:
    canvas = open_canvas(STAGED)
    sides = (("amina", "bilal", "chiara"), ("davor", "emeka", "farah"))
    canvas.session.light(finding("bridge", *sides, arrows=(("chiara", "davor"),)))
    manner = canvas.picture.look().manner
    bridge = canvas.picture.scene.arrow_index["chiara", "davor"]
    assert manner[bridge] == MARKED
    assert (np.delete(manner, bridge) == QUIET).all()


def test_a_finding_about_people_leaves_the_arrows_alone(open_canvas: Open) -> None:
    canvas = open_canvas()
    before = canvas.picture.look().manner.tolist()
    canvas.session.light(Finding("absent", "Says.", "Why.", ("amina",), {}))
    assert canvas.picture.look().manner.tolist() == before
    assert canvas.picture.emphasis.lit_people == {0}


# Stages


def test_arrows_that_do_not_count_in_the_stage_are_dashed(open_canvas: Open) -> None:
    canvas = open_canvas(STAGED)
    bridge = canvas.picture.scene.arrow_index["chiara", "davor"]
    assert not canvas.picture.look().dashed.any()
    canvas.session.player.seek(2.5)
    look = canvas.picture.look()
    assert look.dashed.tolist() == [index == bridge for index in range(13)]
    assert look.manner[bridge] == PALE
    assert [ground.title for ground in canvas.picture.grounds] == ["Table 1", "Table 2"]
    assert "does not count in this stage" in canvas.sentence(
        canvas.hit(on_arrow(canvas, "chiara", "davor").toPointF())
    )


# Choosing


def test_choosing_speakers_by_click(open_canvas: Open) -> None:
    canvas = open_canvas(STAGED)
    canvas.begin_choosing(2)
    assert canvas.choosing.banner.isVisible()
    click(canvas, at(canvas, "davor"))
    assert canvas.session.variant.plan.stages[2].speakers == ("amina", "davor")
    click(canvas, at(canvas, "amina"))
    assert canvas.session.variant.plan.stages[2].speakers == ("davor",)
    canvas.grab()
    assert not canvas.session.selection
    QTest.mouseClick(canvas.choosing.banner.done, Qt.MouseButton.LeftButton)
    assert canvas.choosing.stage is None
    assert not canvas.choosing.banner.isVisible()
    click(canvas, at(canvas, "davor"))
    assert canvas.session.selection.people == {"davor"}


def test_choosing_tables_by_click_and_digit(open_canvas: Open) -> None:
    canvas = open_canvas(STAGED)
    canvas.begin_choosing(1)
    tables = lambda: canvas.session.variant.plan.stages[1].tables  # noqa: E731
    click(canvas, at(canvas, "chiara"))
    assert tables() == (("amina", "bilal"), ("davor", "emeka", "farah", "chiara"))
    click(canvas, at(canvas, "chiara"))
    assert tables()[2] == ("chiara",)
    click(canvas, at(canvas, "chiara"))
    assert all("chiara" not in table for table in tables())
    click(canvas, at(canvas, "chiara"))
    assert "chiara" in tables()[0]
    canvas.session.select(["amina", "bilal"])
    QTest.keyClicks(canvas, "2")
    assert {"amina", "bilal"} < set(tables()[1])
    QTest.keyClicks(canvas, "0")
    assert all("amina" not in table for table in tables())
    canvas.grab()
    QTest.keyClick(canvas, Qt.Key.Key_Escape)
    assert canvas.choosing.stage is None
    assert canvas.session.variant.people == STAGED.variants[0].people


def test_choosing_pairs_by_click(open_canvas: Open) -> None:
    canvas = open_canvas(STAGED)
    canvas.begin_choosing(3)
    click(canvas, at(canvas, "bilal"))
    canvas.grab()
    click(canvas, at(canvas, "emeka"))
    assert canvas.session.variant.plan.stages[3].pairs == (("amina", "davor"), ("bilal", "emeka"))
    click(canvas, at(canvas, "davor"))
    click(canvas, at(canvas, "amina"))
    assert canvas.session.variant.plan.stages[3].pairs == (("bilal", "emeka"),)


def test_choosing_by_keyboard_only(open_canvas: Open) -> None:
    canvas = open_canvas(STAGED)
    canvas.begin_choosing(2)
    QTest.keyClick(canvas, Qt.Key.Key_Tab)
    QTest.keyClick(canvas, Qt.Key.Key_Tab)
    QTest.keyClick(canvas, Qt.Key.Key_Return)
    assert canvas.session.variant.plan.stages[2].speakers == ("amina", "bilal")
    QTest.keyClick(canvas, Qt.Key.Key_Delete)
    assert len(canvas.session.variant.people) == 6
    QTest.keyClick(canvas, Qt.Key.Key_Escape)
    assert canvas.choosing.stage is None


def test_there_is_nothing_to_choose_in_a_plenary(open_canvas: Open, qtbot: QtBot) -> None:
    canvas = open_canvas(STAGED)
    with qtbot.waitSignal(canvas.session.refused):
        canvas.begin_choosing(0)
    assert canvas.choosing.stage is None


def test_choosing_ends_when_the_stage_goes(open_canvas: Open) -> None:
    canvas = open_canvas(STAGED)
    canvas.begin_choosing(3)
    plan = Plan((Stage("Plenary", 3),))
    canvas.session.edit("Plan", lambda s: replace(s, variants=(replace(s.variants[0], plan=plan),)))
    assert canvas.choosing.stage is None
    canvas.grab()


# Names


@pytest.mark.parametrize("size", [7.0, 10.0, 16.0])
def test_long_names_take_two_lines_and_are_shortened(qapp: object, size: float) -> None:
    font = QFont()
    font.setPointSizeF(size)
    assert wrapped("Ana", font, 200) == ["Ana"]
    lines = wrapped("Maximiliane Oyelaran-Kowalczyk of the Upper Harbour", font, 12 * size)
    assert len(lines) == 2
    assert lines[1].endswith("…")
    assert len(wrapped("Llanfairpwllgwyngyllgogerychwyrndrobwll", font, 10 * size)) == 2


def test_odd_names_and_numbers_are_painted(open_canvas: Open, qtbot: QtBot, look: Look) -> None:
    people = (
        replace(person("a", None, (0.0, 0.0)), name="<img src=x>&amp;\u2028 'quote'"),
        replace(person("b", 12.3456, (200.0, 0.0)), name="יעל בן־דוד ושות׳ ועוד מילים רבות מאוד"),
        replace(person("c", 100.0, (400.0, 0.0)), present=False),
        replace(person("d", 0.0, (0.0, 200.0)), ballots=0.0, firmness=1.0),
        replace(person("e", 50.0, (0.0, 200.0)), firmness=0.3),
    )
    canvas = open_canvas(meeting(people, (Arrow("a", "b", 1.0), Arrow("d", "e", 1.0), Arrow("e", "d", 2.0))))
    for theme in ("dark", "light"):
        look.choose(theme)
        settle(qtbot, canvas)
        assert canvas.grab().toImage().pixelColor(3, 300).name() == (DARK if theme == "dark" else LIGHT).canvas


@pytest.mark.parametrize(("share", "words"), [(0.3, "30"), (1 / 3, "33.3"), (1e-5, "under 0.1"), (1.0, "100")])
def test_points_in_few_digits(share: float, words: str) -> None:
    assert points_words(share) == words


# Directions and crowds


def test_flow_turns_the_heads_and_says_so(open_canvas: Open, qtbot: QtBot) -> None:
    canvas = open_canvas(meeting(CIRCLES.variants[0].people[:2], (Arrow("amina", "bilal", 60.0),)))
    before = canvas.grab().toImage()
    assert canvas.picture.legend() == ["Arrows point at the person listened to"]
    canvas.set_flow(True)
    settle(qtbot, canvas)
    assert canvas.picture.legend() == ["Arrows show the way beliefs travel"]
    after = canvas.grab().toImage()
    mark = LIGHT.mark
    near_source = at(canvas, "bilal") + QPoint(0, -round(canvas.picture.radius + 8))
    assert colored(before, mark, near_source, 7) > colored(after, mark, near_source, 7)


def crowd(count: int, sources: int) -> Mapping[str, object]:
    people = tuple(
        person(f"P{number}", float(number % 101), (150.0 * (number % 25), 150.0 * (number // 25)))
        for number in range(count)
    )
    arrows = tuple(
        Arrow(f"p{number}", f"p{(number + step * step + 1) % count}", 1.0 + step)
        for number in range(count)
        for step in range(sources)
        if (step * step + 1) % count
    )
    return {"people": people, "arrows": arrows}


def test_weak_arrows_of_a_crowd_step_back_and_come_with_the_selection(open_canvas: Open) -> None:
    canvas = open_canvas(meeting(**crowd(200, 12)))
    look = canvas.picture.look()
    assert look.shown.sum() == DRAWN
    assert (look.manner[look.shown] == WEAK).sum() >= DRAWN - 2 * STRONG
    assert canvas.picture.legend()[1] == "1,400 weak arrows are not shown: select somebody to see theirs"
    canvas.session.select(["p7"])
    scene, shown = canvas.picture.scene, canvas.picture.look().shown
    hers = (scene.listener == 7) | (scene.source == 7)
    assert shown[hers].all()


def test_a_crowd_is_painted_without_rings_and_a_committee_with(open_canvas: Open) -> None:
    small, large = open_canvas(), open_canvas(meeting(**crowd(250, 2)))
    assert small.picture.people.with_rings(small.picture.scene, small.picture.radius)
    assert not large.picture.people.with_rings(large.picture.scene, 40.0)
    large.grab()


def test_opening_another_meeting_fits_it_in(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.zoom_in()
    canvas.session.open(meeting(**crowd(60, 2)), None)
    points = canvas.picture.points
    assert (points > 0).all()
    assert (points < [900, 700]).all()
    assert canvas.session.variant.name == AS_IT_STANDS


def test_editing_elsewhere_moves_nothing(open_canvas: Open) -> None:
    canvas = open_canvas()
    canvas.zoom_in()
    before = canvas.picture.points
    more = circle("Amina", "Davor")
    canvas.session.edit("x", lambda s: replace(s, variants=(replace(s.variants[0], arrows=more),)))
    assert (canvas.picture.points == before).all()


def test_at_rest_no_timer_runs(open_canvas: Open, qtbot: QtBot) -> None:
    canvas = open_canvas()
    canvas.arrange("grid")
    qtbot.waitUntil(lambda: not canvas._glide._timer.isActive())
    settle(qtbot, canvas)
    assert not canvas._rest.isActive()
    assert canvas.picture.settled
