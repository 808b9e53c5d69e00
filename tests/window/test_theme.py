from __future__ import annotations

import numpy as np
import pytest
from circles import LABEL
from PySide6.QtGui import QColor

from deliberate.scenario.values import Question
from deliberate.window.theme import DARK, LIGHT, Theme, belief_fractions, contrast, ink_on, mix, shades

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
    for ground in (theme.canvas, theme.panel):
        assert contrast(QColor(theme.muted), QColor(ground)) >= 4.5
    for ground in (theme.canvas, theme.panel, theme.tint):
        assert contrast(QColor(theme.accent), QColor(ground)) >= 4.5
    assert contrast(QColor(theme.on_accent), QColor(theme.accent)) >= 4.5
    assert contrast(QColor(theme.ink), QColor(theme.tint)) >= 4.5


@THEMES
def test_marks_stand_out_from_the_ground(theme: Theme) -> None:
    """WCAG 2.2, 1.4.11: at least 3 to 1."""
    assert contrast(QColor(theme.mark), QColor(theme.canvas)) >= 3
    assert contrast(QColor(theme.mark), QColor(theme.panel)) >= 3


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
