"""Variants compared: what the table and the chart say is what the rehearsals say, and it follows every edit."""

from __future__ import annotations

import csv
from collections.abc import Callable, Iterator
from dataclasses import replace as with_fields
from pathlib import Path

import numpy as np
import pytest
from circles import AS_IT_STANDS, CIRCLES, SWAP
from msgspec.structs import replace
from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QColor, QFont, QGuiApplication, QImage, QPainter
from PySide6.QtWidgets import QApplication, QPushButton, QStyle, QStyleOptionViewItem, QWidget
from pytestqt.qtbot import QtBot

from deliberate.rehearsal.comparing import AGREE, HEADINGS, SPREAD, VOICES, VOTE, figures
from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario import edits
from deliberate.scenario.values import Scenario
from deliberate.window.chart.frame import Frame
from deliberate.window.comparison import ComparisonDialog
from deliberate.window.comparison.picture import DASHES, Line, paint_lines, spaced
from deliberate.window.comparison.table import letter
from deliberate.window.findings_panel import effect_lines
from deliberate.window.session import Session
from deliberate.window.theme import LIGHT, Look

TOGETHER = "Amina hears Davor"
FLAT = 60.0  # beliefs
LEFT = Qt.MouseButton.LeftButton


def pair(scenario: Scenario = CIRCLES) -> Scenario:
    both = edits.add_variant(scenario, copy_of=AS_IT_STANDS, name=TOGETHER)
    return edits.add_arrow(both, "amina", "davor", variant=TOGETHER)


@pytest.fixture
def opened(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session]
) -> Iterator[Callable[..., ComparisonDialog]]:
    windows: list[QWidget] = []
    dialogs: list[ComparisonDialog] = []

    def open_one(scenario: Scenario | None = None) -> ComparisonDialog:
        session = open_session(scenario or pair())
        window = QWidget()
        window.session = session
        dialog = ComparisonDialog(session, look, window)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose, False)
        dialog.show()
        qtbot.waitExposed(dialog)
        windows.append(window)
        dialogs.append(dialog)
        return dialog

    yield open_one
    for dialog in dialogs:
        dialog.close()
    for window in windows:
        window.deleteLater()


def row(dialog: ComparisonDialog, place: int) -> list[str]:
    return [dialog.model.index(place, column).data() for column in range(dialog.model.columnCount())]


def click_mark(qtbot: QtBot, dialog: ComparisonDialog, place: int) -> None:
    """Click the mark in front of a variant's name."""
    index = dialog.model.index(place, 0)
    option = QStyleOptionViewItem()
    dialog.table.initViewItemOption(option)
    option.rect = dialog.table.visualRect(index)
    option.features |= QStyleOptionViewItem.ViewItemFeature.HasCheckIndicator
    box = dialog.table.style().subElementRect(QStyle.SubElement.SE_ItemViewItemCheckIndicator, option, dialog.table)
    qtbot.mouseClick(dialog.table.viewport(), LEFT, pos=box.center())


def test_the_table_says_what_the_rehearsals_say(opened) -> None:
    dialog = opened()
    scenario = pair()
    for place, variant in enumerate(scenario.variants):
        rehearsal = rehearse(scenario, variant.name)
        expected = figures(rehearsal, variant, scenario.questions[0])
        assert row(dialog, place) == [f"{letter(place)}  {variant.name}", *expected]
    # By hand: two closed circles stay at 80 and 20, and the vote ties.
    assert row(dialog, 0)[1:] == [
        "yes", "20 to 80", "no common view", "60", "6.0", "3 for, 3 against: does not pass",
    ]  # fmt: skip


def test_a_swing_and_an_empty_variant_are_told(opened) -> None:
    assert row(opened(SWAP), 0)[1:4] == ["keeps swinging", "between 20 and 80", "keeps swinging"]
    empty = edits.remove_people(CIRCLES, [p.id for p in CIRCLES.variants[0].people], variant=AS_IT_STANDS)
    dialog = opened(empty)
    assert row(dialog, 0)[2] == "nobody present"


