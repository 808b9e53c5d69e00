"""One key that leaves nothing to read on the screen, and any key that brings it back."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QEvent, QObject, Qt, Signal
from PySide6.QtGui import QColor, QKeyEvent, QMouseEvent, QPainter, QPaintEvent
from PySide6.QtWidgets import QApplication, QToolTip, QWidget
from shiboken6 import isValid

TITLE = "Deliberate"
HINT = "Any key brings the picture back"
_ALONE = (
    Qt.Key.Key_Shift,
    Qt.Key.Key_Control,
    Qt.Key.Key_Meta,
    Qt.Key.Key_Alt,
    Qt.Key.Key_AltGr,
    Qt.Key.Key_CapsLock,
    Qt.Key.Key_NumLock,
)  # pressed on the way to something else


class Cover(QWidget):
    """Black over all of a window, the keyboard's only listener there."""

    lifted = Signal()

    def __init__(self, window: QWidget) -> None:
        super().__init__(window)
        self.setAccessibleName(HINT)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.BlankCursor)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        window.installEventFilter(self)
        self.setGeometry(window.rect())
        self.show()
        self.raise_()
        self.setFocus()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if event.type() == QEvent.Type.Resize and isinstance(watched, QWidget):
            self.setGeometry(watched.rect())
        return super().eventFilter(watched, event)

    def event(self, event: QEvent) -> bool:
        if event.type() == QEvent.Type.ShortcutOverride:
            event.accept()  # no shortcut acts unseen
            return True
        return super().event(event)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() not in _ALONE and not event.isAutoRepeat():
            self.lifted.emit()

    def mousePressEvent(self, event: QMouseEvent) -> None:
        self.lifted.emit()

    def focusNextPrevChild(self, forward: bool) -> bool:
        return False  # Tab is a key like any other here

    def paintEvent(self, event: QPaintEvent) -> None:
        with QPainter(self) as painter:
            painter.fillRect(self.rect(), QColor("#000000"))
            painter.setPen(QColor("#5c5c5c"))
            foot = self.rect().adjusted(0, 0, 0, -16)
            painter.drawText(foot, Qt.AlignmentFlag.AlignHCenter | Qt.AlignmentFlag.AlignBottom, HINT)


@dataclass(frozen=True)
class _Covered:
    window: QWidget
    cover: Cover
    title: str


class Blank(QObject):
    """Covers every open window of the program at once, titles included."""

    def __init__(self, parent: QObject) -> None:
        super().__init__(parent)
        self._covered: list[_Covered] = []
        self._focus: QWidget | None = None

    @property
    def on(self) -> bool:
        """Whether the screen is blank."""
        return bool(self._covered)

    def begin(self) -> None:
        """Leave nothing to read."""
        if self.on:
            return
        while (popup := QApplication.activePopupWidget()) is not None:
            popup.close()
        QToolTip.hideText()
        self._focus = QApplication.focusWidget()
        active = QApplication.activeWindow()
        windows = [one for one in QApplication.topLevelWidgets() if one.isVisible() and one.isWindow()]
        for window in sorted(windows, key=lambda one: one is active):
            cover = Cover(window)
            cover.lifted.connect(self.end)
            self._covered.append(_Covered(window, cover, window.windowTitle()))
            window.setWindowTitle(TITLE)

    def end(self) -> None:
        """Show everything again, and put the focus back where it was."""
        covered, self._covered = self._covered, []
        for one in covered:
            if not isValid(one.window):
                continue
            if one.window.windowTitle() == TITLE:
                one.window.setWindowTitle(one.title)
            one.cover.hide()
            one.cover.deleteLater()
        if self._focus is not None and isValid(self._focus):
            self._focus.setFocus()
        self._focus = None
