"""The demos to choose from."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from circles import CIRCLES
from msgspec.structs import replace
from PySide6.QtCore import Qt
from PySide6.QtTest import QAbstractItemModelTester
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from deliberate import files
from deliberate.window.gallery import Gallery, first_sentence
from deliberate.window.main_window import MainWindow
from deliberate.window.theme import Look


@pytest.fixture
def show(qtbot: QtBot, look: Look) -> Iterator[Callable[..., Gallery]]:
    shown: list[QWidget] = []

    def show_one(paths: tuple[Path, ...] | None = None) -> Gallery:
        parent = QWidget()
        shown.append(parent)
        gallery = Gallery(look, parent, paths)
        gallery.open()
        qtbot.waitExposed(gallery)
        return gallery

    yield show_one
    for parent in shown:
        parent.close()
        parent.deleteLater()


def test_every_demo_has_a_title_people_and_a_sentence(qtbot: QtBot, show: Callable[..., Gallery]) -> None:
    gallery = show()
    model = gallery.list.model()
    QAbstractItemModelTester(model, QAbstractItemModelTester.FailureReportingMode.Fatal)
    assert model.rowCount() == len(files.demo_scenarios())
    for row, path in enumerate(files.demo_scenarios()):
        scenario = files.read(path)
        spoken = model.index(row, 0).data(Qt.ItemDataRole.AccessibleTextRole)
        assert spoken.startswith(f"{scenario.title}, {len(scenario.variants[0].people)} people. ")
        sentence = spoken.split(" people. ", 1)[1]
        assert sentence
        assert scenario.notes.startswith(sentence)
        assert len(sentence) < 200


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("One. Two.", "One."),
        ("No end", "No end"),
        ("At 1.5 points it turns. Then no more.", "At 1.5 points it turns."),
        ("Over\ntwo lines! And on", "Over two lines!"),
        ("", ""),
    ],
)
def test_the_first_sentence(text: str, sentence: str) -> None:
    assert first_sentence(text) == sentence


def test_keys_choose_and_return_opens(qtbot: QtBot, open_file: Callable[..., MainWindow]) -> None:
    window = open_file()
    window.actions_of_window._show_gallery()
    gallery = QApplication.activeModalWidget()
    assert isinstance(gallery, Gallery)
    qtbot.waitUntil(gallery.list.hasFocus)
    qtbot.keyClick(gallery.list, Qt.Key.Key_Down)
    qtbot.keyClick(gallery.list, Qt.Key.Key_Down)
    qtbot.keyClick(gallery.list, Qt.Key.Key_Return)
    assert window.session.scenario == files.read(files.demo_scenarios()[2])
    assert window.session.path is None
    assert not window.isWindowModified()


def test_the_mouse_opens_and_escape_leaves(qtbot: QtBot, show: Callable[..., Gallery]) -> None:
    gallery = show()
    chosen: list[Path] = []
    gallery.chosen.connect(chosen.append)
    place = gallery.list.visualRect(gallery.list.model().index(1, 0)).center()
    qtbot.mouseClick(gallery.list.viewport(), Qt.MouseButton.LeftButton, pos=place)
    assert chosen == []
    qtbot.mouseDClick(gallery.list.viewport(), Qt.MouseButton.LeftButton, pos=place)
    assert chosen == [files.demo_scenarios()[1]]
    other = show()
    other.chosen.connect(chosen.append)
    qtbot.keyClick(other, Qt.Key.Key_Escape)
    assert not other.isVisible()
    assert len(chosen) == 1


def test_any_meeting_can_be_painted(qtbot: QtBot, show: Callable[..., Gallery], tmp_path: Path) -> None:
    variant = CIRCLES.variants[0]
    alone = replace(variant, people=variant.people[:1], arrows=())
    nowhere = replace(variant, people=tuple(replace(one, x=None, y=None) for one in variant.people))
    paths = []
    for number, (other, notes) in enumerate(
        [(replace(variant, people=(), arrows=()), ""), (alone, "<b>Bold</b> & so on. " * 30), (nowhere, "x" * 3000)]
    ):
        paths.append(tmp_path / f"{number}.deliberate.json")
        title = "<img src=x> " + "M" * 180 if number else "אסיפה"
        files.write(replace(CIRCLES, title=title, notes=notes, variants=(other,)), paths[-1])
    gallery = show(tuple(paths))
    picture = gallery.grab()
    assert not picture.isNull()
    assert gallery.list.horizontalScrollBar().maximum() == 0
