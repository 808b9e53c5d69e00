from __future__ import annotations

from PySide6.QtCore import QRect
from PySide6.QtGui import QColor
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from deliberate.window.seating.cards import GAP, WIDTH, Flow, TableCard
from deliberate.window.theme import Look

BLUE, OCHRE = QColor("#2d62ae"), QColor("#8a5600")
LONG = "Wilhelmina van der Aardenburg-Okonkwo of the upper meadows"


def test_long_names_wrap_instead_of_being_cut(qtbot: QtBot, look: Look) -> None:
    parent = QWidget()
    qtbot.addWidget(parent)
    short = TableCard(look, "Table 1", ["Amina", "Jun"], [BLUE, OCHRE], parent)
    long = TableCard(look, "Table 1", ["Amina", LONG], [BLUE, OCHRE], parent)
    unbroken = TableCard(look, "Table 1", ["Amina", "W" * 60], [BLUE, OCHRE], parent)
    line = short.fontMetrics().lineSpacing()
    assert long.sizeHint().height() >= short.sizeHint().height() + line
    assert unbroken.sizeHint().height() >= short.sizeHint().height() + 2 * line
    assert long.accessibleName() == f"Table 1: Amina, {LONG}"


def test_each_name_has_the_colour_of_its_start(qtbot: QtBot, look: Look) -> None:
    parent = QWidget()
    qtbot.addWidget(parent)
    card = TableCard(look, "Table 1", ["Amina", "Jun"], [BLUE, OCHRE], parent)
    card.resize(card.sizeHint())
    picture = card.grab().toImage()
    colors = {picture.pixelColor(15, y).name() for y in range(picture.height())}
    assert {BLUE.name(), OCHRE.name()} <= colors


def test_cards_flow_into_as_many_rows_as_they_need(qtbot: QtBot, look: Look) -> None:
    parent = QWidget()
    qtbot.addWidget(parent)
    flow = Flow()
    cards = [TableCard(look, f"Table {number}", ["Amina"], [BLUE], parent) for number in range(5)]
    for card in cards:
        flow.addWidget(card)
    high = cards[0].sizeHint().height()
    assert flow.heightForWidth(2 * WIDTH + GAP) == 3 * high + 2 * GAP
    assert flow.heightForWidth(5 * (WIDTH + GAP)) == high
    assert flow.heightForWidth(10) == 5 * high + 4 * GAP
    flow.setGeometry(QRect(0, 0, 3 * WIDTH + 2 * GAP, 400))
    assert [card.y() for card in cards] == [0, 0, 0, high + GAP, high + GAP]
    assert cards[2].x() == 2 * (WIDTH + GAP)
