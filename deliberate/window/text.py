"""Text in widgets: names and notes of a file are always shown as plain text, never as markup."""

from __future__ import annotations

from html import escape

from PySide6.QtCore import QRect, QSize, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPaintEvent, QPalette
from PySide6.QtWidgets import QAbstractButton, QLabel, QSizePolicy, QWidget

from deliberate.window.theme import Look


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


def tooltip(text: str) -> str:
    """Text for a tooltip, which would take tags in it for markup; long lines wrap."""
    return f"<span>{escape(text)}</span>"


def explain(widget: QWidget, text: str) -> None:
    """Say `text` in the widget's tooltip, and to a screen reader, which would otherwise read out its tags."""
    widget.setToolTip(tooltip(text))
    widget.setAccessibleDescription(text)


def elided(text: str, font: QFont, width: float) -> str:
    """`text` shortened at its end to fit into `width` pixels."""
    return QFontMetricsF(font).elidedText(text, Qt.TextElideMode.ElideRight, width)


class ElidedLabel(QWidget):
    """One line of text, shortened (`cut` says where) if there is no room; all of it is in the tooltip and spoken."""

    def __init__(
        self,
        parent: QWidget,
        *,
        muted: bool = False,
        align: Qt.AlignmentFlag | None = None,
        cut: Qt.TextElideMode = Qt.TextElideMode.ElideRight,
    ) -> None:
        super().__init__(parent)
        self._text, self._cut = "", cut
        self._align = align or Qt.AlignmentFlag.AlignLeft
        self._role = QPalette.ColorRole.PlaceholderText if muted else QPalette.ColorRole.WindowText
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)

    def text(self) -> str:
        """All of the text."""
        return self._text

    def setText(self, text: str) -> None:
        """Show `text` from now on."""
        if text != self._text:
            self._text = text
            self.setAccessibleName(text)
            explain(self, text)
            self.update()

    def sizeHint(self) -> QSize:
        return QSize(self.fontMetrics().horizontalAdvance(self._text), self.fontMetrics().height())

    def minimumSizeHint(self) -> QSize:
        return QSize(0, self.fontMetrics().height())

    def paintEvent(self, event: QPaintEvent) -> None:
        with QPainter(self) as painter:
            painter.setPen(self.palette().color(self._role))
            flags = self._align | Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine
            painter.drawText(self.rect(), flags, self.fontMetrics().elidedText(self._text, self._cut, self.width()))


class WrappingButton(QAbstractButton):
    """A button of words alone, in the accent, that wraps its text as a paragraph instead of cutting it."""

    PADDING = 4

    def __init__(self, look: Look, parent: QWidget) -> None:
        super().__init__(parent)
        self._look = look
        policy = QSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)
        policy.setHeightForWidth(True)
        self.setSizePolicy(policy)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAttribute(Qt.WidgetAttribute.WA_Hover)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        strong(self)

    def sizeHint(self) -> QSize:
        return QSize(200, self.heightForWidth(200))

    def minimumSizeHint(self) -> QSize:
        return QSize(80, self.fontMetrics().height() + 2 * self.PADDING)

    def heightForWidth(self, width: int) -> int:
        room = QRect(0, 0, max(width - 2 * self.PADDING, 1), 10_000)
        wrapped = self.fontMetrics().boundingRect(room, Qt.TextFlag.TextWordWrap, self.text())
        return max(wrapped.height() + 2 * self.PADDING, 24)

    def paintEvent(self, event: QPaintEvent) -> None:
        theme = self._look.theme
        with QPainter(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            if self.underMouse() or self.isDown():
                painter.setPen(Qt.PenStyle.NoPen)
                painter.setBrush(QColor(theme.raised if self.isDown() else theme.tint))
                painter.drawRoundedRect(self.rect(), 4, 4)
            if self.hasFocus():
                painter.setPen(QColor(theme.accent))
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.drawRoundedRect(self.rect().adjusted(0, 0, -1, -1), 4, 4)
            painter.setPen(QColor(theme.accent))
            inside = self.rect().adjusted(self.PADDING, 0, -self.PADDING, 0)
            painter.drawText(inside, Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextWordWrap, self.text())
