"""Every action of the window in a menu, with its shortcut."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Qt
from PySide6.QtGui import QAction, QActionGroup, QKeySequence
from PySide6.QtWidgets import QMenu, QMenuBar, QWidget

from deliberate.window import help_texts
from deliberate.window.player import SPEEDS
from deliberate.window.recent import label
from deliberate.window.right_pages import TITLES
from deliberate.window.text import tooltip, with_ampersands

if TYPE_CHECKING:
    from deliberate.window.main_window import MainWindow

Key = QKeySequence.StandardKey
Shortcut = Key | str | None
ARRANGEMENTS = (
    ("circle", "In a circle"),
    ("groups", "By closed group"),
    ("hearing", "By who hears whom"),
    ("grid", "In a tidy grid"),
    ("tables", "By table of the present stage"),
)


class Actions(QObject):
    """Builds the menus of a `MainWindow` and keeps their texts and states true."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
        bar = window.menuBar()
        self._fill_file(_menu(bar, "&File"))
        self._fill_edit(_menu(bar, "&Edit"))
        self._fill_people(_menu(bar, "&People"))
        self._fill_talk(_menu(bar, "&Talk"))
        self._fill_variants(_menu(bar, "V&ariants"))
        self._fill_view(_menu(bar, "&View"))
        self._fill_help(_menu(bar, "&Help"))
        window.session.file_changed.connect(self.refresh)
        window.session.selection_changed.connect(self.refresh)
        window.session.player.playing_changed.connect(self._show_playing)
        window.session.player.settings_changed.connect(self._show_playback)
        self.refresh()

    def _add(
        self,
        menu: QMenu,
        text: str,
        act: Callable[..., object],
        shortcut: Shortcut = None,
        *,
        on: tuple[QWidget, ...] = (),
    ) -> QAction:
        """An entry of `menu`. With `on`, its shortcut works only while one of those widgets has the focus, so
        that typing elsewhere is left alone."""
        action = QAction(text, self)
        action.triggered.connect(lambda _checked=False: act())
        if shortcut is not None:
            action.setShortcut(QKeySequence(shortcut))
        if on:
            action.setShortcutContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
            for widget in on:
                widget.addAction(action)
        menu.addAction(action)
        return action

    def _fill_file(self, menu: QMenu) -> None:
        files = self._window.files
        self._add(menu, "&New meeting", files.new, Key.New)
        self._add(menu, "&Open …", files.ask_open, Key.Open)
        self.recent = menu.addMenu("Open &recent")
        self.recent.setToolTipsVisible(True)
        self._add(menu, "Open a &demo …", self._show_gallery, "Ctrl+Shift+O")
        menu.addSeparator()
        self._add(menu, "&Save", files.save, Key.Save)
        self._add(menu, "Save &as …", files.ask_save_as, "Ctrl+Shift+S")
        self.revert = self._add(menu, "Re&vert to the saved meeting", files.revert)
        self.bring_back = self._add(menu, "&Bring back unsaved work …", files.offer_leftovers)
        menu.addSeparator()
        self._add(menu, "&Quit", self._window.close, "Ctrl+Q")
        menu.aboutToShow.connect(self._refresh_file)
        self._refresh_file()

    def _refresh_file(self) -> None:
        """What only the disk and the settings know is read when the menu opens."""
        files = self._window.files
        coded = self._window.session.codes_shown  # names of files and of other meetings may name people
        self.bring_back.setEnabled(not coded and self._window.recovery.any_copies())
        self.recent.clear()
        self.recent.setEnabled(not coded)
        paths = [] if coded else files.recent.paths
        for number, path in enumerate(paths, start=1):
            entry = self.recent.addAction(f"&{number} {with_ampersands(label(path, paths))}")
            entry.triggered.connect(lambda _checked=False, path=path: files.open_recent(path))
            entry.setToolTip(tooltip(str(path)))
        self.recent.addSeparator()
        self.recent.addAction("&Forget recent files", files.recent.forget).setEnabled(bool(paths))

    def _show_gallery(self) -> None:
        from deliberate.window.gallery import Gallery  # as all dialogs, when it is asked for: the start is quicker

        gallery = Gallery(self._window.look, self._window)
        gallery.chosen.connect(self._window.files.open_demo)
        gallery.open()

    def _fill_edit(self, menu: QMenu) -> None:
        session, canvas = self._window.session, self._window.canvas
        self.undo = self._add(menu, "Undo", session.undo, Key.Undo)
        self.redo = self._add(menu, "Redo", session.redo, "Ctrl+Shift+Z")
        self.redo.setShortcuts([QKeySequence("Ctrl+Shift+Z"), QKeySequence("Ctrl+Y")])
        menu.addSeparator()
        on = (canvas,)
        self.cut = self._add(menu, "Cu&t", canvas.cut, Key.Cut, on=on)
        self.copy = self._add(menu, "&Copy", canvas.copy, Key.Copy, on=on)
        self._add(menu, "&Paste", canvas.paste, Key.Paste, on=on)
        self.duplicate = self._add(menu, "&Duplicate", canvas.duplicate, "Ctrl+D", on=on)
        self.delete = self._add(menu, "De&lete", canvas.delete_selected, Key.Delete, on=on)
        menu.addSeparator()
        self._add(menu, "Select &all", canvas.select_all, Key.SelectAll, on=on)

    def _fill_people(self, menu: QMenu) -> None:
        canvas = self._window.canvas
        self._add(menu, "&Add a person", canvas.add_person, "Ctrl+Shift+N")
        self.rename = self._add(menu, "&Rename", canvas.rename_selected, "F2", on=(canvas,))
        self.turn = self._add(menu, "&Turn the arrow round", canvas.turn_round, "R", on=(canvas,))
        menu.addSeparator()
        arrange = menu.addMenu("Arran&ge")
        for number, (kind, text) in enumerate(ARRANGEMENTS, start=1):
            self._add(arrange, text, lambda kind=kind: canvas.arrange(kind), f"Ctrl+Alt+{number}")

    def _fill_talk(self, menu: QMenu) -> None:
        window, player = self._window, self._window.session.player
        on = (window.canvas, window.chart, window.round_bar)
        self.play = self._add(menu, "&Play", player.toggle, "F9")
        space = QAction("Play or pause", self)
        space.setShortcut(QKeySequence("Space"))
        space.setShortcutContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
        space.triggered.connect(player.toggle)
        for widget in (window.canvas, window.chart):
            widget.addAction(space)
        self._add(menu, "Step &on", lambda: player.step(1), "PgDown", on=on)
        self._add(menu, "Step &back", lambda: player.step(-1), "PgUp", on=on)
        self._add(menu, "To the &start", lambda: player.seek(0), "Home", on=on)
        self._add(menu, "To the &end", lambda: player.seek(player.last), "End", on=on)
        menu.addSeparator()
        self.loop = self._add(menu, "Begin again at the end", lambda: player.set_loop(self.loop.isChecked()))
        self.loop.setCheckable(True)
        speeds = menu.addMenu("Spee&d")
        self.speeds = QActionGroup(self)
        for speed in SPEEDS:
            action = self._add(speeds, speed_words(speed), lambda speed=speed: player.set_speed(speed))
            action.setCheckable(True)
            action.setData(speed)
            self.speeds.addAction(action)
        menu.addSeparator()
        self._fill_answers(menu)
        menu.addSeparator()
        self._add(menu, "&Mixed tables …", self._show_seating, "Ctrl+M")
        self._show_playback()

    def _fill_answers(self, menu: QMenu) -> None:
        """What can be asked of the sketch."""
        doubting = self._window.session.doubting
        for place, title in enumerate(TITLES):
            self._add(menu, title, lambda place=place: self._turn_to(place), f"Ctrl+{place + 1}")
        self.doubt = self._add(menu, "How s&ure it is", lambda: doubting.want(self.doubt.isChecked()), "Ctrl+U")
        self.doubt.setCheckable(True)
        self.doubt.setToolTip("Draws the guessed numbers again and again")
        doubting.changed.connect(lambda: self.doubt.setChecked(doubting.wanted))

    def _turn_to(self, place: int) -> None:
        self._window.right.show()
        self._window.right_pages.turn_to(place)

    def _show_seating(self) -> None:
        from deliberate.window.seating import SeatingDialog

        window = self._window
        dialog = window.findChild(SeatingDialog) or SeatingDialog(window.session, window.look, window)
        dialog.show()
        dialog.raise_()
        dialog.activateWindow()

    def _fill_variants(self, menu: QMenu) -> None:
        strip = self._window.variant_strip
        self._add(menu, "&Add a copy", strip.add_copy, "Ctrl+T")
        self._add(menu, "&Rename …", strip.rename)
        self.remove_variant = self._add(menu, "Re&move", strip.remove)
        self._add(menu, "Move &left", lambda: strip.move(-1))
        self._add(menu, "Move ri&ght", lambda: strip.move(1))
        menu.addSeparator()
        self._add(menu, "&Compare …", self._show_comparison, "F6")
        menu.addSeparator()
        self._add(menu, "&Next variant", lambda: self._window.turn_to_variant(1), "Ctrl+Tab")
        self._add(menu, "&Previous variant", lambda: self._window.turn_to_variant(-1), "Ctrl+Shift+Tab")

    def _show_comparison(self) -> None:
        window = self._window
        from deliberate.window.comparison import ComparisonDialog

        dialog = window.findChild(ComparisonDialog) or ComparisonDialog(window.session, window.look, window)
        dialog.show()
        dialog.raise_()
        dialog.activateWindow()

    def _fill_view(self, menu: QMenu) -> None:
        canvas, look = self._window.canvas, self._window.look
        self._add(menu, "Zoom &in", canvas.zoom_in, Key.ZoomIn)
        self._add(menu, "Zoom &out", canvas.zoom_out, Key.ZoomOut)
        self._add(menu, "&Fit everybody in", canvas.fit, "Ctrl+0")
        menu.addSeparator()
        self.flow = self._add(
            menu, "Arrows show the way &beliefs travel", lambda: canvas.set_flow(self.flow.isChecked()), "Ctrl+B"
        )
        self.flow.setCheckable(True)
        arrows = self._window.arrow_leverage
        self.moves = self._add(
            menu, "Arrows show what they &move", lambda: arrows.want(self.moves.isChecked()), "Ctrl+L"
        )
        self.moves.setCheckable(True)
        self.moves.setToolTip("As thick as what ten points more would move the mean, instead of as their shares")
        menu.addSeparator()
        for text, side, shortcut in (
            ("&Left bar", self._window.sidebar, "F3"),
            ("&Right side", self._window.right, "Shift+F3"),
        ):
            self._add_side(menu, text, side, shortcut)
        menu.addSeparator()
        self._fill_before_others(menu)
        menu.addSeparator()
        themes = menu.addMenu("&Appearance")
        group = QActionGroup(self)
        for choice, text in (("system", "As the system"), ("light", "Light"), ("dark", "Dark")):
            action = self._add(themes, text, lambda choice=choice: look.choose(choice))
            action.setCheckable(True)
            action.setChecked(look.choice == choice)
            group.addAction(action)
        self.still = self._add(menu, "&Jump from round to round", lambda: look.set_still(self.still.isChecked()))
        self.still.setCheckable(True)
        self.still.setChecked(look.still)

    def _add_side(self, menu: QMenu, text: str, side: QWidget, shortcut: str) -> None:
        """A side of the window that can be put away, so that the picture gets its room."""
        action = self._add(menu, text, lambda: side.setHidden(not side.isHidden()), shortcut)
        action.setCheckable(True)
        action.setChecked(True)
        menu.aboutToShow.connect(lambda: action.setChecked(not side.isHidden()))

    def _fill_before_others(self, menu: QMenu) -> None:
        """What is of use while others see the screen."""
        session, blank = self._window.session, self._window.blank
        self._add(menu, "&Projector view …", self._window.ask_projector, "F5")
        self.codes = self._add(
            menu, "&Codes instead of names", lambda: session.show_codes(self.codes.isChecked()), "F7"
        )
        self.codes.setCheckable(True)
        self.codes.setToolTip("In everything that is shown, copied or exported; roles and notes are left out")
        self.blank = self._add(menu, "Blan&k the screen", blank.begin, "F8")
        self.blank.setShortcutContext(Qt.ShortcutContext.ApplicationShortcut)
        session.codes_changed.connect(self._refresh_file)
        session.codes_changed.connect(lambda: self.codes.setChecked(session.codes_shown))

    def _fill_help(self, menu: QMenu) -> None:
        window = self._window
        self._add(menu, "&First steps", lambda: help_texts.show(window, "First steps", help_texts.FIRST_STEPS), "F1")
        self._add(menu, "&Keys", lambda: help_texts.show(window, "Keys", help_texts.KEYS))
        self._add(
            menu,
            "&What the sketch is and is not",
            lambda: help_texts.show_care(window),
        )

    def refresh(self) -> None:
        """Read names and states again from the session."""
        session = self._window.session
        undo, redo = session.undo_step, session.redo_step
        self.undo.setText(with_ampersands(f"Undo: {undo}") if undo else "Undo")
        self.undo.setEnabled(undo is not None)
        self.redo.setText(with_ampersands(f"Redo: {redo}") if redo else "Redo")
        self.redo.setEnabled(redo is not None)
        selection = session.selection
        for action in (self.cut, self.copy, self.duplicate):
            action.setEnabled(bool(selection.people))
        self.delete.setEnabled(bool(selection))
        self.rename.setEnabled(len(selection.people) == 1)
        self.turn.setEnabled(bool(selection.arrows))
        self.revert.setEnabled(session.path is not None and session.modified)
        self.remove_variant.setEnabled(len(session.scenario.variants) > 1)

    def _show_playing(self, playing: bool) -> None:
        self.play.setText("&Pause" if playing else "&Play")

    def _show_playback(self) -> None:
        player = self._window.session.player
        self.loop.setChecked(player.loop)
        for action in self.speeds.actions():
            action.setChecked(action.data() == player.speed)


def speed_words(speed: float) -> str:
    """Seconds a round takes, in words."""
    seconds = 1 / speed
    if seconds == 1:
        return "1 second a round"
    return f"{seconds:g} seconds a round"


def _menu(bar: QMenuBar, title: str) -> QMenu:
    menu = bar.addMenu(title)
    menu.setToolTipsVisible(True)
    return menu
