"""A canvas on screen with a session behind it."""

from __future__ import annotations

import sys
from collections.abc import Callable
from pathlib import Path

import pytest
from circles import CIRCLES
from pytestqt.qtbot import QtBot

from deliberate.scenario.values import Scenario
from deliberate.window.canvas import Canvas
from deliberate.window.session import Session
from deliberate.window.theme import Look

sys.path.insert(0, str(Path(__file__).parent))  # for canvas_hands

from canvas_hands import settle


@pytest.fixture
def open_canvas(qtbot: QtBot, look: Look, open_session: Callable[..., Session]) -> Callable[..., Canvas]:
    """Shows a scenario on a canvas of 900 x 700 pixels."""

    def show(scenario: Scenario = CIRCLES, *, rehearsed: bool = False) -> Canvas:
        canvas = Canvas(open_session(scenario, rehearsed=rehearsed), look)
        qtbot.addWidget(canvas)
        canvas.resize(900, 700)
        canvas.show()
        canvas.activateWindow()
        canvas.setFocus()
        qtbot.waitUntil(canvas.hasFocus)
        settle(qtbot, canvas)
        return canvas

    return show
