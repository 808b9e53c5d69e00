"""New, open, save, save as, revert: the window's side of files, with the questions a person must be asked."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

from PySide6.QtCore import QLockFile, QMimeData, QObject
from PySide6.QtWidgets import (
    QAbstractSpinBox,
    QApplication,
    QFileDialog,
    QLineEdit,
    QPlainTextEdit,
    QWidget,
)
from shiboken6 import isValid

from deliberate import files
from deliberate.errors import DeliberateError
from deliberate.files import on_disk
from deliberate.files import recovery as copies
from deliberate.files.on_disk import GONE, OnDisk
from deliberate.scenario.values import Ballot, Question, Scenario, Variant
from deliberate.window.asking import ask, tell
from deliberate.window.held_file import HeldFile, InUseError, Locks
from deliberate.window.recent import RecentFiles
from deliberate.window.recovery import Leftover, Recovery
from deliberate.window.session import Session

SUFFIX = ".deliberate.json"
FILTER = f"Meetings (*{SUFFIX});;All files (*)"

SAVE, DISCARD = "&Save", "&Discard"
AS_COPY = "&Open as a copy"
KEEP_MINE, LOAD_THEIRS, OTHER_NAME = "&Keep mine", "&Load theirs", "&Save mine under another name …"
REPLACE = "&Replace it"


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
    return path if path.name.lower().endswith(".json") else path.with_name(path.name + SUFFIX)


def ask_for_copy(window: QWidget | None, path: Path) -> bool:
    """Whether to open a file as a copy that another window has open."""
    what = (
        f"“{path.name}” is open in another window of Deliberate. Two windows would overwrite each other's work.\n\n"
        "A copy is a meeting of its own: saving asks for another name."
    )
    return ask(window, "Open in another window", what, [AS_COPY]) == AS_COPY


class MeetingFiles(QObject):
    """Opens and saves the session's meeting, asking before anything made by hand would be lost."""

    def __init__(
        self, session: Session, window: QWidget, recent: RecentFiles, recovery: Recovery, locks: Locks
    ) -> None:
        super().__init__(window)
        self._session, self._window = session, window
        self.recent, self._recovery, self._locks = recent, recovery, locks
        self._held: HeldFile | None = None
        self._told = ""  # what the file held when she was told of it last

    # Opening

    def begin(self, held: HeldFile | None) -> None:
        """Take over the file that the session's meeting was read from at the start."""
        self._hold(held)
        if held is not None:
            self.recent.add(held.path)

    def new(self) -> None:
        """Start an empty meeting."""
        if self.may_leave():
            self._show(new_meeting(), None)

    def ask_open(self) -> None:
        """Ask for a file and open it."""
        chosen, _ = QFileDialog.getOpenFileName(self._window, "Open a meeting", str(self._folder()), FILTER)
        if chosen:
            self.open(Path(chosen))

    def open(self, path: Path) -> bool:
        """Open `path`; where it cannot be read, say why and keep what is open."""
        if not self.may_leave():
            return False
        try:
            lock = self._lock(path)
        except InUseError:
            return ask_for_copy(self._window, path) and self.open_copy(path)
        try:
            scenario, known = on_disk.read_noting(path)
        except DeliberateError as error:
            self._let_go(lock)
            self._tell_unread(path, error)
            return False
        self._show(scenario, HeldFile(path, known, lock))
        self.recent.add(path)
        return True

    def open_copy(self, path: Path) -> bool:
        """Show what `path` holds as a meeting without a file of its own, so that saving asks where to."""
        try:
            scenario = files.read(path)
        except DeliberateError as error:
            self._tell_unread(path, error)
            return False
        self._show(scenario, None)
        return True

    def open_demo(self, path: Path) -> None:
        """Open a demo as a meeting without a file of its own."""
        if self.may_leave():
            self.open_copy(path)

    def open_recent(self, path: Path) -> None:
        """Open a file of the list of recent ones; one that is gone leaves the list."""
        if path.exists():
            self.open(path)
            return
        self.recent.drop(path)
        tell(
            self._window,
            f"“{path.name}” is not there any more",
            f"There is no file {path}: it was moved, renamed or deleted, or its disk is not connected. It is taken "
            "off the list of recent files.",
        )

    def revert(self) -> None:
        """Show again what is on disk, as a step that can be undone."""
        if self._held is not None:
            self._load("Revert to the saved meeting", self._held)

    # Saving

    def save(self) -> bool:
        """Save to the meeting's file; ask where to when it has none. True when it is on disk."""
        self._finish_typing()
        if self._held is None:
            return self.ask_save_as()
        now = on_disk.look(self._held.path, self._held.known)
        if now.digest not in (self._held.known.digest, GONE):
            return self._ask_about_change(self._held, now, before_saving=True)
        return self._write(self._held.path, self._held.lock)

    def ask_save_as(self) -> bool:
        """Ask for a file and save there. True when it is on disk."""
        self._finish_typing()
        proposed = self._session.path or self._folder() / (_file_name(self._session.scenario.title) + SUFFIX)
        chosen, _ = QFileDialog.getSaveFileName(self._window, "Save the meeting as", str(proposed), FILTER)
        return bool(chosen) and self.save_as(Path(chosen))

    def save_as(self, chosen: Path) -> bool:
        """Save to a file chosen in the dialog, and go on with that one. True when it is on disk."""
        path = with_suffix(chosen)
        if path != chosen and path.exists() and not self._may_replace(path):  # the dialog asked about `chosen` only
            return False
        try:
            lock = self._lock(path)
        except InUseError as error:
            tell(self._window, f"“{path.name}” was not saved", f"{path.name} {error}. Choose another name.")
            return False
        if self._write(path, lock):
            return True
        self._let_go(lock)
        return False

    def may_leave(self) -> bool:
        """Whether the meeting on screen may be left: it is saved, or she said what to do with it."""
        self._finish_typing()
        if not self._session.modified:
            return True
        what = f"“{self._session.scenario.title}” has changes that are not saved."
        answer = ask(self._window, "Save the changes?", what, [SAVE, DISCARD])
        return self.save() if answer == SAVE else answer == DISCARD

    def close(self) -> None:
        """The window closes: free the file and remove the copy of unsaved work."""
        self._recovery.close()
        self._hold(None)

    # What other programs did

    def look_at_disk(self) -> None:
        """Tell her when another program changed or removed the meeting's file, once for each time."""
        held = self._held
        if held is None or QApplication.activeModalWidget() is not None:
            return
        now = on_disk.look(held.path, held.known)
        if now.digest == held.known.digest:
            self._told = ""
        elif now.digest == self._told:
            return
        elif now.digest == GONE:
            self._told = GONE
            self._session.mark_unsaved()
            what = (
                f"Another program moved, renamed or deleted {self._called(held.path)}. The meeting is still "
                "in this window; saving puts it there again, Save as puts it elsewhere."
            )
            tell(self._window, "The file is not there any more", what)
        else:
            self._ask_about_change(held, now, before_saving=False)

    def _ask_about_change(self, held: HeldFile, now: OnDisk, *, before_saving: bool) -> bool:
        """Both versions stay until she has chosen. True when hers is on disk then."""
        self._told = now.digest
        mine = "your unsaved changes" if self._session.modified else "what you see here"
        what = (
            f"Another program changed {self._called(held.path)} on disk after it was opened here. Keep {mine}, or "
            "load the other version? Loading can be undone."
        )
        keep = REPLACE if before_saving else KEEP_MINE
        choices = [LOAD_THEIRS, keep, OTHER_NAME] if not self._session.modified else [OTHER_NAME, keep, LOAD_THEIRS]
        answer = ask(self._window, "The file was changed on disk", what, choices)
        if answer == OTHER_NAME:
            return self.ask_save_as()
        if answer == LOAD_THEIRS:
            self._load("Load the other version", held)
            return False
        if before_saving:
            return answer == REPLACE and self._write(held.path, held.lock)
        if answer == KEEP_MINE:  # the file stays as it is until she saves
            self._hold(replace(held, known=now))
            self._session.mark_unsaved()
        return False

    # After a crash

    def offer_leftovers(self) -> None:
        """Offer the unsaved work of windows that ended without saving, if there is any."""
        leftovers = self._recovery.leftovers()
        if not leftovers:
            return
        from deliberate.window.recovery_dialog import RecoveryDialog  # when it is needed: the start is quicker

        dialog = RecoveryDialog(leftovers, self._window)
        dialog.chosen.connect(self.bring_back)
        dialog.open()

    def bring_back(self, leftover: Leftover) -> None:
        """Go on with unsaved work. Its file stays as it is until she saves."""
        try:
            copy = copies.bring_back(leftover.path)
        except DeliberateError as error:
            leftover.let_go()
            tell(self._window, "The copy was not brought back", str(error))
            return
        if not self.may_leave():
            leftover.let_go()
            return
        held = self._held_by(copy.head)
        self._recovery.adopt(leftover)
        self._hold(held)
        self._session.open(copy.scenario, None if held is None else held.path, saved=False)
        if copy.head.variant in [variant.name for variant in copy.scenario.variants]:
            self._session.show_variant(copy.head.variant)
        self._session.said.emit("Brought back. Save to keep it")

    def _held_by(self, head: copies.Head) -> HeldFile | None:
        """The file that a copy belongs to; none where it never had one, or another window has it by now."""
        if head.path is None or head.digest is None:
            return None
        path = Path(head.path)
        try:
            return HeldFile(path, OnDisk(head.digest), self._lock(path))
        except InUseError:
            return None

    # Parts

    def _finish_typing(self) -> None:
        """Have what stands in a field taken up, as if she had gone elsewhere: else it would not be saved."""
        field = self._window.focusWidget()
        if not isinstance(field, QLineEdit | QPlainTextEdit | QAbstractSpinBox):
            return
        field.clearFocus()
        if isValid(field) and field.isVisible():
            field.setFocus()

    def _show(self, scenario: Scenario, held: HeldFile | None) -> None:
        self._hold(held)
        self._session.open(scenario, None if held is None else held.path)

    def _hold(self, held: HeldFile | None) -> None:
        before, self._held = self._held, held
        if before is not None and (held is None or held.lock is not before.lock) and before.lock is not None:
            before.lock.unlock()
        self._recovery.digest = None if held is None else held.known.digest
        self._told = ""

    def _lock(self, path: Path) -> QLockFile | None:
        """The lock for `path`: the one at hand if it is the open meeting's file."""
        if self._held is not None and _same_place(path, self._held.path):
            return self._held.lock
        return self._locks.take(path)

    def _let_go(self, lock: QLockFile | None) -> None:
        """Free a lock that was taken for nothing."""
        if lock is not None and (self._held is None or lock is not self._held.lock):
            lock.unlock()

    def _load(self, step: str, held: HeldFile) -> None:
        try:
            scenario, known = on_disk.read_noting(held.path)
        except DeliberateError as error:
            self._tell_unread(held.path, error)
            return
        self._hold(replace(held, known=known))
        self._session.replace(step, scenario)
        self._session.mark_saved(held.path)

    def _write(self, path: Path, lock: QLockFile | None) -> bool:
        try:
            known = on_disk.write_noting(self._session.meeting, path)
        except DeliberateError as error:
            still = "The meeting is still in this window, and what was on disk before is unchanged."
            tell(self._window, "The meeting was not saved", f"{self._called(path)}: {error}.\n\n{still}")
            return False
        self._hold(HeldFile(path, known, lock))
        self._session.mark_saved(path)
        self.recent.add(path)
        self._session.said.emit("Saved" if self._session.codes_shown else f"Saved as {path.name}")
        return True

    def _may_replace(self, path: Path) -> bool:
        what = f"There is already a file {path.name} in {path.parent}."
        return ask(self._window, f"Replace “{path.name}”?", what, [REPLACE]) == REPLACE

    def _called(self, path: Path) -> str:
        """A file in what may come up before others' eyes: its name may hold a person's, for which no code stands."""
        return "the meeting's file" if self._session.codes_shown else path.name

    def _tell_unread(self, path: Path, error: DeliberateError) -> None:
        tell(self._window, f"“{path.name}” was not opened", f"{path.name}: {error}")

    def _folder(self) -> Path:
        return self._session.path.parent if self._session.path is not None else self.recent.folder


def dropped_file(data: QMimeData) -> Path | None:
    """The one file that is dragged, or None where it is something else or several."""
    urls = data.urls() if data.hasUrls() else []
    return Path(urls[0].toLocalFile()) if len(urls) == 1 and urls[0].isLocalFile() else None


def _same_place(one: Path, other: Path) -> bool:
    try:
        return one.samefile(other)
    except OSError:
        return one.absolute() == other.absolute()


def _file_name(title: str) -> str:
    kept = "".join(letter if letter.isalnum() or letter in " -_" else " " for letter in title)
    return "-".join(kept.lower().split()) or "meeting"
