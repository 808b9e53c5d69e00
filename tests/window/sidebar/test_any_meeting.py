"""The left bar on whatever meeting a file may hold, one after the other in the same bar."""

from __future__ import annotations

from collections.abc import Callable

from circles import CIRCLES
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from PySide6.QtTest import QAbstractItemModelTester
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot
from strategies import scenarios

from deliberate.scenario.rules import rule_in_words
from deliberate.scenario.values import Scenario
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.sidebar.people_columns import Column

Open = Callable[..., tuple[Sidebar, Session]]
NO_PRESSURE = settings(max_examples=30, suppress_health_check=[HealthCheck.function_scoped_fixture])


def look_through(sidebar: Sidebar, session: Session) -> None:
    """Turn to every page and hold it against the meeting."""
    scenario, variant, question = session.scenario, session.variant, session.question
    for place in range(4):
        sidebar.tabs.setCurrentIndex(place)
        QApplication.processEvents()
    sidebar.tabs.setCurrentIndex(0)
    table = sidebar.people.table
    shown = [table.model().index(row, Column.NAME).data() for row in range(table.model().rowCount())]
    assert sorted(shown) == sorted(person.shown_name for person in variant.people)
    assert len(table.selectionModel().selectedRows()) == len(session.selection.people)
    assert sidebar.question.text.text() == question.text
    assert float(sidebar.question.high.text()) == question.high
    assert len(sidebar.question.tests.rows) == len(question.agreement)
    assert len(sidebar.ballot.rows) == len(scenario.ballot.tests)
    assert sidebar.ballot.words.text().startswith(rule_in_words(scenario.ballot).split(";")[0].rstrip("."))
    assert sidebar.meeting.title.text() == scenario.title
    assert sidebar.meeting.variant_notes.text() == variant.notes


def test_any_meeting_is_shown_on_every_page(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()
    table = sidebar.people.table
    models = (table.people, table.proxy, sidebar.people.points.model)
    testers = [
        QAbstractItemModelTester(model, QAbstractItemModelTester.FailureReportingMode.Fatal) for model in models
    ]
    table.sort_by(Column.START)

    @NO_PRESSURE
    @given(scenarios(), st.data())
    def shown(scenario: Scenario, data: st.DataObject) -> None:
        session.open(scenario, None)
        session.show_variant(data.draw(st.sampled_from([variant.name for variant in scenario.variants])))
        session.show_question(data.draw(st.sampled_from([question.id for question in scenario.questions])))
        ids = [person.id for person in session.variant.people]
        session.select(people=data.draw(st.lists(st.sampled_from(ids), unique=True)) if ids else [])
        look_through(sidebar, session)

    shown()
    session.open(CIRCLES, None)
    qtbot.waitUntil(session.engine.idle, timeout=20_000)
    assert len(testers) == len(models)


def test_looking_through_is_no_edit(qtbot: QtBot, open_sidebar: Open) -> None:
    sidebar, session = open_sidebar()

    @NO_PRESSURE
    @given(scenarios())
    def looked_at(scenario: Scenario) -> None:
        session.open(scenario, None)
        session.select(people=[person.id for person in scenario.variants[0].people[:1]])
        look_through(sidebar, session)
        for place in range(4):  # the focus goes through every field and leaves it
            sidebar.tabs.setCurrentIndex(place)
            for _ in range(12):
                sidebar.focusNextChild()
        assert session.scenario is scenario
        assert session.undo_step is None

    looked_at()
    session.open(CIRCLES, None)
    qtbot.waitUntil(session.engine.idle, timeout=20_000)
