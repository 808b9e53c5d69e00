"""The left bar on its own, as wide as in the window."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from circles import CIRCLES
from pytestqt.qtbot import QtBot

from deliberate.scenario.values import Scenario
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.styles import style_sheet
from deliberate.window.theme import Look

sys.path.insert(0, str(Path(__file__).parent))  # for sidebar_hands


@pytest.fixture
def open_sidebar(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session]
) -> Iterator[Callable[..., tuple[Sidebar, Session]]]:
    """Opens the left bar on a meeting."""
    opened: list[Sidebar] = []

    def open_one(scenario: Scenario = CIRCLES, width: int = 290, height: int = 700) -> tuple[Sidebar, Session]:
        session = open_session(scenario, rehearsed=False)
        sidebar = Sidebar(session, look)
        qtbot.addWidget(sidebar)
        opened.append(sidebar)
        sidebar.setStyleSheet(style_sheet(look.theme))
        sidebar.resize(width, height)
        sidebar.show()
        qtbot.waitExposed(sidebar)
        sidebar.activateWindow()
        qtbot.waitUntil(sidebar.isActiveWindow)
        return sidebar, session

    yield open_one
    opened.clear()
