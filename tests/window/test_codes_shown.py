"""With codes on, no name is left anywhere: not on screen, not spoken, not on the clipboard, not in what is saved."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from circles import CIRCLES
from msgspec.structs import replace
from PySide6.QtCore import QSettings, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QDialog
from pytestqt.qtbot import QtBot
from words_on_screen import all_words

from deliberate import files
from deliberate.rehearsal.rehearse import rehearse
from deliberate.scenario import edits
from deliberate.scenario.values import Arrow, FrozenDict, Person, Plan, Poll, Question, Scenario, Stage, Variant
from deliberate.window.comparison import ComparisonDialog
from deliberate.window.errand import Errand
from deliberate.window.history import History
from deliberate.window.main_window import MainWindow
from deliberate.window.right_pages import TITLES
from deliberate.window.session import WITH_NAMES, Session
from deliberate.window.theme import Look

# Every name and id begins with one of these, so that none can be taken for a word of the program.
NAMES = ("Qamar Xhosvil", "Zyxwen", "قمرينا الصافي", "Vlkodrag O'Xanther", "Qamar Zyxtor", "<b>Xyloph</b>")
HIDDEN = re.compile(r"qamar|xhosvil|zyxwen|قمرينا|الصافي|vlkodrag|xanther|zyxtor|xyloph|kvartz", re.IGNORECASE)


def meeting() -> Scenario:
    starts = (90.0, 80.0, 70.0, 30.0, 20.0, 10.0)
    ids = tuple(f"{re.sub('[^a-z]', '', name.lower()) or 'alsafi'}-qamar" for name in NAMES)
    people = tuple(
        Person(
            id=one, name=name, role=f"Kvartz {place}", own_weight=40.0, beliefs=FrozenDict(label=start),
            x=100.0 * place, y=50.0 * (place % 3), present=place != 3,
        )
        for place, (one, name, start) in enumerate(zip(ids, NAMES, starts, strict=True))
    )  # fmt: skip
    arrows = tuple(
        Arrow(one, other, 30.0)
        for group in (ids[:3], ids[3:])
        for one in group
        for other in group
        if one != other
    )  # fmt: skip
    stages = (
        Stage("Zyxwen speaks", 2, "panel", speakers=(ids[1],)),
        Stage("Tables", 4, "tables", tables=(ids[:2], ids[2:])),
    )
    first = Variant("As Qamar Xhosvil drew it", people, "Kvartz notes", arrows, Plan(stages))
    second = Variant("VLKODRAG O'XANTHER first", people, "", arrows)
    question = Question(
        "label", "Follow Qamar Xhosvil?", 0.0, 100.0, low_label="as Zyxtor", high_label="Zyxwen's", pass_mark=50.0
    )
    return Scenario(
        title="Zyxwen's board",
        questions=(question, replace(question, id="other", text="Or Xyloph?")),
        variants=(first, second),
        notes="Kvartz wants it",
        polls=(Poll("label", 2, FrozenDict({ids[0]: 60.0})),),
    )


@pytest.fixture
def window(qtbot: QtBot, look: Look, open_session: Callable[..., Session], tmp_path: Path) -> Iterator[MainWindow]:
    path = tmp_path / "zyxwen.deliberate.json"
    files.write(meeting(), path)
    settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
    opened = MainWindow(open_session(files.read(path)), look, settings)
    opened.files.open(path)
    opened.show()
    qtbot.waitExposed(opened)
    qtbot.waitUntil(lambda: opened.chart.chart is not None, timeout=20_000)
    qtbot.waitUntil(opened.session.engine.idle, timeout=20_000)
    yield opened
    opened.session.open(opened.session.meeting, None)  # nothing to ask about when it closes
    opened.close()
    opened.deleteLater()
    QApplication.processEvents()


def leaks() -> list[tuple[str, str]]:
    return [(where, text) for where, text in all_words() if HIDDEN.search(text)]


def painted(window: MainWindow) -> str:
    """What is painted by hand: names and the sentence on the picture, names and words on the chart."""
    content = window.chart.chart._content
    words = [*window.canvas.picture.scene.names, window.canvas._hint, window.chart.chart.hinted]
    return " ".join([*words, *(content.names if content is not None else ())])


def ready(qtbot: QtBot, window: MainWindow) -> None:
    qtbot.waitUntil(lambda: window.session.engine.idle() and window.session.rehearsal is not None, timeout=20_000)


def test_the_walk_finds_names_where_they_are(window: MainWindow) -> None:
    found = {text for _, text in leaks()}
    for name in NAMES[:2]:
        assert any(name in text for text in found)
    assert len(found) > 40


def test_no_name_is_left_anywhere(qtbot: QtBot, window: MainWindow) -> None:
    session = window.session
    people = [person.id for person in session.meeting.variants[0].people]
    session.edit("Move Zyxwen", lambda s: edits.move_people(s, {people[1]: (1, 2)}, variant=session.variant.name))
    session.select(people[:1])
    session.light(session.findings[0])
    window.findings.cards[0].set_open(True)
    window.findings.try_change(next(f.suggestion for f in session.findings if f.suggestion))
    ready(qtbot, window)
    session.said.emit("Moved Zyxwen")
    qtbot.mouseMove(window.chart.chart, window.chart.chart.rect().center())
    qtbot.keyClick(window.canvas, Qt.Key.Key_F7)
    assert session.codes_shown
    assert leaks() == []
    ready(qtbot, window)
    for variant in list(session.scenario.variants):
        session.show_variant(variant.name)
        for question in session.scenario.questions:
            session.show_question(question.id)
            ready(qtbot, window)
            for card in window.findings.cards:
                card.set_open(True)
            for one in people:
                session.select([one])
                assert leaks() == []
                assert not HIDDEN.search(painted(window))
    for page in range(window.sidebar.tabs.count()):
        window.sidebar.tabs.setCurrentIndex(page)
        assert leaks() == []
    assert session.undo_step == WITH_NAMES


def test_no_name_is_left_in_the_windows_beside_the_work(qtbot: QtBot, window: MainWindow) -> None:
    for key in (Qt.Key.Key_F6, Qt.Key.Key_F1):
        qtbot.keyClick(window, key)
    dialogs = [dialog for dialog in window.findChildren(QDialog) if dialog.isVisible()]
    assert len(dialogs) == 2
    assert isinstance(dialogs[0], ComparisonDialog) or isinstance(dialogs[1], ComparisonDialog)
    window.session.show_codes(True)
    ready(qtbot, window)
    assert leaks() == []
    for figure in range(3):
        next(d for d in dialogs if isinstance(d, ComparisonDialog)).figure.setCurrentIndex(figure)
        assert leaks() == []


def test_no_name_is_left_in_the_answers(qtbot: QtBot, window: MainWindow) -> None:
    session = window.session
    session.doubting.want(True)
    for page in range(len(TITLES)):
        window.right_pages.turn_to(page)
        qtbot.waitUntil(lambda: answered(window), timeout=60_000)
    assert any(HIDDEN.search(text) for where, text in all_words() if where.startswith("Card"))
    qtbot.keyClick(window.canvas, Qt.Key.Key_F7)
    assert leaks() == []
    for page in range(len(TITLES)):
        window.right_pages.turn_to(page)
        ready(qtbot, window)
        qtbot.waitUntil(lambda: answered(window), timeout=60_000)
        assert leaks() == []


def answered(window: MainWindow) -> bool:
    """Whether nothing is being worked out any more."""
    busy = [errand for errand in window.findChildren(Errand) if errand.running]
    return not busy and not window.session.doubting.drawing


def test_the_comparison_opens_once(qtbot: QtBot, window: MainWindow) -> None:
    for _ in range(2):
        qtbot.keyClick(window, Qt.Key.Key_F6)
    assert len(window.findChildren(ComparisonDialog)) == 1


def test_names_come_back_whole(qtbot: QtBot, window: MainWindow) -> None:
    session, before = window.session, window.session.meeting
    qtbot.keyClick(window.canvas, Qt.Key.Key_F7)
    ready(qtbot, window)
    qtbot.keyClick(window.canvas, Qt.Key.Key_F7)
    ready(qtbot, window)
    assert session.scenario is before
    assert not session.modified
    assert any("Qamar Xhosvil" in text for _, text in leaks())


def test_edits_with_codes_are_edits_of_the_meeting(qtbot: QtBot, window: MainWindow) -> None:
    session = window.session
    session.show_codes(True)
    ready(qtbot, window)
    session.select([session.variant.people[0].id])
    window.canvas.setFocus()
    qtbot.keyClick(window.canvas, Qt.Key.Key_5)
    qtbot.keyClick(window.canvas.editors.line, Qt.Key.Key_Return)
    window.findings.try_change(next(f.suggestion for f in session.findings if f.suggestion))
    ready(qtbot, window)
    assert leaks() == []
    assert window.files.save()
    saved = files.read(session.path)
    assert [person.name for person in saved.variants[1].people[:6]] == list(NAMES)
    assert saved.variants[0].people[0].beliefs["label"] == 5.0
    assert saved.variants[0].notes == "Kvartz notes"
    assert not re.search(r"\bP[0-9]", saved.variants[1].name + saved.variants[1].notes)
    assert saved.notes == "Kvartz wants it"
    assert len(saved.variants) == 3
    assert leaks() == []


def test_steps_taken_with_codes_hold_no_name(qtbot: QtBot, window: MainWindow) -> None:
    session = window.session
    session.show_codes(True)
    name = session.variant.name
    session.edit("Add Zyxwonder Kvartz", lambda s: edits.add_person(s, "Zyxwonder Kvartz", variant=name))
    assert session.undo_step == "Add P7"
    session.undo()
    assert session.redo_step == "Add P7"
    assert not HIDDEN.search(window.statusBar().currentMessage())
    assert leaks() == []


def test_what_is_copied_and_saved_holds_codes(qtbot: QtBot, window: MainWindow, tmp_path: Path) -> None:
    window.session.show_codes(True)
    ready(qtbot, window)
    window.canvas.select_all()
    window.canvas.copy()
    data = QGuiApplication.clipboard().mimeData()
    for kind in data.formats():
        assert not HIDDEN.search(bytes(data.data(kind)).decode()), kind
    window.chart.copy_figures()
    assert not HIDDEN.search(QGuiApplication.clipboard().text())
    assert QGuiApplication.clipboard().text().startswith("round\tP1\tP2\tP3")
    window.chart.save_figures(tmp_path / "figures.csv")
    assert not HIDDEN.search((tmp_path / "figures.csv").read_text(encoding="utf-8-sig"))


def test_a_crowds_old_sentences_do_not_wait_for_new_ones(
    qtbot: QtBot, window: MainWindow, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(window.session.engine, "ask", lambda _: None)  # an answer that takes its time
    window.session.show_codes(True)
    assert window.session.findings == ()
    assert leaks() == []
    monkeypatch.undo()
    window.session.rehearse()
    ready(qtbot, window)


def test_codes_change_no_figure(window: MainWindow) -> None:
    session = window.session
    named = session.rehearsal
    session.show_codes(True)
    coded = rehearse(session.scenario, session.variant.name, session.question.id)
    assert (named.rounds == coded.rounds).all()
    assert named.people == coded.people


def test_revert_takes_what_is_on_disk(qtbot: QtBot, window: MainWindow) -> None:
    session = window.session
    session.show_codes(True)
    one = session.variant.people[0].id
    session.edit("Remove P1", lambda s: edits.remove_people(s, [one], variant=session.variant.name))
    window.files.revert()
    ready(qtbot, window)
    assert session.meeting == meeting()
    assert not session.modified
    assert leaks() == []


def test_a_name_cannot_be_changed_unseen(qtbot: QtBot, window: MainWindow) -> None:
    session, before = window.session, window.session.meeting
    session.show_codes(True)
    ready(qtbot, window)
    session.select([session.variant.people[0].id])
    window.canvas.setFocus()
    qtbot.keyClick(window.canvas, Qt.Key.Key_F2)
    qtbot.keyClicks(window.canvas.editors.line, "Zofia")
    qtbot.keyClick(window.canvas.editors.line, Qt.Key.Key_Return)
    assert session.meeting is before
    assert window.statusBar().currentMessage() == "names are hidden while codes are shown: show names to change one"
    qtbot.keyClick(window.canvas.editors.line, Qt.Key.Key_Escape)


def test_codes_stay_on_for_the_next_meeting(qtbot: QtBot, window: MainWindow) -> None:
    session = window.session
    session.show_codes(True)
    session.open(CIRCLES, None)
    ready(qtbot, window)
    assert [person.name for person in session.variant.people] == ["P1", "P2", "P3", "P4", "P5", "P6"]
    assert not session.modified
    assert not any("Amina" in text for _, text in all_words())


def test_codes_are_off_at_every_start(qtbot: QtBot, look: Look, window: MainWindow, tmp_path: Path) -> None:
    window.session.show_codes(True)
    settings = QSettings(str(tmp_path / "window.ini"), QSettings.Format.IniFormat)
    again = MainWindow(Session(CIRCLES), look, settings)
    assert not again.session.codes_shown
    again.close()
    again.deleteLater()


def test_an_editor_that_shows_a_name_closes(qtbot: QtBot, window: MainWindow) -> None:
    window.session.select([window.session.variant.people[0].id])
    window.canvas.setFocus()
    qtbot.keyClick(window.canvas, Qt.Key.Key_F2)
    assert window.canvas.editors.line.text() == NAMES[0]
    qtbot.keyClick(window.canvas.editors.line, Qt.Key.Key_F7)
    assert window.session.codes_shown
    assert not window.canvas.editors.open
    assert leaks() == []


def test_a_history_says_which_steps_were_taken_with_codes() -> None:
    history = History(meeting(), "As it stands")
    history.push("one", meeting(), "As it stands", coded=True)
    assert history.undo_moment is not None
    assert history.undo_moment.coded
    history.seal()
    assert history.undo_moment.coded