def test_no_figure_is_cut(opened) -> None:
    """A vote with objections takes three lines."""
    first = CIRCLES.variants[0]
    objected = replace(CIRCLES, questions=(replace(CIRCLES.questions[0], objection_mark=25.0),))
    people = tuple(replace(one, ballots=one.ballots * 1000.5) for one in first.people)
    dialog = opened(pair(replace(objected, variants=(replace(first, people=people),))))
    for width in (940, 700):
        dialog.resize(width, 640)
        QApplication.processEvents()
        option = QStyleOptionViewItem()
        dialog.table.initViewItemOption(option)
        for column in range(dialog.model.columnCount()):
            index = dialog.model.index(0, column)
            option.rect = dialog.table.visualRect(index)
            assert dialog.table.itemDelegate().sizeHint(option, index).height() <= option.rect.height()


def test_the_words_are_those_of_a_tried_change(opened) -> None:
    dialog = opened()
    scenario = pair()
    before, after = (rehearse(scenario, variant.name) for variant in scenario.variants)
    for name, was, now in effect_lines(before, after, scenario.questions[0]):
        column = HEADINGS.index(name) + 1
        assert (row(dialog, 0)[column], row(dialog, 1)[column]) == (was, now)
    assert {AGREE, SPREAD, VOICES, VOTE} <= set(HEADINGS)


def test_the_lines_are_the_rehearsals(qtbot: QtBot, opened) -> None:
    dialog = opened()
    scenario = pair()
    for line, variant in zip(dialog.plot.lines, scenario.variants, strict=True):
        rehearsal = rehearse(scenario, variant.name)
        assert np.allclose(line.of("beliefs"), rehearsal.rounds.mean(axis=1), rtol=0, atol=1e-12)
        assert (line.of("spread") == rehearsal.spread).all()
        assert line.of("votes").tolist() == [tally.in_favour for tally in rehearsal.ballot]
        assert (line.course.highest == rehearsal.rounds.max(axis=1)).all()


def test_a_mark_takes_a_variant_off_and_back(qtbot: QtBot, opened) -> None:
    dialog = opened()
    click_mark(qtbot, dialog, 0)
    assert [line.name for line in dialog.plot.lines] == [TOGETHER]
    assert row(dialog, 0)[1:] == [""] * len(HEADINGS)
    dialog.table.setFocus()
    dialog.table.setCurrentIndex(dialog.model.index(0, 0))
    qtbot.keyClick(dialog.table, Qt.Key.Key_Space)
    assert len(dialog.plot.lines) == 2


def test_it_follows_edits_questions_and_new_variants(opened) -> None:
    dialog = opened()
    session = dialog._session
    before = row(dialog, 1)
    kept = dialog.comparison.rehearsal(0)
    session.edit("Move", lambda s: edits.set_belief(s, ["amina"], "label", 0.0, variant=TOGETHER))
    assert row(dialog, 1) != before
    assert dialog.comparison.rehearsal(0) is kept  # the other variant is the same value
    session.edit("Add", lambda s: edits.add_variant(s, copy_of=TOGETHER, name="Third"), show="Third")
    assert dialog.model.rowCount() == 3
    assert [line.letter for line in dialog.plot.lines] == ["A", "B", "C"]
    session.undo()
    session.undo()
    assert row(dialog, 1) == before


