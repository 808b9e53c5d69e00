"""The doubt on the chart: bands, whiskers and odds, and the switch that shows them."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from circles import CIRCLES
from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QColor, QImage, QPainter
from pytestqt.qtbot import QtBot

from deliberate.rehearsal.doubt import doubt
from deliberate.rehearsal.doubt_results import Doubt, Odds
from deliberate.scenario import edits
from deliberate.window.chart import ChartPanel
from deliberate.window.chart.doubt_bands import paint_bands, paint_endings, paint_odds, paint_spread_whiskers
from deliberate.window.chart.frame import Frame
from deliberate.window.session import Session
from deliberate.window.theme import LIGHT, Look

FRAME = Frame(QRectF(0, 0, 400, 200), -0.5, 6.5, 0, 100)
PEOPLE = [person.id for person in CIRCLES.variants[0].people]
IN_DOUBT = edits.set_margin(CIRCLES, PEOPLE, "label", 25.0, variant=None)


@pytest.fixture(scope="module")
def found() -> Doubt:
    return doubt(IN_DOUBT)


def painted(paint: Callable[[QPainter], None]) -> QImage:
    image = QImage(400, 200, QImage.Format.Format_RGB32)
    image.fill(QColor("white"))
    with QPainter(image) as painter:
        paint(painter)
    return image


def darkness(image: QImage, round_: float, belief: float) -> int:
    return 255 - image.pixelColor(round(float(FRAME.x(round_))), round(float(FRAME.y(belief)))).lightness()


def test_a_band_covers_what_the_draws_cover(qapp: object, found: Doubt) -> None:
    rounds = np.arange(7)
    image = painted(lambda painter: paint_bands(painter, FRAME, found, [0], [QColor("black")], rounds, chosen=True))
    low, quarter, _, three_quarters, high = found.beliefs[:, 3, 0]
    assert darkness(image, 3, high + 3) == 0
    assert darkness(image, 3, low - 3) == 0
    outer = darkness(image, 3, (low + quarter) / 2)
    inner = darkness(image, 3, (quarter + three_quarters) / 2)
    assert 0 < outer < inner


def test_many_bands_are_a_haze(qapp: object, found: Doubt) -> None:
    rounds = np.arange(7)
    chosen, many = (
        painted(lambda p, c=c: paint_bands(p, FRAME, found, [0], [QColor("black")], rounds, chosen=c))
        for c in (True, False)
    )
    middle = float(found.beliefs[2, 3, 0])
    assert 0 < darkness(many, 3, middle) < darkness(chosen, 3, middle)


def test_the_long_run_stands_at_the_right_edge(qapp: object, found: Doubt) -> None:
    image = painted(lambda painter: paint_endings(painter, FRAME, found, [0], LIGHT))
    row = [image.pixelColor(398, y).name() != "#ffffff" for y in range(200)]
    low, high = (float(FRAME.y(found.long_run[level, 0])) for level in (0, -1))
    marked = [y for y, ink in enumerate(row) if ink]
    assert min(marked) == pytest.approx(high, abs=2)
    assert max(marked) == pytest.approx(low, abs=2)


def test_whiskers_span_the_spread_of_the_draws(qapp: object, found: Doubt) -> None:
    widest = float(found.spread.max())
    image = painted(lambda painter: paint_spread_whiskers(painter, FRAME, found, widest, LIGHT))
    x = round(float(FRAME.x(2)))
    inked = [y for y in range(200) if any(image.pixelColor(x + dx, y).lightness() < 200 for dx in (-1, 0, 1))]
    low, high = (200 - 200 * float(found.spread[level, 2]) / widest for level in (0, -1))
    assert min(inked) == pytest.approx(high, abs=2)
    assert max(inked) == pytest.approx(low, abs=2)


def test_columns_are_as_full_as_the_odds(qapp: object) -> None:
    odds = tuple(Odds.of(hits, 1000) for hits in (0, 250, 1000))
    frame = replace(FRAME, right=2.5)
    image = painted(lambda painter: paint_odds(painter, frame, odds, LIGHT))

    def filled(at: int) -> float:
        x = round(float(frame.x(at)))
        dark = sum(image.pixelColor(x, y).lightness() < 150 for y in range(3, 199))
        return dark / 196

    assert [filled(at) for at in range(3)] == pytest.approx([0, 0.25, 1], abs=0.02)


def test_the_switch_draws_and_says_what_the_draws_say(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session], found: Doubt
) -> None:
    session = open_session(IN_DOUBT)
    panel = ChartPanel(session, look)
    qtbot.addWidget(panel)
    panel.resize(420, 420)
    panel.load()
    panel.refresh()
    panel.show()
    qtbot.waitExposed(panel)
    qtbot.wait(30)
    before = panel.grab().toImage()
    counted = panel.ballot.text()
    qtbot.mouseClick(panel.doubt, Qt.MouseButton.LeftButton)
    qtbot.waitUntil(lambda: panel.ballot.text() == found.says, timeout=20_000)
    qtbot.wait(30)
    assert panel.grab().toImage() != before
    qtbot.mouseClick(panel.doubt, Qt.MouseButton.LeftButton)
    assert panel.ballot.text() == counted
    assert not session.doubting.wanted
