from __future__ import annotations

import re
from itertools import pairwise

import numpy as np
import pytest
from circles import LABEL
from PySide6.QtCore import QRectF
from PySide6.QtGui import QColor, QImage, QPainter, QPixmap

from deliberate.files.resources import resources
from deliberate.rehearsal.doubt_results import Odds
from deliberate.scenario.values import Question
from deliberate.window.canvas.sprites import DiscAtlas
from deliberate.window.chart.doubt_bands import paint_odds
from deliberate.window.chart.frame import Frame
from deliberate.window.theme import DARK, LIGHT, Theme, belief_fractions, contrast, ink_on, line_color, mix, shades

THEMES = pytest.mark.parametrize("theme", [LIGHT, DARK], ids=lambda theme: theme.name)

# Machado, Oliveira and Fernandes 2009, IEEE TVCG 15:1291, severity 1.0: linear RGB as people without one kind of
# cone see it (from memory). Rows give the seen red, green and blue.
DEFICIENCIES = {
    "protan": [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]],
    "deutan": [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.011820, 0.042940, 0.968881]],
    "tritan": [[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602], [0.004733, 0.691367, 0.303900]],
}


@THEMES
def test_text_reads_on_its_ground(theme: Theme) -> None:
    """WCAG 2.2, 1.4.3: at least 4.5 to 1."""
    for ground in (theme.canvas, theme.panel, theme.raised):
        assert contrast(QColor(theme.ink), QColor(ground)) >= 4.5
    for ground in (theme.canvas, theme.panel, theme.raised, theme.tint):
        assert contrast(QColor(theme.muted), QColor(ground)) >= 4.5
    for ground in (theme.canvas, theme.panel, theme.raised, theme.tint):
        assert contrast(QColor(theme.accent), QColor(ground)) >= 4.5
    assert contrast(QColor(theme.on_accent), QColor(theme.accent)) >= 4.5
    assert contrast(QColor(theme.ink), QColor(theme.tint)) >= 4.5


@THEMES
def test_marks_stand_out_from_the_ground(theme: Theme) -> None:
    """WCAG 2.2, 1.4.11: at least 3 to 1. `mark` draws arrows, rims, ticks, edges of fields and of boxes to check;
    `accent` what has the focus, is checked or selected, and the line under the page that is shown."""
    for ground in (theme.canvas, theme.panel, theme.raised, theme.tint):
        assert contrast(QColor(theme.mark), QColor(ground)) >= 3
        assert contrast(QColor(theme.accent), QColor(ground)) >= 3


@THEMES
def test_a_tick_stands_out_from_its_box(theme: Theme) -> None:
    picture = (resources() / f"tick-{theme.name}.svg").read_text()
    tick = QColor(re.search(r'stroke="(#[0-9a-f]{6})"', picture)[1])
    for box in (theme.accent, theme.mark):
        assert contrast(tick, QColor(box)) >= 3


@THEMES
def test_columns_of_odds_stand_out_from_what_is_left_of_them(theme: Theme, qapp: object) -> None:
    """As painted: of two columns, one is filled to its whole height and the other not at all."""
    image = QImage(200, 60, QImage.Format.Format_RGB32)
    image.fill(QColor(theme.panel))
    frame = Frame(QRectF(0, 0, 200, 60), -0.5, 1.5, 0.0, 1.0)
    with QPainter(image) as painter:
        paint_odds(painter, frame, (Odds.of(100, 100), Odds.of(0, 100)), theme)
    full, empty = image.pixelColor(50, 10), image.pixelColor(150, 10)
    assert contrast(full, empty) >= 3
    assert contrast(full, QColor(theme.panel)) >= 3


@THEMES
def test_curves_stand_out_from_the_paper_whatever_their_belief(theme: Theme) -> None:
    for shade in shades(theme):
        seen = line_color(shade.name(), theme)
        assert contrast(seen, QColor(theme.panel)) >= 3
        assert seen == shade or contrast(shade, QColor(theme.panel)) < 3


@THEMES
def test_discs_have_a_rim_that_stands_out(theme: Theme) -> None:
    """Beliefs near the middle are nearly the paper's colour; the rim of `mark` says that somebody is there."""
    atlas = DiscAtlas(30.0, 1.0, theme)
    page = QPixmap(80, 80)
    page.fill(QColor(theme.canvas))
    with QPainter(page) as painter:
        atlas.draw(painter, np.array([[40.0, 40.0]]), np.array([127]), 1.0)
    across = [page.toImage().pixelColor(x, 40) for x in range(5, 20)]
    assert max(contrast(color, QColor(theme.canvas)) for color in across) >= 3


@THEMES
def test_numbers_read_on_every_shade(theme: Theme) -> None:
    assert all(contrast(ink_on(shade.rgb()), shade) >= 4.5 for shade in shades(theme))


