from __future__ import annotations

from collections.abc import Callable

import pytest
from circles import CIRCLES, LABEL
from msgspec import UNSET
from msgspec.structs import replace
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot
from sidebar_hands import Key, Keys, click, press, replace_text, tick, type_over

from deliberate.scenario.values import AgreementTest, Question, Scenario
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.sidebar.question_page import QuestionPage, vote_in_words

Open = Callable[..., tuple[Sidebar, Session]]
NEXT = Question(id="next", text="When?", low=1.0, high=9.0)
TWO = replace(CIRCLES, questions=(LABEL, NEXT))


def open_page(open_sidebar: Open, scenario: Scenario = CIRCLES) -> tuple[QuestionPage, Session]:
    sidebar, session = open_sidebar(scenario, height=900)
    sidebar.tabs.setCurrentIndex(1)
    QApplication.processEvents()
    return sidebar.question, session


def starts(session: Session) -> list[float]:
    return [person.beliefs["label"] for person in session.variant.people]


def test_it_shows_the_question(open_sidebar: Open) -> None:
    page, _ = open_page(open_sidebar)
    assert page.text.toPlainText() == "Adopt the label?"
    assert (page.low.text(), page.high.text(), page.pass_mark.field.text()) == ("0", "100", "50")
    assert page.pass_mark.box.isChecked()
    assert not page.objection.box.isChecked()
    assert not page.objection.field.isEnabled()
    assert page.vote_words.text() == "For above 50, against below; no vote at exactly 50."