def test_a_crowd_is_worked_out_beside_the_window(qtbot: QtBot, opened, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("deliberate.window.comparison.run.AT_ONCE_PEOPLE", 5)
    dialog = opened()
    assert row(dialog, 0)[1] == "…"
    qtbot.waitUntil(lambda: len(dialog.plot.lines) == 2)
    assert row(dialog, 0)[1] == "yes"


def test_closing_in_the_middle_of_work_leaves_nothing_running(opened, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("deliberate.window.comparison.run.AT_ONCE_PEOPLE", 5)
    dialog = opened()
    dialog.close()
    assert not dialog.comparison._errand.running


def test_it_is_copied_and_saved_for_a_sheet(qtbot: QtBot, opened, tmp_path: Path) -> None:
    dialog = opened(edits.rename_variant(pair(), TOGETHER, "=1+1, so to speak"))
    button = next(one for one in dialog.findChildren(QPushButton) if one.text() == "&Copy the table")
    qtbot.mouseClick(button, LEFT)
    lines = QGuiApplication.clipboard().text().splitlines()
    assert lines[0].split("\t") == ["Variant", *HEADINGS]
    assert len(lines) == 3
    dialog.save(tmp_path / "table.csv")
    rows = list(csv.reader((tmp_path / "table.csv").read_text(encoding="utf-8-sig").splitlines()))
    assert rows[2][0] == "'=1+1, so to speak"  # not a formula
    assert rows[1][1:] == row(dialog, 0)[1:]
    click_mark(qtbot, dialog, 0)
    dialog.copy_table()
    assert len(QGuiApplication.clipboard().text().splitlines()) == 2


def test_saving_where_nothing_can_be_saved_is_told(qtbot: QtBot, opened, tmp_path: Path) -> None:
    dialog = opened()
    with qtbot.waitSignal(dialog._session.refused) as told:
        dialog.save(tmp_path / "missing" / "table.csv")
    assert told.args[0].startswith("The table was not saved: ")


def test_the_picture_can_be_copied(opened) -> None:
    opened().copy_picture()
    assert not QGuiApplication.clipboard().pixmap().isNull()


def test_every_line_has_a_dash_and_a_letter_of_its_own(opened) -> None:
    scenario = pair()
    for name in ("C", "D", "E", "F"):
        scenario = edits.add_variant(scenario, copy_of=TOGETHER, name=name)
    lines = opened(scenario).plot.lines
    assert len({line.dashes for line in lines}) == len(lines) == len(DASHES)
    assert len({line.letter for line in lines}) == len(lines)
    assert letter(25) == "Z"
    assert letter(26) == "A2"


def test_labels_stay_apart_and_inside(opened) -> None:
    inside = QRectF(0, 0, 100, 100)
    assert spaced([50, 50, 50], 14, inside) == [50, 64, 78]
    assert spaced([98, 99], 14, inside) == [79, 93]
    assert spaced([-5, 0], 14, inside) == [7, 21]


def test_without_colour_the_lines_differ(opened) -> None:
    """Of each line there is ink where the other has a gap, in grey alone."""
    lines = opened().plot.lines
    frame = Frame(QRectF(0, 0, 400, 200), 0.0, 8.0, 0.0, 70.0)
    grey = []
    for line in (flat(line, place) for place, line in enumerate(lines)):
        image = QImage(400, 200, QImage.Format.Format_Grayscale8)
        image.fill(QColor(LIGHT.panel))
        with QPainter(image) as painter:
            paint_lines(painter, frame, [line], "spread", -1, None, 6, LIGHT, QFont())
        y = int(frame.y(FLAT))
        grey.append([image.pixelColor(x, y).lightness() < 128 for x in range(10, 250)])
    assert all(grey[0])
    assert 0.3 < sum(grey[1]) / len(grey[1]) < 0.9


@pytest.mark.parametrize("forward", [0, 1])
def test_a_range_within_the_range_brought_forward_is_seen(opened, forward: int) -> None:
    wide, narrow = (ranging(line, place, 30.25 - 20 * place) for place, line in enumerate(opened().plot.lines[:2]))
    frame = Frame(QRectF(0, 0, 400, 200), 0.0, 8.0, 0.0, 100.0)
    image = QImage(400, 200, QImage.Format.Format_RGB32)
    image.fill(QColor(LIGHT.panel))
    with QPainter(image) as painter:
        paint_lines(painter, frame, [wide, narrow], "beliefs", forward, None, 6, LIGHT, QFont())
    for line in (wide, narrow):
        at = int(frame.y(float(line.course.highest[0])))
        near = [[image.pixelColor(x, at + by).lightness() for x in range(10, 250)] for by in (-1, 0)]
        assert min(map(min, near)) < 170


def ranging(line: Line, place: int, half: float) -> Line:
    """The line of another place, with beliefs from `half` below to `half` above the middle all along."""
    levels = {"highest": 50 + half, "mean": 50.0, "lowest": 50 - half}
    return with_fields(
        line, place=place, course=with_fields(line.course, **{name: np.full(7, at) for name, at in levels.items()})
    )


def flat(line: Line, place: int) -> Line:
    """The line of another place, at one height all along."""
    return with_fields(line, place=place, course=with_fields(line.course, spread=np.full(7, FLAT)))


def test_the_variant_pointed_at_in_the_table_comes_forward(qtbot: QtBot, opened) -> None:
    dialog = opened()
    assert dialog.plot.forward == 0
    dialog.table.setFocus()
    qtbot.keyClick(dialog.table, Qt.Key.Key_Down)
    assert dialog.plot.forward == 1
    dialog.plot.setFocus()
    qtbot.keyClick(dialog.plot, Qt.Key.Key_Up)
    assert dialog.plot.forward == 0


def test_another_figure_is_chosen_by_keyboard_and_spoken(qtbot: QtBot, opened) -> None:
    dialog = opened()
    assert dialog.plot.accessibleDescription().startswith(f"A, {AS_IT_STANDS}: from 50 to 50; B, ")
    dialog.figure.setFocus()
    qtbot.keyClick(dialog.figure, Qt.Key.Key_Down)
    assert dialog.plot.figure == "spread"
    assert dialog.plot.accessibleDescription().startswith(f"A, {AS_IT_STANDS}: from 80 to 60; B, ")
    cell = dialog.model.index(1, 4)
    assert cell.data(Qt.ItemDataRole.AccessibleTextRole) == f"{SPREAD}: {cell.data()}"
    for widget in dialog.findChildren(QWidget):
        if widget.focusPolicy() & Qt.FocusPolicy.TabFocus and widget.isVisible() and not widget.focusProxy():
            assert widget.accessibleName() or getattr(widget, "text", str)(), widget


def test_votes_are_offered_only_where_there_are_any(qtbot: QtBot, opened) -> None:
    dialog = opened()
    session = dialog._session
    dialog.figure.setCurrentIndex(2)
    dialog._show_figure(2)
    session.edit("No vote", lambda s: edits.change_question(s, "label", pass_mark=None))
    assert dialog.plot.figure == "beliefs"
    assert not dialog.figure.model().item(2).isEnabled()
    assert row(dialog, 0)[-1] == "no vote"


def test_one_variant_says_how_there_can_be_two(opened) -> None:
    dialog = opened(CIRCLES)
    assert "Add a copy" in dialog.hint.text()
    assert dialog.hint.isVisible()


def test_codes_stand_for_names_here_too(opened) -> None:
    dialog = opened()
    dialog._session.show_codes(True)
    assert row(dialog, 1)[0] == "B  P1 hears P4"
    assert "Amina" not in dialog.model.text("\t") + dialog.plot.accessibleDescription()
    assert [line.name for line in dialog.plot.lines] == [AS_IT_STANDS, "P1 hears P4"]


def test_names_that_look_like_markup_are_shown_as_they_are(opened) -> None:
    name = "<b>Bold</b> & <img src='x'>"
    dialog = opened(edits.rename_variant(pair(), TOGETHER, name))
    assert row(dialog, 1)[0] == f"B  {name}"
    assert "&lt;b&gt;" in dialog.model.index(1, 0).data(Qt.ItemDataRole.ToolTipRole)


def test_escape_closes_it(qtbot: QtBot, opened) -> None:
    dialog = opened()
    qtbot.keyClick(dialog.table, Qt.Key.Key_Escape)
    assert not dialog.isVisible()


def test_absent_people_do_not_count_in_the_mean(opened) -> None:
    people = tuple(replace(person, present=person.id != "amina") for person in CIRCLES.variants[0].people)
    scenario = replace(CIRCLES, variants=(replace(CIRCLES.variants[0], people=people),))
    (line,) = opened(scenario).plot.lines
    assert line.course.mean[0] == pytest.approx(np.mean([80, 70, 30, 20, 10]), abs=1e-12)
    assert line.course.highest[0] == 80
