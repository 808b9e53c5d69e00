from __future__ import annotations

from collections.abc import Callable

import pytest
from circles import CIRCLES, LABEL
from msgspec.structs import replace
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot
from sidebar_hands import choose, click, tick, type_over

from deliberate.scenario.rules import READY_RULES
from deliberate.scenario.values import Ballot, BallotTest, Scenario
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.sidebar.ballot_page import NO_MARK, NO_OBJECTIONS, OF_WHAT, OWN_RULE, BallotPage

Open = Callable[..., tuple[Sidebar, Session]]


def open_page(open_sidebar: Open, scenario: Scenario = CIRCLES) -> tuple[BallotPage, Session]:
    sidebar, session = open_sidebar(scenario, height=900)
    sidebar.tabs.setCurrentIndex(2)
    QApplication.processEvents()
    return sidebar.ballot, session


def test_the_rule_is_said_in_words(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    assert page.words.text() == (
        "Passes when more than half of the votes cast are for; at least half of those with a vote must be present."
    )
    assert page.ready.currentText() == "Simple majority"
    choose(page.ready, "Two-thirds of votes cast")
    assert page.words.text().startswith("Passes when at least two thirds of the votes cast are for")
    assert session.undo_step == "Vote by “Two-thirds of votes cast”"


@pytest.mark.parametrize("rule", READY_RULES, ids=lambda rule: rule.name)
def test_every_ready_made_rule_can_be_chosen(open_sidebar: Open, rule) -> None:
    page, session = open_page(open_sidebar)
    choose(page.ready, rule.name)
    ballot = session.scenario.ballot
    assert (ballot.name, ballot.tests, ballot.quorum) == (rule.ballot.name, rule.ballot.tests, "1/2")
    assert len(page.rows) == len(rule.ballot.tests)
    assert page.wording.text() == rule.wording


def test_a_condition_is_changed_part_by_part(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    row = page.rows[0]
    choose(row.threshold, "at least")
    type_over(row.share, "3/5")
    choose(row.whole, OF_WHAT["people", "present"])
    choose(row.side, "are against")
    wanted = BallotTest(side="against", count="people", of="present", at_least="3/5")
    assert session.scenario.ballot.tests == (wanted,)
    assert page.words.text().startswith("Passes when at least 60 % of those present with a vote are against")
    assert page.ready.currentText() == OWN_RULE
    assert page.name.text() == OWN_RULE
    while session.undo_step:
        session.undo()
    assert session.scenario is CIRCLES
    assert page.ready.currentText() == "Simple majority"


def test_a_name_of_her_own_stays(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    type_over(page.name, "Standing order 12 & annex")
    type_over(page.rows[0].share, "60 %")
    assert session.scenario.ballot.name == "Standing order 12 & annex"
    assert session.scenario.ballot.tests[0].more_than == 0.6


def test_parts_that_make_a_known_rule_get_its_name(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    choose(page.rows[0].threshold, "at least")
    type_over(page.rows[0].share, "2/3")
    assert session.scenario.ballot.name == "Two-thirds of votes cast"
    assert page.ready.currentText() == "Two-thirds of votes cast"


def test_conditions_are_added_and_removed(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    assert not page.rows[0].remove.isVisible()
    click(page.add)
    assert len(session.scenario.ballot.tests) == 2
    assert page.rows[1].link.isVisible()
    assert page.rows[1].threshold.hasFocus()
    click(page.rows[0].remove)
    assert session.scenario.ballot.tests == (BallotTest(side="against", at_most="1/4"),)
    assert not page.rows[0].link.isVisible()


@pytest.mark.parametrize("text", ["3/2", "101 %", "most", ""])
def test_a_share_that_cannot_be_is_refused_with_a_remedy(qtbot: QtBot, open_sidebar: Open, text: str) -> None:
    page, session = open_page(open_sidebar)
    with qtbot.waitSignal(session.refused) as refused:
        type_over(page.rows[0].share, text)
    assert "2/3" in refused.args[0]
    assert session.scenario is CIRCLES
    assert page.rows[0].share.text() == "1/2"


def test_the_quorum_is_switched_and_typed(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    tick(page.quorum_box)
    assert session.scenario.ballot.quorum is None
    assert not page.quorum.isEnabled()
    tick(page.quorum_box)
    type_over(page.quorum, "1/3")
    assert session.scenario.ballot.quorum == "1/3"
    assert "at least a third of those with a vote must be present" in page.words.text()


def test_somebody_decides_a_tie(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    choose(page.casting, "Chiara")
    assert session.scenario.ballot.casting_vote == "chiara"
    assert "the vote of Chiara decides a tie" in page.words.text()
    choose(page.casting, "nobody")
    assert session.scenario.ballot.casting_vote is None


def test_it_says_what_the_question_lacks(open_sidebar: Open) -> None:
    rule = next(rule for rule in READY_RULES if rule.name == "No standing objection")
    page, _ = open_page(open_sidebar)
    assert not page.hint.isVisible()
    scenario = replace(CIRCLES, questions=(replace(LABEL, pass_mark=None),), ballot=rule.ballot)
    page, _ = open_page(open_sidebar, scenario)
    assert page.hint.text() == f"{NO_MARK}\n{NO_OBJECTIONS}"


def test_the_wheel_scrolls_and_changes_nothing(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar)
    page.ready.setFocus()
    turn = QWheelEvent(
        QPointF(5, 5), page.ready.mapToGlobal(QPointF(5, 5)), QPoint(), QPoint(0, -120),
        Qt.MouseButton.NoButton, Qt.KeyboardModifier.NoModifier, Qt.ScrollPhase.NoScrollPhase, False,
    )  # fmt: skip
    QApplication.sendEvent(page.ready, turn)
    assert session.scenario is CIRCLES
    assert page.ready.currentText() == "Simple majority"


def test_a_rule_without_conditions_can_get_one(open_sidebar: Open) -> None:
    page, session = open_page(open_sidebar, replace(CIRCLES, ballot=Ballot(tests=())))
    assert page.words.text().startswith("Passes with any vote")
    assert page.rows == []
    click(page.add)
    assert len(session.scenario.ballot.tests) == 1
