"""The window: lays out the parts, connects them to the session, and keeps title and status line true."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QByteArray, QEvent, QSettings, QSize, Qt, QTimer
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QPaintEvent, QScreen
from PySide6.QtWidgets import (
    QApplication,
    QComboBox,
    QDialog,
    QHBoxLayout,
    QLabel,
    QMainWindow,
    QSplitter,
    QToolTip,
    QVBoxLayout,
    QWidget,
)

from deliberate.window.actions import Actions
from deliberate.window.arrow_leverage import ArrowLeverage
from deliberate.window.asking import tell
from deliberate.window.blank import Blank
from deliberate.window.canvas import Canvas
from deliberate.window.care import CareNote, is_noted, note
from deliberate.window.chart import ChartPanel
from deliberate.window.columns import Columns
from deliberate.window.held_file import Locks
from deliberate.window.meeting_files import MeetingFiles, dropped_file
from deliberate.window.recent import RecentFiles
from deliberate.window.recovery import Recovery
from deliberate.window.right_pages import RightPages
from deliberate.window.roundbar import RoundBar
from deliberate.window.session import Session
from deliberate.window.sidebar import Sidebar
from deliberate.window.styles import style_sheet
from deliberate.window.tab_order import tab_to_next
from deliberate.window.text import ElidedLabel, explain, strong
from deliberate.window.theme import Look
from deliberate.window.variant_strip import VariantStrip
from deliberate.window.vote import CAUTION, vote_in_words


class TopBar(QWidget):
    """Title, variants and question in one row."""

    def __init__(self, session: Session, parent: QWidget) -> None:
        super().__init__(parent)
        self._session = session
        self.title = ElidedLabel(self, cut=Qt.TextElideMode.ElideMiddle)  # so that "edited" stays
        self.title.setMinimumWidth(120)
        strong(self.title)
        self.variants = VariantStrip(session, self)
        self.question_label = QLabel("&Question", self)
        self.question_label.setProperty("muted", True)
        self.question = QComboBox(self)
        self.question.setAccessibleName("Question shown")
        self.question.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.question.setMinimumContentsLength(18)
        self.question.activated.connect(self._choose)
        self.question_label.setBuddy(self.question)
        self.only_question = ElidedLabel(self, align=Qt.AlignmentFlag.AlignRight)
        row = QHBoxLayout(self)
        row.setContentsMargins(16, 5, 12, 5)
        row.setSpacing(10)
        row.addWidget(self.title, 3)
        row.addWidget(self.variants, 6)
        row.addWidget(self.question_label)
        row.addWidget(self.question, 3)
        row.addWidget(self.only_question, 3)
        session.scenario_changed.connect(self.refresh)
        session.file_changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Read title and questions again."""
        scenario = self._session.scenario
        self.title.setText(scenario.title + (" · edited" if self._session.modified else ""))
        self.question.clear()
        for question in scenario.questions:
            self.question.addItem(question.text, question.id)
        self.question.setCurrentIndex([q.id for q in scenario.questions].index(self._session.question.id))
        several = len(scenario.questions) > 1
        self.question.setVisible(several)
        self.question_label.setVisible(several)
        self.only_question.setVisible(not several)
        text = self._session.question.text
        explain(self.question, text)  # the box may be too narrow for it
        self.only_question.setText(text)
        self.only_question.setAccessibleName(f"Question: {text}")

    def _choose(self, place: int) -> None:
        self._session.show_question(self.question.itemData(place))


