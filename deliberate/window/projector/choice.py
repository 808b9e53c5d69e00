"""What is settled before others see anything: codes or names, and on which screen."""

from __future__ import annotations

from PySide6.QtCore import Signal
from PySide6.QtGui import QGuiApplication, QScreen
from PySide6.QtWidgets import QComboBox, QDialog, QDialogButtonBox, QLabel, QPushButton, QVBoxLayout, QWidget

from deliberate.window.text import plain_label, strong

WORDS = (
    "Everybody in the room can read what is shown, the people in it too. Codes hide names, roles and notes in the "
    "whole window, also after the view is left, until you show names again (F7)."
)


class ProjectorChoice(QDialog):
    """Asks for codes or names. `chosen` gives whether codes, and the screen to fill."""

    chosen = Signal(bool, QScreen)

    def __init__(self, window: QWidget) -> None:
        super().__init__(window)
        self.setWindowTitle("Projector view")
        heading = plain_label(self, text="What shall the room read?")
        strong(heading)
        self.codes = QPushButton("&Codes", self)
        self.codes.setAccessibleDescription("Shows codes instead of names")
        self.names = QPushButton("&Names", self)
        self.names.setAccessibleDescription("Shows the names of people")
        self.screen_choice = _screens(self, window.screen())
        self.codes.clicked.connect(lambda: self._choose(True))
        self.names.clicked.connect(lambda: self._choose(False))
        buttons = QDialogButtonBox(self)
        for button in (self.codes, self.names):
            buttons.addButton(button, QDialogButtonBox.ButtonRole.AcceptRole)
        buttons.addButton(QDialogButtonBox.StandardButton.Cancel)
        buttons.rejected.connect(self.reject)
        self.codes.setDefault(True)
        self.codes.setFocus()
        column = QVBoxLayout(self)
        column.setSpacing(10)
        column.addWidget(heading)
        column.addWidget(plain_label(self, text=WORDS))
        if self.screen_choice.count() > 1:
            label = QLabel("&Screen", self)
            label.setBuddy(self.screen_choice)
            column.addWidget(label)
            column.addWidget(self.screen_choice)
        else:
            self.screen_choice.hide()
        column.addWidget(buttons)
        self.setMinimumWidth(420)

    def _choose(self, codes: bool) -> None:
        self.accept()
        self.chosen.emit(codes, self.screen_choice.currentData())


def _screens(parent: QWidget, here: QScreen) -> QComboBox:
    """All screens, beginning with one that the window is not on: that is where the projector is."""
    box = QComboBox(parent)
    box.setAccessibleName("Screen to fill")
    for screen in sorted(QGuiApplication.screens(), key=lambda one: one is here):
        size = screen.size()
        there = "this one" if screen is here else "another one"
        box.addItem(f"{screen.name()}, {size.width()} x {size.height()}, {there}", screen)
    return box
