"""The strip of the meeting's variants: switch, add as copy, rename, remove, reorder."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPoint, Qt, Signal
from PySide6.QtGui import QFont, QFontMetrics, QHelpEvent, QMouseEvent
from PySide6.QtWidgets import (
    QHBoxLayout,
    QInputDialog,
    QMenu,
    QStyle,
    QStyleOptionTab,
    QTabBar,
    QToolButton,
    QToolTip,
    QWidget,
)

from deliberate.scenario import edits
from deliberate.window.session import Session
from deliberate.window.text import tooltip, with_ampersands


class VariantTabs(QTabBar):
    """The names in a row; a double click asks to rename."""

    rename_wanted = Signal(int)

    def initStyleOption(self, option: QStyleOptionTab, place: int) -> None:
        """Shorten the shown one's name by its heavier letters, which the bar itself does not reckon with."""
        super().initStyleOption(option, place)
        if place != self.currentIndex():
            return
        heavy = QFont(self.font())
        heavy.setWeight(QFont.Weight.DemiBold)
        room = self.style().subElementRect(QStyle.SubElement.SE_TabBarTabText, option, self).width()
        shown = Qt.TextFlag.TextShowMnemonic
        option.text = QFontMetrics(heavy).elidedText(self.tabText(place), self.elideMode(), room, shown.value)

    def event(self, event: QEvent) -> bool:
        # Said here, because a tab's own tooltip would be read out with its tags.
        if isinstance(event, QHelpEvent) and event.type() == QEvent.Type.ToolTip:
            place = self.tabAt(event.pos())
            QToolTip.showText(event.globalPos(), tooltip(self.tabData(place)) if place >= 0 else "", self)
            return True
        return super().event(event)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        place = self.tabAt(event.position().toPoint())
        if place >= 0 and event.button() == Qt.MouseButton.LeftButton:
            self.rename_wanted.emit(place)


class VariantStrip(QWidget):
    """One name per variant, the shown one raised, and a plus to add a copy of it."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._filling = False
        self.tabs = VariantTabs(self)
        self.tabs.setMovable(True)
        self.tabs.setExpanding(False)
        self.tabs.setDrawBase(False)
        self.tabs.setUsesScrollButtons(True)
        self.tabs.setElideMode(Qt.TextElideMode.ElideRight)
        self.tabs.setAccessibleName("Variants of the meeting")
        self.tabs.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)
        self.tabs.currentChanged.connect(self._show)
        self.tabs.tabMoved.connect(self._reorder)
        self.tabs.rename_wanted.connect(self._rename_at)
        self.tabs.customContextMenuRequested.connect(self._menu)
        self.plus = QToolButton(self)
        self.plus.setText("+")
        self.plus.setProperty("quiet", True)
        self.plus.setFixedSize(28, 28)
        self.plus.setToolTip("Add a variant: a copy of the one shown")
        self.plus.setAccessibleName("Add a variant as a copy of the one shown")
        self.plus.clicked.connect(self.add_copy)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(2)
        row.addWidget(self.tabs, 0, Qt.AlignmentFlag.AlignVCenter)
        row.addWidget(self.plus, 0, Qt.AlignmentFlag.AlignVCenter)
        row.addStretch(1)
        session.scenario_changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Read the variants again."""
        names = [variant.name for variant in self._session.scenario.variants]
        self._filling = True
        while self.tabs.count() > len(names):
            self.tabs.removeTab(self.tabs.count() - 1)
        while self.tabs.count() < len(names):
            self.tabs.addTab("")
        for place, name in enumerate(names):
            if self.tabs.tabText(place) != with_ampersands(name):
                self.tabs.setTabText(place, with_ampersands(name))
                self.tabs.setTabData(place, name)
        self.tabs.setCurrentIndex(names.index(self._session.variant.name))
        self.tabs.updateGeometry()  # heavier letters need more room
        self._filling = False

    def add_copy(self) -> None:
        """Add a copy of the shown variant behind it and show it."""
        session = self._session
        name = edits.fresh_variant_name(session.scenario, session.variant.name)
        session.edit(
            f"Add variant “{name}”",
            lambda scenario: edits.add_variant(scenario, copy_of=session.variant.name, name=name),
            show=name,
        )

    def rename(self) -> None:
        """Ask for another name of the shown variant."""
        session = self._session
        old = session.variant.name
        new, accepted = QInputDialog.getText(self, "Rename variant", "Name of this variant", text=old)
        if accepted and new.strip() and new.strip() != old:
            session.edit(
                f"Rename variant “{old}”",
                lambda scenario: edits.rename_variant(scenario, old, new.strip()),
            )

    def remove(self) -> None:
        """Remove the shown variant (undo brings it back)."""
        name = self._session.variant.name
        self._session.edit(f"Remove variant “{name}”", lambda scenario: edits.remove_variant(scenario, name))

    def move(self, by: int) -> None:
        """Move the shown variant one place left (-1) or right (1)."""
        scenario, name = self._session.scenario, self._session.variant.name
        place = [variant.name for variant in scenario.variants].index(name) + by
        if 0 <= place < len(scenario.variants):
            self._session.edit(f"Move variant “{name}”", lambda scenario: edits.move_variant(scenario, name, place))

    def _show(self, place: int) -> None:
        if not self._filling and place >= 0:
            self._session.show_variant(self._session.scenario.variants[place].name)

    def _reorder(self, was: int, now: int) -> None:
        if self._filling:
            return
        # While a name is dragged the bar has moved already; the meeting follows.
        name = self._session.scenario.variants[was].name
        self._session.edit(
            f"Move variant “{name}”",
            lambda scenario: edits.move_variant(scenario, name, now),
            merge=f"move variant {name}",
        )

    def _rename_at(self, place: int) -> None:
        self.tabs.setCurrentIndex(place)
        self.rename()

    def _menu(self, at: QPoint) -> None:
        place = self.tabs.tabAt(at)
        if place >= 0:
            self.tabs.setCurrentIndex(place)
        menu = QMenu(self)
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        menu.addAction("Add a copy", self.add_copy)
        menu.addAction("Rename …", self.rename)
        remove = menu.addAction("Remove", self.remove)
        remove.setEnabled(self.tabs.count() > 1)
        menu.popup(self.tabs.mapToGlobal(at))