def test_the_text_is_typed_and_handed_over_at_return(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    type_over(page.text, "Adopt <b>it</b> & soon?")
    assert session.question.text == "Adopt <b>it</b> & soon?"
    assert session.undo_step == "Change what is asked"
    session.undo()
    assert page.text.toPlainText() == "Adopt the label?"


def test_an_empty_text_is_refused_and_the_old_one_stays(qtbot: QtBot, open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    with qtbot.waitSignal(session.refused) as refused:
        type_over(page.text, "")
    assert "questions[0].text" in refused.args[0]
    assert page.text.toPlainText() == "Adopt the label?"


def test_escape_takes_back_what_was_typed(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    for field in (page.text, page.unit, page.low):
        replace_text(field, "7")
        press(field, Key.Key_Escape)
        page.high.setFocus()
    assert session.scenario is CIRCLES
    assert (page.text.toPlainText(), page.unit.text(), page.low.text()) == ("Adopt the label?", "", "0")


def test_the_numbers_move_along_with_the_scale(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    type_over(page.high, "10")
    assert starts(session) == [9.0, 8.0, 7.0, 3.0, 2.0, 1.0]
    assert page.pass_mark.field.text() == "5"
    session.undo()
    assert session.scenario is CIRCLES


def test_or_they_stay_where_they_fit(qtbot: QtBot, open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    tick(page.along)
    type_over(page.high, "200")
    assert starts(session) == [90.0, 80.0, 70.0, 30.0, 20.0, 10.0]
    with qtbot.waitSignal(session.refused) as refused:
        type_over(page.high, "60")
    assert "Amina" in refused.args[0]
    assert "in proportion" in refused.args[0]
    assert page.high.text() == "200"


@pytest.mark.parametrize(("text", "what"), [("100", "must go up"), ("low", "must be a number"), ("", "number")])
def test_ends_that_cannot_be_are_refused(qtbot: QtBot, open_sidebar: Open, text: str, what: str) -> None:
    page, session = open_page(open_sidebar)
    with qtbot.waitSignal(session.refused) as refused:
        type_over(page.low, text)
    assert what in refused.args[0]
    assert session.scenario is CIRCLES
    assert page.low.text() == "0"


def test_labels_and_unit(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    type_over(page.low_label, "leave it")
    type_over(page.high_label, "adopt it")
    type_over(page.unit, "points")
    question = session.question
    assert (question.low_label, question.high_label, question.unit) == ("leave it", "adopt it", "points")


def test_marks_are_switched_on_and_off(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    tick(page.objection.box)
    assert session.question.objection_mark == 25.0
    type_over(page.objection.field, "12,5")
    assert session.question.objection_mark == 12.5
    tick(page.hearing.box)
    assert session.question.hearing_range == 25.0
    tick(page.pass_mark.box)
    assert session.question.pass_mark is None
    assert page.vote_words.text() == "No vote on this question."
    assert not page.undecided.isEnabled()
    tick(page.pass_mark.box)
    assert session.question.pass_mark == 50.0
    for _ in range(5):
        session.undo()
    assert session.scenario is CIRCLES


def test_an_emptied_mark_is_dropped(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    type_over(page.pass_mark.field, "")
    assert session.question.pass_mark is None
    assert not page.pass_mark.box.isChecked()


def test_a_mark_off_the_scale_is_refused_with_its_place(qtbot: QtBot, open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    with qtbot.waitSignal(session.refused) as refused:
        type_over(page.pass_mark.field, "101")
    assert "pass_mark" in refused.args[0]
    assert page.pass_mark.field.text() == "50"


def test_the_undecided_band(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    type_over(page.undecided, "10")
    assert session.question.undecided == 10.0
    assert page.vote_words.text() == "For above 60, against below 40, no vote between."
    type_over(page.undecided, "")
    assert session.question.undecided == 0.0


def test_votes_in_words_tell_close_marks_apart() -> None:
    narrow = replace(LABEL, undecided=0.01, objection_mark=10.0)
    assert vote_in_words(narrow) == (
        "For above 50.01, against below 49.99, no vote between. Below 10 it is an objection."
    )


# Several questions


def test_one_question_needs_no_list(open_sidebar: Open) -> None:
    page, _ = open_page(open_sidebar)
    assert not page.questions.rows.isVisible()
    assert not page.questions.remove.isVisible()
    assert page.questions.add.text() == "Add a question"


def test_a_row_switches_the_question(qtbot: QtBot, open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar, TWO)
    rows = page.questions.rows
    qtbot.mouseClick(rows.viewport(), Qt.MouseButton.LeftButton, pos=rows.visualItemRect(rows.item(1)).center())
    assert session.question.id == "next"
    assert page.text.toPlainText() == "When?"
    rows.setFocus()
    press(rows, Key.Key_Up)
    assert session.question.id == "label"
    assert session.undo_step is None


def test_adding_shows_the_new_question_on_the_same_scale(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    click(page.questions.add)
    assert session.scenario.questions[0].id == "label"
    assert session.question.id != "label"
    assert (session.question.low, session.question.high) == (0.0, 100.0)
    assert page.questions.rows.currentRow() == 1
    assert page.text.hasFocus()  # ready to be typed over


def test_questions_are_reordered(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar, TWO)
    click(page.questions.down)
    assert [question.id for question in session.scenario.questions] == ["next", "label"]
    assert session.question.id == "label"
    assert not page.questions.down.isEnabled()
    page.questions.rows.setFocus()
    press(page.questions.rows, Key.Key_Up, Keys.AltModifier)
    assert session.scenario == TWO
    press(page.questions.rows, Key.Key_Up, Keys.AltModifier)
    assert session.scenario == TWO


def test_removing_shows_the_neighbour_and_undo_brings_it_back(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar, TWO)
    click(page.questions.remove)
    assert [question.id for question in session.scenario.questions] == ["next"]
    assert session.question.id == "next"
    assert "label" not in session.variant.people[0].beliefs
    session.undo()
    assert session.scenario is TWO


# Agreement tests


def offered(page: QuestionPage) -> dict[str, object]:
    page.tests._offer()
    return {action.text(): action for action in page.tests.kinds.actions()}


def test_tests_are_added_changed_and_removed(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    offered(page)["Share within a range"].trigger()
    assert session.question.agreement == (AgreementTest(test="share-within", low=50.0, high=100.0, at_least="3/4"),)
    row = page.tests.rows[0]
    type_over(row.fields["at_least"], "80 %")
    type_over(row.fields["low"], "60")
    assert session.question.agreement[0] == AgreementTest(test="share-within", low=60.0, high=100.0, at_least=0.8)
    offered(page)["Spread"].trigger()
    type_over(page.tests.rows[1].fields["at_most"], "5")
    assert session.question.agreement[1] == AgreementTest(test="spread", at_most=5.0)
    click(page.tests.rows[0].remove)
    assert [test.test for test in session.question.agreement] == ["spread"]
    click(page.tests.rows[0].remove)
    assert page.tests.empty.isVisible()


def test_rand_ucla_is_for_one_to_nine(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar, replace(CIRCLES, questions=(LABEL, NEXT)))
    assert not offered(page)["RAND/UCLA"].isEnabled()
    session.show_question("next")
    action = offered(page)["RAND/UCLA"]
    assert action.isEnabled()
    action.trigger()
    assert session.question.agreement == (AgreementTest(test="rand-ucla"),)
    assert session.question.agreement[0].at_most is UNSET


def test_a_test_that_cannot_be_is_refused(qtbot: QtBot, open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    offered(page)["Quartile range"].trigger()
    before = session.scenario
    with qtbot.waitSignal(session.refused) as refused:
        type_over(page.tests.rows[0].fields["at_most"], "-1")
    assert "at_most" in refused.args[0]
    assert session.scenario is before
    assert page.tests.rows[0].fields["at_most"].text() == "12.5"
