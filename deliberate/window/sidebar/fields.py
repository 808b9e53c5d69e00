"""Fields of the pages: what is typed is handed over at Return or when the field is left, Escape takes it back."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QEvent, QSize, Qt, QTimer, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QKeySequence, QWheelEvent
from PySide6.QtWidgets import QComboBox, QLineEdit, QPlainTextEdit, QSizePolicy, QWidget

from deliberate.window.text import explain

REST_MS = 500  # a pause in typing after which longer texts are handed over


PARAGRAPH = "\u2029"  # what Qt's documents keep between lines
MODIFIERS = (Qt.Key.Key_Control, Qt.Key.Key_Shift, Qt.Key.Key_Alt, Qt.Key.Key_AltGr, Qt.Key.Key_Meta)
ELSEWHERE = (Qt.FocusReason.ActiveWindowFocusReason, Qt.FocusReason.PopupFocusReason)  # comes back to go on typing


def is_undo(event: QEvent) -> bool:
    """Whether a key is about to undo or redo: the window's business while nothing is being typed."""
    return (
        event.type() == QEvent.Type.ShortcutOverride
        and isinstance(event, QKeyEvent)
        and (event.matches(QKeySequence.StandardKey.Undo) or event.matches(QKeySequence.StandardKey.Redo))
    )


def is_command(event: QEvent) -> bool:
    """Whether a key is about to start an action of the window (Ctrl+S): what was typed is handed over before."""
    return (
        event.type() == QEvent.Type.ShortcutOverride
        and isinstance(event, QKeyEvent)
        and not event.isAccepted()
        and bool(event.modifiers() & Qt.KeyboardModifier.ControlModifier)
        and event.key() not in MODIFIERS
    )


class LineField(QLineEdit):
    """One line, such as a number. After handing over, it shows what then holds: refused text does not stay."""

    given = Signal(str)

    def __init__(self, name: str, parent: QWidget, *, hint: str = "", meaning: str = "") -> None:
        super().__init__(parent)
        self._kept = ""
        self._subject: object = None
        self.setAccessibleName(name)
        self.setPlaceholderText(hint)
        self._meaning = meaning
        _tell_whole(self, meaning)
        self.editingFinished.connect(self.hand_over)

    def show_text(self, text: str, subject: object = None) -> None:
        """The text that holds now for `subject`. What is being typed for the same one is left alone."""
        typing = self.hasFocus() and self.isModified() and subject == self._subject
        self._kept, self._subject = text, subject
        if not self._meaning:
            _tell_whole(self, text)
        if not typing and text != self.text():
            self.setText(text)
            self.setCursorPosition(0)

    def hand_over(self) -> None:
        """Give what was typed, if it is something else."""
        typed = self.text()
        if not self.isModified():
            return
        self.setModified(False)
        if typed != self._kept:
            self.given.emit(typed)
        self.setText(self._kept)

    def sizeHint(self) -> QSize:
        return QSize(self.fontMetrics().horizontalAdvance("n") * 8, super().sizeHint().height())

    def minimumSizeHint(self) -> QSize:
        return QSize(self.fontMetrics().horizontalAdvance("n") * 5, super().minimumSizeHint().height())

    def event(self, event: QEvent) -> bool:
        if is_undo(event) and not self.isModified():
            event.ignore()
            return False
        done = super().event(event)
        if is_command(event):
            self.hand_over()
        return done

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape and self.isModified():
            self.setText(self._kept)
            self.selectAll()
        else:
            super().keyPressEvent(event)


class TextField(QPlainTextEdit):
    """Text that wraps. Of one paragraph, or notes, which are also handed over after a pause in typing."""

    given = Signal(str)
    left = Signal()

    def __init__(self, name: str, parent: QWidget, *, lines: int, notes: bool = False, hint: str = "") -> None:
        super().__init__(parent)
        self._kept = ""
        self._subject: object = None
        self._notes, self._lines = notes, lines
        self.setAccessibleName(name)
        self.setPlaceholderText(hint)
        self.setTabChangesFocus(True)
        self.document().setDocumentMargin(2)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self._rest = QTimer(self)
        self._rest.setSingleShot(True)
        self._rest.setInterval(REST_MS)
        self._rest.timeout.connect(self.hand_over)
        vertical = QSizePolicy.Policy.Expanding if notes else QSizePolicy.Policy.Fixed
        self.setSizePolicy(QSizePolicy.Policy.Expanding, vertical)
        if notes:
            self.textChanged.connect(self._typing)

    def text(self) -> str:
        """What stands in the field, letter by letter: `toPlainText` makes plain spaces of those that do not break."""
        return self.document().toRawText().replace(PARAGRAPH, "\n")

    def show_text(self, text: str, subject: object = None) -> None:
        """The text that holds now for `subject`. What is being typed for the same one is left alone."""
        typing = self.hasFocus() and self.document().isModified() and subject == self._subject
        self._kept, self._subject = text, subject
        if not typing and text != self.text():
            self.setPlainText(text)

    def hand_over(self) -> None:
        """Give what was typed, if it is something else."""
        self._rest.stop()
        if not self.document().isModified():
            return
        self.document().setModified(False)
        typed = self.text()
        if typed != self._kept:
            self.given.emit(typed)
        if self._kept != self.text():  # refused or tidied
            self.setPlainText(self._kept)

    def _typing(self) -> None:
        if self.document().isModified():
            self._rest.start()

    def sizeHint(self) -> QSize:
        height = self.fontMetrics().lineSpacing() * self._lines + 16
        return QSize(160, height)

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def event(self, event: QEvent) -> bool:
        own = self.document().isUndoAvailable() if self._notes else self.document().isModified()
        if is_undo(event) and not own:
            event.ignore()
            return False
        done = super().event(event)
        if is_command(event):
            self.hand_over()
        return done

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        if event.reason() not in ELSEWHERE:
            self.hand_over()
            self.left.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape and self.document().isModified():
            self._rest.stop()
            self.setPlainText(self._kept)
            self.selectAll()
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and not self._notes:
            self.hand_over()
        else:
            super().keyPressEvent(event)


class Choice(QComboBox):
    """One of a few. The wheel scrolls the page over it instead of changing it unseen."""

    chosen = Signal(object)

    def __init__(self, name: str, parent: QWidget, options: Sequence[tuple[str, object]] = ()) -> None:
        super().__init__(parent)
        self.setAccessibleName(name)
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.setMinimumContentsLength(6)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.set_options(options)
        self.activated.connect(lambda place: self.chosen.emit(self.itemData(place)))

    def set_options(self, options: Sequence[tuple[str, object]]) -> None:
        """What can be chosen: (text, value) pairs."""
        if [(self.itemText(i), self.itemData(i)) for i in range(self.count())] == list(options):
            return
        self.clear()
        for text, value in options:
            self.addItem(text, value)

    def show_value(self, value: object) -> None:
        """The value that holds now."""
        place = next((i for i in range(self.count()) if self.itemData(i) == value), -1)
        self.setCurrentIndex(place)
        _tell_whole(self, self.currentText())

    def wheelEvent(self, event: QWheelEvent) -> None:
        event.ignore()


def _tell_whole(field: QWidget, text: str) -> None:
    """Say all of the text, where the field may be too narrow for it; an empty tooltip would be a box of its own."""
    if text:
        explain(field, text)
    else:
        field.setToolTip("")
        field.setAccessibleDescription("")
