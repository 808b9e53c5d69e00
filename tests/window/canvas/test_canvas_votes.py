"""How many votes somebody casts is to be seen and heard, not only found by pointing."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from circles import meeting, person
from msgspec.structs import replace
from PySide6.QtGui import QAccessible, QImage
from pytestqt.qtbot import QtBot

from deliberate.window.canvas import Canvas, overlays
from deliberate.window.canvas.scene import times_words

ONE = meeting((person("Amina", 60.0, (0.0, 0.0)), person("Bilal", 40.0, (200.0, 0.0))), ())


def lower_right(canvas: Canvas, ballots: float, zoom: float) -> np.ndarray:
    """The pixels around the lower right of Amina, who casts so many votes."""
    people = ONE.variants[0].people
    changed = replace(ONE.variants[0], people=(replace(people[0], ballots=ballots), people[1]))
    canvas.session.open(replace(ONE, variants=(changed,)), None)
    canvas.picture.look_at(canvas.picture.view.zoomed(zoom / canvas.picture.view.zoom, 450, 350, 36.0))
    canvas.repaint()
    picture = canvas.picture
    x, y = picture.points[0] + picture.radius * 0.74
    reach = max(round(picture.radius * 0.5), 6)
    image = canvas.grab().toImage().convertToFormat(QImage.Format.Format_RGB32)
    box = image.copy(round(x) - reach, round(y) - reach, 2 * reach, 2 * reach)
    return np.array(box.constBits()).reshape(box.height(), -1).copy()


@pytest.mark.parametrize("zoom", [1.0, 0.3], ids=["large", "small"])
def test_another_number_of_votes_than_one_is_marked(open_canvas: Callable[..., Canvas], zoom: float) -> None:
    canvas = open_canvas(ONE)
    one, none, many = (lower_right(canvas, ballots, zoom) for ballots in (1.0, 0.0, 2.5))
    assert not np.array_equal(one, many)
    assert not np.array_equal(none, many)


def test_the_legend_explains_the_mark_where_there_is_one(open_canvas: Callable[..., Canvas]) -> None:
    canvas = open_canvas(ONE)
    assert canvas.picture.legend() == []
    lower_right(canvas, 2.5, 1.0)
    assert canvas.picture.legend() == [overlays.TIMES]


def test_a_screen_reader_says_the_votes(open_canvas: Callable[..., Canvas], qtbot: QtBot) -> None:
    canvas = open_canvas(ONE)
    lower_right(canvas, 2.5, 1.0)
    read = QAccessible.queryAccessibleInterface(canvas)
    assert read.child(0).text(QAccessible.Text.Description) == "Amina: 60, 2.5 votes"


@pytest.mark.parametrize(
    ("ballots", "words"), [(2.5, "×2.5"), (42.0, "×42"), (1200.0, "×1,200"), (1 / 3, "×0.33"), (0.001, "×<0.01")]
)
def test_votes_in_few_digits(ballots: float, words: str) -> None:
    assert times_words(ballots) == words
