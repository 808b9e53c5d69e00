from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import Qt, QTimer
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QAbstractButton, QApplication, QComboBox, QLabel
from pytestqt.qtbot import QtBot
from rooms import ASSEMBLY, HOSTILE, MARKUP, TWO_HALVES

from deliberate.errors import DeliberateError
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.seating.told import company, standing, summary
from deliberate.scenario import edits
from deliberate.window.seating import SeatingDialog, paper
from deliberate.window.seating.dialog import ANOTHER_WISH, MOVED_ON
from deliberate.window.theme import DARK, Look

Open = Callable[..., SeatingDialog]
AS_IT_STANDS = TWO_HALVES.variants[0].name


def press(button: QAbstractButton) -> None:
    QTest.mouseClick(button, Qt.MouseButton.LeftButton)


def choose(box: QComboBox, text: str) -> None:
    """By typing the beginning of an entry, as at the keyboard; a pause ends what was typed before."""
    box.setFocus()
    QTest.qWait(QApplication.keyboardInputInterval() + 50)
    QTest.keyClicks(box, text)
    assert box.currentText().startswith(text)


def found(qtbot: QtBot, dialog: SeatingDialog) -> SeatingDialog:
    press(dialog.find)
    qtbot.waitUntil(lambda: dialog.seating is not None, timeout=20_000)
    return dialog


