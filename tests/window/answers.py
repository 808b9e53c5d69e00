"""Hands for questions that stop the program: ``with answering("Discard") as said: window.close()``."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager

from PySide6.QtCore import Qt, QTimer
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QMessageBox


@contextmanager
def answering(*answers: str | Qt.Key) -> Iterator[list[str]]:
    """Answer the questions that come up one after the other: by the button whose words begin like this, or by a key.

    Gives what each says, its title before it. Fails when less is asked, or there is no such button.
    """
    waiting = list(answers)
    said: list[str] = []
    wrong: list[str] = []
    timer = QTimer()

    def answer() -> None:
        box = QApplication.activeModalWidget()
        if not isinstance(box, QMessageBox):
            return
        button = waiting.pop(0)
        if not waiting:
            timer.stop()
        said.extend([box.windowTitle(), box.text()])
        if isinstance(button, Qt.Key):
            QTest.keyClick(box, button)
            return
        words = {one.text().replace("&", ""): one for one in box.buttons()}
        fitting = [one for text, one in words.items() if text.startswith(button)]
        if fitting:
            QTest.mouseClick(fitting[0], Qt.MouseButton.LeftButton)
        else:
            wrong.append(f"no button “{button}” among {list(words)}")
            box.done(0)

    timer.timeout.connect(answer)
    timer.start(5)
    try:
        yield said
    finally:
        timer.stop()
    assert not wrong, wrong
    assert not waiting, f"not asked for {waiting}"
