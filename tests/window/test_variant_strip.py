"""The strip of variants as it looks; what it does is tested with the window."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from circles import CIRCLES
from msgspec.structs import replace
from PySide6.QtGui import QFont, QFontMetrics
from PySide6.QtWidgets import QApplication, QStyle, QStyleOptionTab
from pytestqt.qtbot import QtBot

from deliberate.window.session import Session
from deliberate.window.styles import style_sheet
from deliberate.window.theme import LIGHT
from deliberate.window.variant_strip import VariantStrip

LONG = "Own views 20: Ailsa, Babajide & 4 others who sit there"


@pytest.mark.parametrize("name", [LONG, "W" * 80, "Short"])
def test_the_name_of_the_shown_variant_is_shortened_at_its_end_only(
    name: str, qtbot: QtBot, open_session: Callable[..., Session]
) -> None:
    first, *others = CIRCLES.variants
    strip = VariantStrip(open_session(replace(CIRCLES, variants=(replace(first, name=name), *others))))
    qtbot.addWidget(strip)
    strip.setStyleSheet(style_sheet(LIGHT))
    strip.resize(700, 40)
    strip.show()
    qtbot.waitExposed(strip)
    option = QStyleOptionTab()
    strip.tabs.initStyleOption(option, 0)
    bold = QFont(strip.tabs.font())
    bold.setWeight(QFont.Weight.DemiBold)
    room = strip.style().subElementRect(QStyle.SubElement.SE_TabBarTabText, option, strip.tabs)
    shown = option.text.replace("&&", "&")
    assert QFontMetrics(bold).horizontalAdvance(shown) <= room.width()
    assert name.startswith(shown.removesuffix("…"))
    assert (shown == name) == (name == "Short")


def test_names_that_have_room_are_whole(qtbot: QtBot, open_session: Callable[..., Session]) -> None:
    names = ("As it stands", "Mixed workshops", "Amina and Emeka meet")
    first = CIRCLES.variants[0]
    session = open_session(replace(CIRCLES, variants=tuple(replace(first, name=name) for name in names)))
    strip = VariantStrip(session)
    qtbot.addWidget(strip)
    strip.setStyleSheet(style_sheet(LIGHT))
    strip.resize(900, 40)
    strip.show()
    qtbot.waitExposed(strip)
    for shown in names:
        session.show_variant(shown)
        QApplication.processEvents()  # lays the names out anew
        for place, name in enumerate(names):
            option = QStyleOptionTab()
            strip.tabs.initStyleOption(option, place)
            assert option.text == name