def test_it_finds_and_shows_a_seating(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog()
    assert dialog.form.comes_to.text() == "Eight people at two tables of 4."
    assert not dialog.make.isEnabled()
    found(qtbot, dialog)
    assert dialog.result.says.text() == summary(dialog.seating, TWO_HALVES.questions[0])
    assert dialog.result.standing.text() == f"{standing(dialog.seating)} {company(dialog.seating)}"
    assert "1,225" in dialog.result.standing.text()
    cards = [(card.title, card.names) for card in dialog.result.cards]
    assert [title for title, _ in cards] == ["Table 1", "Table 2"] * 2
    people = {one.id: one.name for one in TWO_HALVES.variants[0].people}
    shown = [tuple(people[one] for one in table) for tables in dialog.seating.rotations for table in tables]
    assert [names for _, names in cards] == shown
    assert dialog.result.cards[0].accessibleName() == f"Table 1: {', '.join(shown[0])}"
    assert dialog.make.isEnabled()


def test_the_fields_make_the_wish(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog()
    form = dialog.form
    choose(form.counted, "People at a table")
    assert form.wish.tables is None
    assert form.wish.size == 4
    form.number.setFocus()
    QTest.keyClick(form.number, Qt.Key.Key_Down)
    assert form.wish.size == 3
    assert form.comes_to.text() == "Eight people at two tables of 3 and one table of 2."
    for spin, key in ((form.rotations, Qt.Key.Key_Up), (form.rounds, Qt.Key.Key_Down)):
        spin.setFocus()
        QTest.keyClick(spin, key)
    choose(form.unheard, "go to the own view")
    choose(form.place, "after")
    wish = form.wish
    assert (wish.rotations, wish.rounds, wish.unheard, wish.place) == (3, 1, "own", "after")
    assert wish.goal == "less-spread"
    assert form.place.count() == 2, "the plan has no table stages to take the place of"


def test_the_variant_is_one_step_is_shown_and_does_what_was_told(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = found(qtbot, open_dialog())
    session, seating = dialog.parentWidget().session, dialog.seating
    press(dialog.make)
    assert session.variant.name == "Two tables, twice mixed"
    stages = session.variant.plan.stages
    assert [stage.setting for stage in stages] == ["tables", "tables", "plenary"]
    assert tuple(stage.tables for stage in stages[:2]) == seating.rotations
    assert rehearse(session.scenario, session.variant.name).spread[-1] == seating.after
    assert session.undo_step == "Mixed tables: Two tables, twice mixed"
    assert dialog.seating is seating, "what it shows still holds"
    assert not dialog.make.isEnabled()
    session.undo()
    assert session.scenario is TWO_HALVES
    assert dialog.make.isEnabled()


def test_conditions_are_added_kept_and_removed(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog()
    conditions = dialog.form.conditions
    choose(conditions.first, "Amina")
    choose(conditions.second, "Amina")
    assert not conditions.add_pair.isEnabled(), "nobody sits with herself"
    choose(conditions.second, "Bilal")
    press(conditions.add_pair)
    assert dialog.form.wish.together == (("amina", "bilal"),)
    choose(conditions.kind, "never with")
    press(conditions.add_pair)
    assert dialog.form.wish.together == ()
    assert dialog.form.wish.apart == (("amina", "bilal"),)
    press(conditions.add_role)
    press(conditions.linked)
    assert dialog.form.wish.roles == ("speaker",)
    assert dialog.form.wish.linked
    texts = [conditions.list.item(row).text() for row in range(conditions.list.count())]
    assert texts == ["Amina and Bilal never at one table", 'Somebody with the role "speaker" at every table']
    found(qtbot, dialog)
    for tables in dialog.seating.rotations:
        for table in tables:
            assert not {"amina", "bilal"} <= set(table)
            assert {"amina", "emeka"} & set(table)
    conditions.list.setFocus()
    conditions.list.setCurrentRow(0)
    QTest.keyClick(conditions.list, Qt.Key.Key_Delete)
    assert dialog.form.wish.apart == ()
    assert dialog.seating is None
    assert dialog.result.standing.text() == ANOTHER_WISH


def test_what_cannot_be_met_is_said(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog()
    dialog.form.number.setFocus()
    dialog.form.number.selectAll()
    QTest.keyClicks(dialog.form.number, "7")
    assert "at most 4" in dialog.form.comes_to.text()
    press(dialog.find)
    qtbot.waitUntil(lambda: not dialog.errand.running, timeout=20_000)
    assert dialog.result.standing.text() == (
        "Seven tables for eight people would leave somebody alone at one: lay at most 4."
    )
    assert dialog.seating is None
    assert dialog.find.isEnabled()


def test_stopping_shows_the_best_so_far(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog(ASSEMBLY)
    press(dialog.find)
    assert dialog.stop.isVisible()
    assert not dialog.find.isEnabled()
    qtbot.waitUntil(lambda: dialog.bar.value() > 0, timeout=20_000)
    press(dialog.stop)
    qtbot.waitUntil(lambda: dialog.seating is not None, timeout=20_000)
    assert dialog.result.standing.text().startswith("The search was stopped; this is the best seating so far.")
    assert not dialog.stop.isVisible()


def test_escape_stops_the_search_first_and_then_closes(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog(ASSEMBLY)
    press(dialog.find)
    QTest.keyClick(dialog, Qt.Key.Key_Escape)
    qtbot.waitUntil(lambda: dialog.seating is not None, timeout=20_000)
    assert dialog.isVisible()
    with qtbot.waitSignal(dialog.destroyed):
        QTest.keyClick(dialog, Qt.Key.Key_Escape)


def test_closing_while_it_searches_leaves_nothing_behind(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog(ASSEMBLY)
    press(dialog.find)
    with qtbot.waitSignal(dialog.destroyed):
        press(dialog.close_button)


def test_what_was_found_goes_when_the_meeting_moves_on(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = found(qtbot, open_dialog())
    session = dialog.parentWidget().session
    press(dialog.form.conditions.add_pair)
    found(qtbot, dialog)
    session.edit("Hana leaves", lambda s: edits.remove_people(s, ["bilal"], variant=AS_IT_STANDS))
    assert dialog.seating is None
    assert dialog.result.standing.text() == MOVED_ON
    assert not dialog.make.isEnabled()
    assert dialog.form.wish.together == (), "a condition on somebody who is gone goes too"
    assert dialog.form.comes_to.text() == "Seven people at one table of 4 and one table of 3."


def test_moving_somebody_on_the_picture_leaves_what_was_found(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = found(qtbot, open_dialog())
    session, seating = dialog.parentWidget().session, dialog.seating
    session.edit("Move", lambda s: edits.move_people(s, {"amina": (7.0, 7.0)}, variant=AS_IT_STANDS))
    assert dialog.seating is seating
    press(dialog.make)
    assert session.variant.people[0].x == 7.0
    session.edit("Copy", lambda s: edits.add_variant(s, copy_of=AS_IT_STANDS, name="Other"), show="Other")
    assert dialog.seating is None, "another variant is another question"


def test_a_result_of_a_meeting_that_moved_on_meanwhile_is_dropped(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog(ASSEMBLY)
    press(dialog.find)
    session = dialog.parentWidget().session
    session.edit("Firm", lambda s: edits.set_firmness(s, ["name00"], 0.5, variant=AS_IT_STANDS))
    assert not dialog.errand.running
    dialog.errand.close()
    qtbot.wait(20)
    assert dialog.seating is None


def test_the_list_can_be_copied(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = found(qtbot, open_dialog())
    press(dialog.copy)
    text = QGuiApplication.clipboard().text()
    assert text.startswith("Label\n\nMixed tables 1\nTable 1: Amina, ")
    assert "By name\nAmina: table 1, then table 1\n" in text


def test_the_list_can_be_saved_as_pdf(qtbot: QtBot, open_dialog: Open, tmp_path: Path) -> None:
    dialog = found(qtbot, open_dialog(HOSTILE))
    path = tmp_path / "tables.pdf"
    paper.save_pdf(dialog._html(), "Tables", path)
    assert path.read_bytes().startswith(b"%PDF-")
    assert path.stat().st_size > 2_000
    with pytest.raises(DeliberateError):
        paper.save_pdf(dialog._html(), "Tables", tmp_path / "nowhere" / "tables.pdf")


def test_printing_asks_for_the_printer_first(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = found(qtbot, open_dialog())
    asked: list[str] = []
    timer = QTimer()

    def leave() -> None:
        if (box := QApplication.activeModalWidget()) is not None:
            timer.stop()
            asked.append(box.windowTitle())
            QTest.keyClick(box, Qt.Key.Key_Escape)

    timer.timeout.connect(leave)
    timer.start(20)
    press(dialog.print)
    assert asked == ["Print the list of tables"]
    assert dialog.seating is not None


def test_hostile_names_stay_plain_text(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog(HOSTILE)
    press(dialog.form.conditions.add_pair)
    found(qtbot, dialog)
    assert MARKUP in dialog.result.cards[0].names
    assert "<b>" not in dialog.result.cards[0].toolTip().removeprefix("<span>").removesuffix("</span>")
    assert all(
        label.textFormat() == Qt.TextFormat.PlainText
        for label in dialog.findChildren(QLabel)
        if MARKUP in label.text()
    )
    assert dialog.form.conditions.list.item(0).text().startswith(MARKUP)
    assert dialog.form.conditions.first.itemText(0) == MARKUP


def test_codes_stand_in_the_tables_too(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog()
    session = dialog.parentWidget().session
    session.show_codes(True)
    found(qtbot, dialog)
    shown = " ".join(card.accessibleName() for card in dialog.result.cards)
    press(dialog.copy)
    for one in TWO_HALVES.variants[0].people:
        assert one.name not in shown
        assert one.name not in QGuiApplication.clipboard().text()
    press(dialog.make)
    assert len(session.meeting.variants) == 2
    assert session.meeting.variants[1].people == TWO_HALVES.variants[0].people


def test_the_cards_wear_the_theme(qtbot: QtBot, open_dialog: Open, look: Look) -> None:
    dialog = found(qtbot, open_dialog())
    look.choose("dark")
    card = dialog.result.cards[0]
    assert len(dialog.result.cards) == 4
    picture = card.grab().toImage()
    assert picture.pixelColor(card.width() - 20, card.height() - 6).name() == DARK.canvas


def test_it_fits_a_small_projector(open_dialog: Open) -> None:
    dialog = open_dialog()
    dialog.resize(900, 560)
    assert (dialog.width(), dialog.height()) == (900, 560)


def test_all_of_it_can_be_done_at_the_keyboard(qtbot: QtBot, open_dialog: Open) -> None:
    dialog = open_dialog()
    dialog.activateWindow()
    qtbot.waitUntil(dialog.isActiveWindow)
    dialog.form.goal.setFocus()
    reached = [dialog.focusWidget()]
    while (now := _tab(dialog)) is not reached[0]:
        reached.append(now)
        assert len(reached) < 40
    form, conditions = dialog.form, dialog.form.conditions
    wanted = [form.goal, form.counted, form.number, form.rotations, form.rounds, form.place, form.unheard]
    wanted += [conditions.first, conditions.kind, conditions.second, conditions.add_pair, conditions.role]
    wanted += [conditions.add_role, conditions.linked, dialog.find, dialog.close_button]
    assert [widget for widget in reached if widget in wanted] == wanted
    dialog.find.setFocus()
    QTest.keyClick(dialog.find, Qt.Key.Key_Return)
    qtbot.waitUntil(lambda: dialog.seating is not None, timeout=20_000)


def _tab(dialog: SeatingDialog) -> object:
    QTest.keyClick(dialog.focusWidget(), Qt.Key.Key_Tab)
    return dialog.focusWidget()


def test_no_two_fields_share_a_letter(open_dialog: Open) -> None:
    dialog = open_dialog()
    texts = [one.text() for kind in (QLabel, QAbstractButton) for one in dialog.findChildren(kind)]
    letters = [text[text.index("&") + 1].casefold() for text in texts if "&" in text]
    assert len(letters) > 8
    assert len(letters) == len(set(letters))
