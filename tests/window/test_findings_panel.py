from __future__ import annotations

from collections.abc import Callable
from functools import partial

import pytest
from circles import AS_IT_STANDS, CIRCLES, SWAP, meeting
from msgspec.structs import replace
from PySide6.QtCore import QPoint, Qt
from pytestqt.qtbot import QtBot

from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario import edits
from deliberate.window.findings_panel import FindingsPanel, effect_lines
from deliberate.window.session import Session
from deliberate.window.theme import Look

LEFT = Qt.MouseButton.LeftButton


@pytest.fixture
def panel(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> FindingsPanel:
    return shown(qtbot, look, open_session(CIRCLES))


def shown(qtbot: QtBot, look: Look, session: Session) -> FindingsPanel:
    one = FindingsPanel(session, look)
    qtbot.addWidget(one)
    one.resize(360, 420)
    one.show()
    qtbot.waitExposed(one)
    return one


def test_the_first_finding_stands_first_with_its_reason(panel: FindingsPanel) -> None:
    first = panel.cards[0]
    assert first.told.lights.kind == "closed-groups"
    assert first.says.text() == panel._session.findings[0].says
    assert first.why.isVisible()
    assert not panel.cards[1].why.isVisible()
    assert first.accessibleName() == first.says.text()


def test_pointing_lights_up_and_leaving_puts_out(qtbot: QtBot, panel: FindingsPanel) -> None:
    session = panel._session
    first, second = panel.cards[:2]
    for card in (first, second):
        qtbot.mouseMove(card, QPoint(20, 10))
        qtbot.waitUntil(lambda card=card: session.lit is card.told.lights)
    qtbot.mouseMove(panel, QPoint(5, panel.height() - 3))
    qtbot.waitUntil(lambda: session.lit is None)


def test_the_focus_lights_up_too(qtbot: QtBot, panel: FindingsPanel) -> None:
    panel.activateWindow()
    panel.cards[1].setFocus()
    qtbot.waitUntil(lambda: panel._session.lit is panel.cards[1].told.lights)
    qtbot.keyClick(panel.cards[1], Qt.Key.Key_Return)
    assert panel.cards[1].why.isVisible()
    assert not panel.cards[0].why.isVisible()


def test_a_click_opens_and_closes_the_reason(qtbot: QtBot, panel: FindingsPanel) -> None:
    second = panel.cards[1]
    qtbot.mouseClick(second, LEFT, pos=QPoint(30, 12))
    assert second.why.isVisible()
    qtbot.mouseClick(second, LEFT, pos=QPoint(30, 12))
    assert not second.why.isVisible()


def test_trying_a_change_makes_a_variant_and_tells_what_it_does(qtbot: QtBot, panel: FindingsPanel) -> None:
    session = panel._session
    qtbot.mouseClick(panel.cards[0].button, LEFT)
    qtbot.waitUntil(lambda: panel.effect.isVisible())
    assert session.scenario.variants[0] is CIRCLES.variants[0]
    assert session.variant is session.scenario.variants[1]
    assert len(session.variant.arrows) == len(CIRCLES.variants[0].arrows) + 2
    before, after = rehearse(CIRCLES), rehearse(session.scenario, session.variant.name)
    lines = effect_lines(before, after, session.question)
    assert panel.effect.lines.text().splitlines() == [f"{name}: {was} → {now}" for name, was, now in lines]
    assert lines[0][1:] == ("no common view", f"round {after.rounds_to_agree}")
    assert session.undo_step.startswith("Try: ")

    session.show_variant(AS_IT_STANDS)
    assert not panel.effect.isVisible()
    session.undo()
    assert len(session.scenario.variants) == 1


def test_a_swing_can_be_ended_from_the_panel(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> None:
    session = open_session(SWAP)
    panel = shown(qtbot, look, session)
    assert panel.cards[0].told.lights.kind == "swing"
    qtbot.mouseClick(panel.cards[0].button, LEFT)
    assert session.rehearsal.settles
    assert "keeps swinging" in panel.effect.lines.text()


def test_findings_follow_every_edit(panel: FindingsPanel) -> None:
    session = panel._session
    for listener, source in (("amina", "farah"), ("farah", "amina")):
        session.edit(
            "Draw an arrow", partial(edits.add_arrow, listener=listener, source=source, variant=AS_IT_STANDS)
        )
    assert "closed-groups" not in [card.told.lights.kind for card in panel.cards]
    session.undo()
    session.undo()
    assert panel.cards[0].told.lights.kind == "closed-groups"


def test_what_is_pointed_at_follows_every_edit(qtbot: QtBot, panel: FindingsPanel) -> None:
    session = panel._session
    qtbot.mouseMove(panel.cards[0], QPoint(20, 10))
    qtbot.waitUntil(lambda: session.lit is panel.cards[0].told.lights)
    before = session.lit
    session.edit(
        "Another start", partial(edits.set_belief, ids="amina", question="label", belief=60.0, variant=AS_IT_STANDS)
    )
    qtbot.waitUntil(session.engine.idle)
    assert session.lit is not before
    assert session.lit is panel.cards[0].told.lights


def test_names_like_markup_stay_text(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> None:
    people = CIRCLES.variants[0].people
    hostile = (replace(people[0], name='<img src="/etc/hostname"><b>Amina</b>'), *people[1:])
    panel = shown(qtbot, look, open_session(meeting(hostile, CIRCLES.variants[0].arrows)))
    for card in panel.cards:
        for label in (card.says, card.why):
            assert label.textFormat() == Qt.TextFormat.PlainText
    assert any("<b>Amina</b>" in card.why.text() + card.says.text() for card in panel.cards)


def test_an_empty_meeting_waits_for_nothing(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> None:
    panel = shown(qtbot, look, open_session(meeting((), ())))
    assert panel.cards == []
    assert not panel.waiting.isVisible()
