"""The dialog for mixed tables on screen, with a session behind it."""

from __future__ import annotations

from collections.abc import Callable, Iterator

import pytest
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot
from rooms import TWO_HALVES

from deliberate.scenario.values import Scenario
from deliberate.window.seating import SeatingDialog
from deliberate.window.session import Session
from deliberate.window.theme import Look


@pytest.fixture
def open_dialog(
    qtbot: QtBot, look: Look, open_session: Callable[..., Session]
) -> Iterator[Callable[..., SeatingDialog]]:
    """Shows the dialog for a meeting; its session is `dialog.parentWidget().session`."""
    windows: list[QWidget] = []

    def show(scenario: Scenario = TWO_HALVES) -> SeatingDialog:
        window = QWidget()
        windows.append(window)
        qtbot.addWidget(window)
        window.session = open_session(scenario)
        dialog = SeatingDialog(window.session, look, window)
        dialog.show()
        qtbot.waitExposed(dialog)
        return dialog

    yield show
    for window in windows:
        for dialog in window.findChildren(SeatingDialog):
            dialog.close()
