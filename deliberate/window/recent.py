"""Which meetings were opened lately, where, and which one last; kept in the settings until she forgets them."""

from __future__ import annotations

import os
from pathlib import Path

from PySide6.QtCore import QSettings

MOST = 9  # as many as can have a digit as their key

_LIST, _LAST, _FOLDER = "file/recent", "file/last", "file/folder"


class RecentFiles:
    """The files opened or saved lately, the latest first."""

    def __init__(self, settings: QSettings) -> None:
        self._settings = settings

    @property
    def paths(self) -> tuple[Path, ...]:
        """The files, whether they still exist or not."""
        kept = self._settings.value(_LIST, [])
        names = kept if isinstance(kept, list) else [kept]  # a list of one comes back as its only entry
        return tuple(Path(name) for name in names if isinstance(name, str) and name)[:MOST]

    @property
    def last(self) -> Path | None:
        """The file that was open last."""
        name = str(self._settings.value(_LAST, "", str))
        return Path(name) if name else None

    @property
    def folder(self) -> Path:
        """Where a file was chosen last; the home folder at first."""
        name = str(self._settings.value(_FOLDER, "", str))
        return Path(name) if name and Path(name).is_dir() else Path.home()

    def add(self, path: Path) -> None:
        """Remember that `path` was opened or saved now."""
        path = Path(os.path.abspath(path))
        self._keep([path, *(other for other in self.paths if other != path)])
        self._settings.setValue(_LAST, str(path))
        self._settings.setValue(_FOLDER, str(path.parent))

    def drop(self, path: Path) -> None:
        """Take one file off the list."""
        self._keep([other for other in self.paths if other != path])
        if self.last == path:
            self._settings.remove(_LAST)

    def forget(self) -> None:
        """Keep nothing about files: neither the list, nor the last one, nor its folder."""
        for key in (_LIST, _LAST, _FOLDER):
            self._settings.remove(key)
        self._settings.sync()

    def _keep(self, paths: list[Path]) -> None:
        self._settings.setValue(_LIST, [str(path) for path in paths[:MOST]])


def label(path: Path, others: tuple[Path, ...]) -> str:
    """A short name for a menu: the file's, with its folder where another file has the same name."""
    if sum(other.name == path.name for other in others) > 1:
        return f"{path.name} in {path.parent}"
    return path.name
