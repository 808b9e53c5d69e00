"""Text in widgets: names and notes of a file are always shown as plain text, never as markup."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtGui import QFont, QFontMetricsF
from PySide6.QtWidgets import QLabel, QWidget


def plain_label(parent: QWidget, *, muted: bool = False, text: str = "") -> QLabel:
    """A wrapping label that shows its text as it is."""
    label = QLabel(text, parent)
    label.setTextFormat(Qt.TextFormat.PlainText)
    label.setWordWrap(True)
    if muted:
        label.setProperty("muted", True)
    return label


def strong(widget: QWidget) -> None:
    """Give a widget the weight of a heading."""
    font = widget.font()
    font.setWeight(QFont.Weight.DemiBold)
    widget.setFont(font)


def with_ampersands(text: str) -> str:
    """Text for a button or menu entry, where a single ampersand would become a shortcut."""
    return text.replace("&", "&&")


def elided(text: str, font: QFont, width: float) -> str:
    """`text` shortened at its end to fit into `width` pixels."""
    return QFontMetricsF(font).elidedText(text, Qt.TextElideMode.ElideRight, width)
