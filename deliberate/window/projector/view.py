"""The view that fills the screen. It changes nothing but the round; the window behind it stays as it is."""

from __future__ import annotations

from collections.abc import Iterable

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QCloseEvent, QFont, QKeyEvent, QMouseEvent, QPalette, QResizeEvent, QScreen, QWheelEvent
from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget

from deliberate.rehearsal.results import Finding, Kind
from deliberate.window.projector.wall import LEGIBLE, WallCanvas, WallRuler
from deliberate.window.session import Session
from deliberate.window.text import plain_label
from deliberate.window.theme import Look
from deliberate.window.vote import CAUTION, vote_in_words

# What points at one person's weight or view stays off the wall: a room reads it as a ranking.
ABOUT_SOMEBODY: frozenset[Kind] = frozenset(
    ("carries", "fixed-view", "knife-edge", "unheard", "hears-nobody", "outside", "unknown-starts", "absent")
)
WAITING = "Working it out …"
NOTHING = "Nothing stands out."
ON = (Qt.Key.Key_PageDown, Qt.Key.Key_Right, Qt.Key.Key_Down, Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_N)
BACK = (Qt.Key.Key_PageUp, Qt.Key.Key_Left, Qt.Key.Key_Up, Qt.Key.Key_Backspace, Qt.Key.Key_P)
LEAVE = (Qt.Key.Key_Escape, Qt.Key.Key_F5)
BLANK = (Qt.Key.Key_F8, Qt.Key.Key_B, Qt.Key.Key_Period)
PLAY = (Qt.Key.Key_Space, Qt.Key.Key_F9)


def for_the_room(findings: Iterable[Finding]) -> Finding | None:
    """The most important finding that is about the meeting and not about somebody."""
    return next((finding for finding in findings if finding.kind not in ABOUT_SOMEBODY), None)


class ProjectorView(QWidget):
    """The picture, the round bar and one sentence of what stands out. A click or Page Down steps on, the right
    button or Page Up back; Escape leaves. `left` says that it is closed."""

    left = Signal()
    blank_wanted = Signal()

    def __init__(self, session: Session, look: Look, window: QWidget) -> None:
        super().__init__(window, Qt.WindowType.Window)
        self._session, self._look = session, look
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setWindowTitle("Projector view – Deliberate")
        self.setAccessibleName("Projector view")
        self.setAutoFillBackground(True)
        self.sentence = plain_label(self)
        self.canvas = WallCanvas(session, look, self)
        self.vote = plain_label(self)
        self.caution = plain_label(self, muted=True, text=CAUTION)
        self.caution.setWordWrap(False)
        self.ruler = WallRuler(session, look, self)
        self._foot = QHBoxLayout()
        self._foot.addWidget(self.vote, 1)
        self._foot.addWidget(self.caution, 0, Qt.AlignmentFlag.AlignBottom)
        self._column = QVBoxLayout(self)
        self._column.setSpacing(0)
        self._column.addWidget(self.sentence)
        self._column.addWidget(self.canvas, 1)
        self._column.addLayout(self._foot)
        self._column.addWidget(self.ruler)
        session.findings_changed.connect(self._refresh_sentence)
        session.rehearsal_changed.connect(self._refresh)
        session.scenario_changed.connect(self._refresh)
        session.doubting.changed.connect(self._refresh_vote)
        session.player.moved.connect(self._refresh_vote)
        look.changed.connect(self._dress)
        self._dress()
        self._refresh()

    def fill(self, screen: QScreen) -> None:
        """Fill `screen`."""
        self.setGeometry(screen.geometry())
        self.showFullScreen()
        self.raise_()
        self.activateWindow()
        self.setFocus()

    def texts(self) -> list[QLabel]:
        """The labels, for which a size holds."""
        return [self.sentence, self.vote, self.caution]

    def _refresh(self) -> None:
        self._refresh_sentence()
        self._refresh_vote()

    def _refresh_sentence(self) -> None:
        finding = for_the_room(self._session.findings)
        waiting = self._session.rehearsal is None
        self.sentence.setText(finding.says if finding is not None else WAITING if waiting else NOTHING)
        self.setAccessibleDescription(self.sentence.text())

    def _refresh_vote(self) -> None:
        player = self._session.player
        voted = vote_in_words(self._session.rehearsal, player.round, self._session.doubting)
        text = voted or f"Round {player.round} of {player.last}"
        if text != self.vote.text():
            self.vote.setText(text)

    def _dress(self) -> None:
        palette = QPalette(self.palette())
        palette.setColor(QPalette.ColorRole.Window, self._look.theme.canvas)
        self.setPalette(palette)

    def _fit_type(self) -> None:
        """Type and margins by the height of the picture."""
        height = self.height()
        smallest = height * LEGIBLE
        edge = round(smallest * 0.8)
        for label, size in ((self.sentence, 1.25), (self.vote, 1.0), (self.caution, 1.0)):
            font = QFont(label.font())
            font.setPixelSize(-(-round(smallest * size * 10) // 10))
            font.setWeight(QFont.Weight.DemiBold if label is self.sentence else QFont.Weight.Normal)
            label.setFont(font)
        self._column.setContentsMargins(edge, edge // 2, edge, edge // 2)
        self._foot.setSpacing(edge)
        self.canvas.fill(height)
        self.ruler.fill(height)

    def resizeEvent(self, event: QResizeEvent) -> None:
        self._fit_type()
        super().resizeEvent(event)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        player, key = self._session.player, event.key()
        if key in LEAVE:
            self.close()
        elif key in BLANK:
            self.blank_wanted.emit()
        elif key in ON:
            player.step(1)
        elif key in BACK:
            player.step(-1)
        elif key in PLAY:
            player.toggle()
        elif key == Qt.Key.Key_Home:
            player.seek(0)
        elif key == Qt.Key.Key_End:
            player.seek(player.last)
        else:
            super().keyPressEvent(event)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        steps = {Qt.MouseButton.LeftButton: 1, Qt.MouseButton.RightButton: -1}
        if event.button() in steps:
            self._session.player.step(steps[event.button()])

    def wheelEvent(self, event: QWheelEvent) -> None:
        if event.angleDelta().y():
            self._session.player.step(-1 if event.angleDelta().y() > 0 else 1)

    def closeEvent(self, event: QCloseEvent) -> None:
        super().closeEvent(event)
        self.left.emit()