class MainWindow(QMainWindow):
    """Draw, edit, play, see why.

    `private` is the folder for what must survive a crash, by default beside the settings.
    """

    def __init__(self, session: Session, look: Look, settings: QSettings, private: Path | None = None) -> None:
        super().__init__()
        self.session, self.look, self._settings = session, look, settings
        session.setParent(self)
        private = private or Path(settings.fileName()).parent
        self.recovery = Recovery(session, private / "recovery", self)
        self.files = MeetingFiles(session, self, RecentFiles(settings), self.recovery, Locks(private / "open"))
        self.top_bar = TopBar(session, self)
        self.variant_strip = self.top_bar.variants
        self.sidebar = Sidebar(session, look, self)
        self.canvas = Canvas(session, look, self)
        self.arrow_leverage = ArrowLeverage(session, self.canvas, self)
        self.chart = ChartPanel(session, look, self)
        self.right_pages = RightPages(session, look, self)
        self.findings = self.right_pages.findings
        self.round_bar = RoundBar(session, look, self)
        self.care_note = CareNote(self)
        self.care_note.hide()
        self.care_note.put_away.connect(self._put_note_away)
        self.blank = Blank(self)
        self._lay_out()
        self._fill_status()
        self.actions_of_window = Actions(self)

        self.round_bar.choose_on_canvas.connect(self.canvas.begin_choosing)
        session.scenario_changed.connect(self._refresh_title)
        session.file_changed.connect(self._refresh_title)
        session.rehearsal_changed.connect(self._refresh_vote)
        session.scenario_changed.connect(self._refresh_vote)
        session.player.moved.connect(self._refresh_vote)
        session.doubting.changed.connect(self._refresh_vote)
        session.codes_changed.connect(self._forget_words)
        session.said.connect(self._say)
        session.refused.connect(self._refuse)
        self.recovery.failed.connect(lambda why: self._refuse(f"The copy of unsaved work {why}"))
        look.changed.connect(self._dress)
        self._painted_once = False
        self._dress()
        self._refresh_title()
        self._restore()
        self.setAcceptDrops(True)
        self.canvas.setFocus()

    def _lay_out(self) -> None:
        self.right = QSplitter(Qt.Orientation.Vertical, self)
        self.right.addWidget(self.chart)
        self.right.addWidget(self.right_pages)
        self.right.setChildrenCollapsible(False)
        self.right.setSizes([380, 320])
        self.right.setHandleWidth(1)
        self.across = Columns(self, self.sidebar, self.canvas, self.right)
        centre = QWidget(self)
        column = QVBoxLayout(centre)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.top_bar)
        column.addWidget(_hairline(centre))
        column.addWidget(self.care_note)
        column.addWidget(self.across, 1)
        column.addWidget(_hairline(centre))
        column.addWidget(self.round_bar)
        self.setCentralWidget(centre)

    def _fill_status(self) -> None:
        self.vote = QLabel(self)
        self.vote.setTextFormat(Qt.TextFormat.PlainText)
        self.statusBar().setSizeGripEnabled(False)
        caution = QLabel(CAUTION, self)
        caution.setProperty("muted", True)
        caution.setContentsMargins(12, 0, 14, 0)
        self.statusBar().addPermanentWidget(self.vote)
        self.statusBar().addPermanentWidget(caution)

    # What it says

    def _refresh_title(self) -> None:
        session = self.session
        # A file's name may hold people's names, and codes cannot be put into it.
        name = session.path.name if session.path and not session.codes_shown else session.scenario.title
        # Qt reads "[*]" in a title as the place of the modified mark; a name must not.
        self.setWindowTitle(f"{name.replace('[*]', '[ * ]')}[*] – Deliberate")
        self.setWindowModified(session.modified)

    def _refresh_vote(self) -> None:
        text = vote_in_words(self.session.rehearsal, self.session.player.round, self.session.doubting)
        if text != self.vote.text():
            self.vote.setText(text)

    def _forget_words(self) -> None:
        """What was said before codes stood for names, or names for codes, is not left standing."""
        self.canvas.cancel_typing()
        self.statusBar().clearMessage()
        QToolTip.hideText()

    def _say(self, sentence: str) -> None:
        self.statusBar().showMessage(sentence, 6000)

    def _refuse(self, why: str) -> None:
        QApplication.beep()
        self.statusBar().showMessage(why, 12000)

    def _dress(self) -> None:
        self.setStyleSheet(style_sheet(self.look.theme))
        self.session.player.still = self.look.still

    def turn_to_variant(self, by: int) -> None:
        """Show the next (1) or the previous (-1) variant, round and round."""
        names = [variant.name for variant in self.session.scenario.variants]
        self.session.show_variant(names[(names.index(self.session.variant.name) + by) % len(names)])

    def begin_with_care(self) -> None:
        """Show the note on what the sketch is and is not, until it has been put away once."""
        self.care_note.setVisible(not is_noted(self._settings))

    def _put_note_away(self) -> None:
        note(self._settings)
        self.care_note.hide()
        self.canvas.setFocus()

    def ask_projector(self) -> None:
        """Ask for codes or names, then fill a screen."""
        from deliberate.window.projector import ProjectorChoice, ProjectorView  # when it is asked for, as dialogs

        if self.findChild(ProjectorView) is not None:
            return
        choice = ProjectorChoice(self)
        choice.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        choice.chosen.connect(self.project)
        choice.open()

    def project(self, codes: bool, screen: QScreen) -> None:
        """Fill `screen` with picture, round bar and one sentence, in codes or names."""
        from deliberate.window.projector import ProjectorView

        self.session.show_codes(codes)
        view = ProjectorView(self.session, self.look, self)
        view.blank_wanted.connect(self.blank.begin)
        view.left.connect(self._leave_projector)
        view.fill(screen)

    def _leave_projector(self) -> None:
        self.activateWindow()
        if self.session.codes_shown:
            self._say("Codes are still shown: F7 shows names")

    # Its life

    def _restore(self) -> None:
        self.resize(QSize(1280, 800).boundedTo(self.screen().availableSize()))  # a projector may have less
        geometry = self._settings.value("window/geometry")
        if isinstance(geometry, QByteArray):
            self.restoreGeometry(geometry)
        for restore, key in ((self.across.keep, "window/across"), (self.right.restoreState, "window/right")):
            state = self._settings.value(key)
            if isinstance(state, QByteArray):
                restore(state)

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        if not self._painted_once:
            self._painted_once = True
            # Heavy imports and the first rehearsal wait until the first frame is up.
            QTimer.singleShot(0, self, self._after_first_frame)

    def _after_first_frame(self) -> None:
        self.session.rehearse()
        self.chart.load()
        self.sidebar.load()
        self.files.offer_leftovers()

    def focusNextPrevChild(self, forward: bool) -> bool:
        return tab_to_next(self, self.centralWidget(), forward=forward) or super().focusNextPrevChild(forward)

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.ActivationChange and self.isActiveWindow():
            QTimer.singleShot(0, self, self.files.look_at_disk)  # a question must not open in the middle of the event

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        if dropped_file(event.mimeData()) is not None and QApplication.activeModalWidget() is None:
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        path = dropped_file(event.mimeData())
        if path is not None:
            event.acceptProposedAction()
            self.activateWindow()
            # The other program waits until the drop is over; a question must not keep it waiting.
            QTimer.singleShot(0, self, lambda: self.files.open(path))

    def closeEvent(self, event: QCloseEvent) -> None:
        if not self.files.may_leave():
            event.ignore()
            return
        for beside in self.findChildren(QDialog):
            beside.close()
        self._settings.setValue("window/geometry", self.saveGeometry())
        self._settings.setValue("window/across", self.across.kept())
        self._settings.setValue("window/right", self.right.saveState())
        self.session.close()
        self.right_pages.close_down()
        self.arrow_leverage.close()
        self.files.close()
        event.accept()

    def tell(self, title: str, what: str) -> None:
        """A message with one button."""
        tell(self, title, what)


def _hairline(parent: QWidget) -> QWidget:
    line = QWidget(parent)
    line.setFixedHeight(1)
    line.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
    line.setProperty("hairline", True)
    return line