def _lab(color: QColor, deficiency: str | None) -> np.ndarray:
    """CIE 1976 L*a*b* (D65) of a colour as seen with a deficiency."""
    srgb = np.array([color.redF(), color.greenF(), color.blueF()])
    linear = np.where(srgb <= 0.04045, srgb / 12.92, ((srgb + 0.055) / 1.055) ** 2.4)
    if deficiency is not None:
        linear = np.clip(np.array(DEFICIENCIES[deficiency]) @ linear, 0, 1)
    to_xyz = [[0.4124564, 0.3575761, 0.1804375], [0.2126729, 0.7151522, 0.0721750], [0.0193339, 0.1191920, 0.9503041]]
    x, y, z = (np.array(to_xyz) @ linear) / [0.95047, 1.0, 1.08883]
    fx, fy, fz = (v ** (1 / 3) if v > 0.008856 else 7.787 * v + 16 / 116 for v in (x, y, z))
    return np.array([116 * fy - 16, 500 * (fx - fy), 200 * (fy - fz)])


@THEMES
@pytest.mark.parametrize("deficiency", [None, *DEFICIENCIES])
def test_for_and_against_look_different_to_everybody(theme: Theme, deficiency: str | None) -> None:
    """Both ends and both quarters of the scale stay far apart (CIE76 difference; 2.3 is just noticeable)."""
    for low, high, least in ((0, 10, 40), (2, 8, 20)):
        ends = (_lab(QColor(theme.stops[stop]), deficiency) for stop in (low, high))
        assert np.linalg.norm(next(ends) - next(ends)) >= least


@THEMES
@pytest.mark.parametrize("deficiency", [None, *DEFICIENCIES])
def test_neighbouring_stops_can_be_told_apart_by_everybody(theme: Theme, deficiency: str | None) -> None:
    """At least four times what is just noticeable (CIE76, 2.3) from one stop to the next, and between the two that
    stand as far below and above the middle as each other."""
    seen = [_lab(QColor(stop), deficiency) for stop in theme.stops]
    assert min(np.linalg.norm(one - other) for one, other in pairwise(seen)) >= 9.2
    mirrored = [np.linalg.norm(seen[place] - seen[-1 - place]) for place in range(5)]
    assert min(mirrored) >= 18.4


@THEMES
def test_in_grey_both_halves_grow_stronger_step_by_step(theme: Theme) -> None:
    """In grey, distance from the middle is left of the scale; which side it is, numbers and names say."""
    grey = [float(_lab(QColor(stop), None)[0]) for stop in theme.stops]
    away = -1 if theme is LIGHT else 1
    for half in (grey[5::-1], grey[5:]):
        assert np.all(np.diff(half) * away >= 9)


@THEMES
@pytest.mark.parametrize("deficiency", [None, *DEFICIENCIES])
def test_what_is_selected_differs_from_what_is_not_for_everybody(theme: Theme, deficiency: str | None) -> None:
    accent, mark, ink = (_lab(QColor(color), deficiency) for color in (theme.accent, theme.mark, theme.ink))
    assert np.linalg.norm(accent - mark) >= 18.4
    assert np.linalg.norm(accent - ink) >= 18.4


@THEMES
def test_in_grey_the_selected_differs_from_what_is_not(theme: Theme) -> None:
    assert contrast(QColor(theme.accent), QColor(theme.mark)) >= 1.7


def test_the_neutral_middle_is_at_the_pass_mark() -> None:
    raised = Question(id="q", text="?", low=0.0, high=100.0, pass_mark=80.0)
    assert belief_fractions(np.array([0.0, 40.0, 80.0, 90.0, 100.0]), raised).tolist() == [0, 0.25, 0.5, 0.75, 1]
    unasked = Question(id="q", text="?", low=1.0, high=9.0)
    assert belief_fractions(np.array([1.0, 5.0, 9.0]), unasked).tolist() == [0, 0.5, 1]


@pytest.mark.parametrize("mark", [0.0, 100.0])
def test_a_pass_mark_at_an_end_still_gives_colours_in_range(mark: float) -> None:
    question = Question(id="q", text="?", low=0.0, high=100.0, pass_mark=mark)
    fractions = belief_fractions(np.linspace(0, 100, 11), question)
    assert np.all((fractions >= 0) & (fractions <= 1))
    assert np.all(np.diff(fractions) >= 0)


def test_mixing_is_opaque_and_ends_at_both_colours() -> None:
    assert mix("#000000", "#ffffff", 0.0).name() == "#000000"
    assert mix("#000000", "#ffffff", 1.0).name() == "#ffffff"
    assert mix("#000000", "#ffffff", 0.5).alpha() == 255


def test_shades_begin_and_end_at_the_stops() -> None:
    for theme in (LIGHT, DARK):
        assert (shades(theme)[0].name(), shades(theme)[-1].name()) == (theme.stops[0], theme.stops[-1])


def test_the_label_question_is_neutral_at_fifty() -> None:
    assert belief_fractions(np.array([50.0]), LABEL)[0] == 0.5
