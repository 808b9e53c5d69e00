"""New, open, save, save as: the window's side of files, with the questions a person must be asked."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import QObject, QSettings
from PySide6.QtWidgets import QFileDialog, QMessageBox, QWidget

from deliberate import files
from deliberate.errors import DeliberateError
from deliberate.scenario.values import Ballot, Question, Scenario, Variant
from deliberate.window.session import Session

SUFFIX = ".deliberate.json"
FILTER = f"Meetings (*{SUFFIX});;All files (*)"


def new_meeting() -> Scenario:
    """An empty meeting with one question from 0 to 100 and a vote at the middle."""
    question = Question(id="question", text="What is to be decided?", low=0.0, high=100.0, pass_mark=50.0)
    return Scenario(
        title="New meeting",
        questions=(question,),
        ballot=Ballot(),
        variants=(Variant(name="As it stands", people=()),),
    )


def with_suffix(path: Path) -> Path:
    """`path` with the suffix of scenario files where none was typed."""
    return path if path.suffix else path.with_name(path.name + SUFFIX)


class MeetingFiles(QObject):
    """Opens and saves the session's meeting, asking before anything made by hand would be lost."""

    def __init__(self, session: Session, window: QWidget, settings: QSettings) -> None:
        super().__init__(window)
        self._session, self._window, self._settings = session, window, settings

    def new(self) -> None:
        """Start an empty meeting."""
        if self.may_leave():
            self._session.open(new_meeting(), None)

    def ask_open(self) -> None:
        """Ask for a file and open it."""
        chosen, _ = QFileDialog.getOpenFileName(self._window, "Open a meeting", self._folder(), FILTER)
        if chosen:
            self.open(Path(chosen))

    def open(self, path: Path) -> bool:
        """Open `path`; where it cannot be read, say why and keep what is open."""
        if not self.may_leave():
            return False
        scenario = self._read(path)
        if scenario is None:
            return False
        self._session.open(scenario, path)
        self._remember(path)
        return True

    def open_demo(self, path: Path) -> None:
        """Open a demo as a meeting without a file of its own, so that saving asks where to."""
        if not self.may_leave():
            return
        scenario = self._read(path)
        if scenario is not None:
            self._session.open(scenario, None)

    def save(self) -> bool:
        """Save to the meeting's file; ask where to when it has none. True when it is on disk."""
        path = self._session.path
        return self.ask_save_as() if path is None else self._write(path)

    def ask_save_as(self) -> bool:
        """Ask for a file and save there. True when it is on disk."""
        proposed = self._session.path or Path(self._folder()) / (_file_name(self._session.scenario.title) + SUFFIX)
        chosen, _ = QFileDialog.getSaveFileName(self._window, "Save the meeting as", str(proposed), FILTER)
        return bool(chosen) and self._write(with_suffix(Path(chosen)))

    def may_leave(self) -> bool:
        """Whether the meeting on screen may be left: it is saved, or she said what to do with it."""
        if not self._session.modified:
            return True
        answer = self._ask_to_save()
        if answer == QMessageBox.StandardButton.Save:
            return self.save()
        return answer == QMessageBox.StandardButton.Discard

    def _ask_to_save(self) -> QMessageBox.StandardButton:
        box = QMessageBox(self._window)
        box.setIcon(QMessageBox.Icon.Question)
        box.setWindowTitle("Save the changes?")
        box.setTextFormat(box.textFormat().PlainText)
        box.setText(f"“{self._session.scenario.title}” has changes that are not saved.")
        box.setStandardButtons(
            QMessageBox.StandardButton.Save | QMessageBox.StandardButton.Discard | QMessageBox.StandardButton.Cancel
        )
        box.setDefaultButton(QMessageBox.StandardButton.Save)
        answer = QMessageBox.StandardButton(box.exec())
        box.deleteLater()
        return answer

    def _read(self, path: Path) -> Scenario | None:
        return self._told(f"“{path.name}” was not opened", path, lambda: files.read(path))

    def _write(self, path: Path) -> bool:
        scenario = self._session.scenario
        if self._told(f"“{path.name}” was not saved", path, lambda: files.write(scenario, path) or scenario) is None:
            return False
        self._session.mark_saved(path)
        self._remember(path)
        self._session.said.emit(f"Saved as {path.name}")
        return True

    def _told(self, title: str, path: Path, act: Callable[[], Scenario]) -> Scenario | None:
        try:
            return act()
        except DeliberateError as error:
            tell(self._window, title, f"{path.name}: {error}")
            return None

    def _folder(self) -> str:
        if self._session.path is not None:
            return str(self._session.path.parent)
        return str(self._settings.value("file/folder", str(Path.home()), str))

    def _remember(self, path: Path) -> None:
        self._settings.setValue("file/folder", str(path.parent))
        self._settings.setValue("file/last", str(path))


def tell(window: QWidget, title: str, what: str) -> None:
    """A message with one button; `what` is shown as plain text."""
    box = QMessageBox(window)
    box.setIcon(QMessageBox.Icon.Warning)
    box.setWindowTitle(title)
    box.setTextFormat(box.textFormat().PlainText)
    box.setText(what)
    box.exec()
    box.deleteLater()


def _file_name(title: str) -> str:
    kept = "".join(letter if letter.isalnum() or letter in " -_" else " " for letter in title)
    return "-".join(kept.lower().split()) or "meeting"
