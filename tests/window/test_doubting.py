"""The doubt on screen: drawn off the GUI thread while wanted, dropped when the meeting moves on."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from circles import AS_IT_STANDS, CIRCLES
from pytestqt.qtbot import QtBot

from deliberate.rehearsal.doubt import doubt
from deliberate.scenario import edits
from deliberate.scenario.values import Scenario
from deliberate.window.session import Session
from deliberate.window.vote import vote_in_words


def with_margins(scenario: Scenario) -> Scenario:
    people = [person.id for person in scenario.variants[0].people]
    return edits.set_margin(scenario, people, "label", 45.0, variant=scenario.variants[0].name)


@pytest.fixture
def session(open_session: Callable[..., Session]) -> Session:
    return open_session(with_margins(CIRCLES))


def drawn(qtbot: QtBot, session: Session) -> None:
    qtbot.waitUntil(lambda: session.doubting.doubt is not None, timeout=20_000)


def test_nothing_is_drawn_until_it_is_wanted(session: Session) -> None:
    assert session.doubting.doubt is None
    assert not session.doubting.drawing


def test_it_is_what_the_engine_gives(qtbot: QtBot, session: Session) -> None:
    session.doubting.want(True)
    drawn(qtbot, session)
    expected = doubt(session.scenario, session.variant.name, session.question.id)
    assert np.array_equal(session.doubting.doubt.beliefs, expected.beliefs)
    assert session.doubting.doubt.says == expected.says


def test_an_edit_drops_it_and_begins_again(qtbot: QtBot, session: Session) -> None:
    session.doubting.want(True)
    drawn(qtbot, session)
    before = session.doubting.doubt
    session.edit("Start", lambda scenario: edits.set_belief(scenario, "amina", "label", 20.0, variant=AS_IT_STANDS))
    assert session.doubting.doubt is None
    assert session.doubting.drawing
    drawn(qtbot, session)
    assert session.doubting.doubt is not before
    assert not np.array_equal(session.doubting.doubt.beliefs, before.beliefs)


def test_no_longer_wanted_it_is_forgotten(qtbot: QtBot, session: Session) -> None:
    session.doubting.want(True)
    drawn(qtbot, session)
    session.doubting.want(False)
    assert session.doubting.doubt is None
    assert not session.doubting.drawing


def test_stopping_under_way_gives_nothing(qtbot: QtBot, session: Session) -> None:
    session.doubting.want(True)
    qtbot.waitSignal(session.doubting.progressed, timeout=20_000).wait()
    session.doubting.want(False)
    qtbot.wait(100)
    assert session.doubting.doubt is None


def test_the_vote_is_told_with_its_odds(qtbot: QtBot, session: Session) -> None:
    plain = vote_in_words(session.rehearsal, 0, session.doubting)
    assert plain == "Round 0, by the sketch: 3 for, 3 against: does not pass"
    session.doubting.want(True)
    drawn(qtbot, session)
    odds = session.doubting.doubt.vote.passes[0].against
    told = vote_in_words(session.rehearsal, 0, session.doubting)
    assert told == f"{plain}, as in {round(100 * odds.share)} of 100 draws"
    assert 0.01 < odds.share < 0.99


def test_what_cannot_be_drawn_is_told(qtbot: QtBot, open_session: Callable[..., Session]) -> None:
    scenario = edits.change_stage(CIRCLES, 0, rounds=10_000, variant=AS_IT_STANDS)
    session = open_session(scenario)
    session.doubting.want(True)
    qtbot.waitUntil(lambda: bool(session.doubting.refusal), timeout=20_000)
    assert "ask for fewer draws" in session.doubting.refusal
    session.edit("Rounds", lambda scenario: edits.change_stage(scenario, 0, rounds=6, variant=AS_IT_STANDS))
    drawn(qtbot, session)
    assert session.doubting.refusal == ""
