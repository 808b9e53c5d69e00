"""Takes pictures of the window on every demo, at both sizes and in both appearances, to be looked at.

Run `python tests/pictures.py` in an environment with `.[test]`; the pictures go into `screenshots/`, which is not
committed. `python tests/pictures.py FILE ...` takes them of those files instead.
"""

from __future__ import annotations

import os
import sys
import tempfile
from pathlib import Path

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
os.environ.setdefault("QT_NO_GUI_THREADPOOL", "1")

from PySide6.QtCore import QDeadlineTimer, QSettings
from PySide6.QtWidgets import QApplication

from deliberate import files
from deliberate.files.resources import demo_scenarios
from deliberate.window.main_window import MainWindow
from deliberate.window.session import Session
from deliberate.window.theme import Look

FOLDER = Path(__file__).resolve().parent.parent / "screenshots"
SIZES = ((1280, 800), (1024, 768))
SETTLE_MS = 300  # the fine picture follows the coarse one


def wait(app: QApplication, milliseconds: int) -> None:
    """Let the window work for a while."""
    deadline = QDeadlineTimer(milliseconds)
    while not deadline.hasExpired():
        app.processEvents()


def take(app: QApplication, path: Path, settings: QSettings) -> None:
    """All pictures of one meeting: its first variant a little into the talk, with the first finding lit up."""
    for appearance in ("light", "dark"):
        look = Look(settings)
        look.choose(appearance)
        session = Session(files.read(path))
        window = MainWindow(session, look, settings)
        window.show()
        while not session.engine.idle() or session.rehearsal is None:
            wait(app, 20)
        for width, height in SIZES:
            window.resize(width, height)
            session.player.seek(min(1.4, session.player.last))
            session.select([session.variant.people[0].id] if session.variant.people else [])
            session.light(session.findings[0] if session.findings else None)
            wait(app, SETTLE_MS)
            name = f"{path.name.split('.')[0]}-{width}-{appearance}.png"
            window.grab().save(str(FOLDER / name))
            print(name)
        window.close()
        window.deleteLater()
        wait(app, 20)


def main() -> None:
    """Take them all."""
    app = QApplication([])
    app.setStyle("Fusion")
    FOLDER.mkdir(exist_ok=True)
    paths = [Path(name) for name in sys.argv[1:]] or demo_scenarios()
    with tempfile.TemporaryDirectory() as folder:
        for number, path in enumerate(paths):
            settings = QSettings(str(Path(folder) / f"{number}.ini"), QSettings.Format.IniFormat)
            take(app, path, settings)


if __name__ == "__main__":
    main()
