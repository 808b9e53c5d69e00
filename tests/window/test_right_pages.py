"""What would help, and what the result hangs on: the pages beside what stands out."""

from __future__ import annotations

from collections.abc import Callable, Iterator

import pytest
from circles import AS_IT_STANDS, CIRCLES, meeting, person
from PySide6.QtCore import QPoint, Qt
from pytestqt.qtbot import QtBot

from deliberate.rehearsal.leverage import leverage
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.remedies import remedies
from deliberate.scenario import edits
from deliberate.scenario.values import Arrow
from deliberate.window.right_pages import RightPages
from deliberate.window.session import Session
from deliberate.window.theme import Look

LEFT = Qt.MouseButton.LeftButton
STANDS_OUT, WOULD_HELP, HANGS_ON = range(3)


@pytest.fixture
def open_pages(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session]
) -> Iterator[Callable[..., tuple[RightPages, Session]]]:
    opened = []

    def open_one(scenario=CIRCLES) -> tuple[RightPages, Session]:
        session = open_session(scenario)
        pages = RightPages(session, look)
        opened.append(pages)
        qtbot.addWidget(pages)
        pages.resize(370, 420)
        pages.show()
        qtbot.waitExposed(pages)
        return pages, session

    yield open_one
    for pages in opened:
        pages.close_down()


def turn(qtbot: QtBot, pages: RightPages, page: int) -> None:
    qtbot.mouseClick(pages.tabs, LEFT, pos=pages.tabs.tabRect(page).center())
    assert pages.pages.currentIndex() == page
    idle = (lambda: not pages.remedies.working) if page == WOULD_HELP else (lambda: not pages.hangs_on.working)
    qtbot.waitUntil(idle, timeout=30_000)


def test_nothing_is_looked_for_before_it_is_looked_at(open_pages) -> None:
    pages, _ = open_pages()
    assert not pages.remedies.working
    assert not pages.hangs_on.working
    assert pages.remedies.list.shown == []


def test_remedies_are_those_of_the_engine(qtbot: QtBot, open_pages) -> None:
    pages, session = open_pages()
    turn(qtbot, pages, WOULD_HELP)
    found = remedies(session.scenario, AS_IT_STANDS, "label", "common-view")
    assert pages.remedies.aim.currentData() == "common-view"
    assert [card.says.text() for card in pages.remedies.list.shown] == [f"{remedy.says}." for remedy in found]
    first = pages.remedies.list.shown[0]
    assert first.note.text() == found[0].does
    assert found[0].outcome in first.why.text()


def test_a_remedy_is_tried_as_a_variant_that_does_what_it_said(qtbot: QtBot, open_pages) -> None:
    pages, session = open_pages()
    turn(qtbot, pages, WOULD_HELP)
    (remedy, *_) = remedies(session.scenario, AS_IT_STANDS, "label", "common-view")
    card = pages.remedies.list.shown[0]
    qtbot.mouseClick(card.button, LEFT)
    assert len(session.scenario.variants) == 2
    assert session.variant.name == session.scenario.variants[1].name
    tried = rehearse(session.scenario, session.variant.name, "label")
    assert tried.spread[-1] == remedy.after.spread_at_end
    assert pages.pages.currentIndex() == STANDS_OUT
    qtbot.waitUntil(pages.findings.effect.isVisible)
    session.undo()
    assert session.scenario is CIRCLES


def test_another_aim_is_looked_for_when_it_is_chosen(qtbot: QtBot, open_pages) -> None:
    pages, session = open_pages()
    turn(qtbot, pages, WOULD_HELP)
    aim = pages.remedies.aim
    aim.setFocus()
    while aim.currentData() != "less-spread":
        before = aim.currentIndex()
        qtbot.keyClick(aim, Qt.Key.Key_Down)
        assert aim.currentIndex() != before
        qtbot.waitUntil(lambda: not pages.remedies.working, timeout=30_000)
    found = remedies(session.scenario, AS_IT_STANDS, "label", "less-spread")
    assert [card.says.text() for card in pages.remedies.list.shown] == [f"{remedy.says}." for remedy in found]


def test_an_edit_looks_again(qtbot: QtBot, open_pages) -> None:
    pages, session = open_pages()
    turn(qtbot, pages, WOULD_HELP)
    session.edit("Arrow", lambda scenario: edits.add_arrow(scenario, "amina", "davor", 20.0, variant=AS_IT_STANDS))
    assert pages.remedies.list.shown == []
    assert pages.remedies.working
    qtbot.waitUntil(lambda: not pages.remedies.working, timeout=30_000)
    session.edit("Arrow", lambda scenario: edits.add_arrow(scenario, "davor", "amina", 20.0, variant=AS_IT_STANDS))
    turn(qtbot, pages, STANDS_OUT)
    assert not pages.remedies.working  # nobody looks at it any more


def test_a_meeting_that_asks_for_nothing_says_so(qtbot: QtBot, open_pages) -> None:
    people = (person("Ana", 50.0, (-100.0, 0.0)), person("Bo", 52.0, (100.0, 0.0)))
    pages, _ = open_pages(meeting(people, (Arrow("ana", "bo", 40.0), Arrow("bo", "ana", 40.0))))
    turn(qtbot, pages, WOULD_HELP)
    assert pages.remedies.state.text().startswith("By these figures no aim asks for a change")
    assert (pages.remedies.aim.currentText(), pages.remedies.aim.placeholderText()) == ("", "Choose an aim")
    assert pages.remedies.list.shown == []


def test_levers_are_told_by_size_and_light_up(qtbot: QtBot, open_pages) -> None:
    pages, session = open_pages()
    turn(qtbot, pages, HANGS_ON)
    levers = leverage(session.scenario, AS_IT_STANDS, "label").levers
    shown = pages.hangs_on.list.shown
    assert [card.says.text() for card in shown] == [lever.says for lever in levers[: len(shown)]]
    qtbot.mouseMove(pages.tabs, QPoint(3, 3))  # wherever an earlier test left the pointer
    for card in shown[:2]:
        qtbot.mouseMove(card, QPoint(20, 10))
        qtbot.waitUntil(lambda card=card: session.lit is card.told.lights)
    assert session.lit.people == levers[1].people
    assert session.lit.arrows == levers[1].arrows


def test_the_guesses_to_ask_about_come_with_the_draws(qtbot: QtBot, open_pages) -> None:
    ids = [one.id for one in CIRCLES.variants[0].people]
    pages, session = open_pages(edits.set_margin(CIRCLES, ids, "label", 25.0, variant=AS_IT_STANDS))
    turn(qtbot, pages, HANGS_ON)
    qtbot.mouseClick(pages.hangs_on.draw, LEFT)
    qtbot.waitUntil(lambda: session.doubting.doubt is not None, timeout=20_000)
    guesses = session.doubting.doubt.hangs_on
    assert guesses
    told = [card.says.text() for card in pages.hangs_on.list.shown]
    assert told[: len(guesses)] == [guess.says for guess in guesses]
    assert not pages.hangs_on.draw.isVisible()


def test_findings_say_in_how_many_draws_they_hold(qtbot: QtBot, open_pages) -> None:
    pages, session = open_pages()
    assert not any(card.note.isVisible() for card in pages.findings.cards)
    session.doubting.want(True)
    qtbot.waitUntil(lambda: session.doubting.doubt is not None, timeout=20_000)
    assert pages.findings.cards[0].note.text().startswith("In all draws: it follows from")
    assert all(card.note.isVisible() for card in pages.findings.cards)
