"""All words that a window of the program shows, offers or speaks: ``from words_on_screen import all_words``."""

from __future__ import annotations

from collections.abc import Iterator

from PySide6.QtCore import QAbstractItemModel, QAbstractListModel, QModelIndex, Qt
from PySide6.QtGui import QAccessible, QAccessibleInterface, QAction
from PySide6.QtWidgets import QAbstractItemView, QApplication, QComboBox, QTabBar, QWidget

PROPERTIES = ("text", "plainText", "title", "placeholderText", "currentText", "windowTitle", "windowIconText")
ROLES = (
    Qt.ItemDataRole.DisplayRole,
    Qt.ItemDataRole.EditRole,
    Qt.ItemDataRole.ToolTipRole,
    Qt.ItemDataRole.StatusTipRole,
    Qt.ItemDataRole.WhatsThisRole,
    Qt.ItemDataRole.AccessibleTextRole,
    Qt.ItemDataRole.AccessibleDescriptionRole,
)
SPOKEN = (QAccessible.Text.Name, QAccessible.Text.Description, QAccessible.Text.Value, QAccessible.Text.Help)


def all_words() -> list[tuple[str, str]]:
    """(where, text) for every text in every open window, hidden parts included."""
    found: list[tuple[str, str]] = []
    for window in QApplication.topLevelWidgets():
        for widget in (window, *window.findChildren(QWidget)):
            where = f"{type(widget).__name__} in {type(window).__name__}"
            found += [(where, text) for text in _of_widget(widget) if text]
        found += [("a screen reader", text) for text in _spoken(QAccessible.queryAccessibleInterface(window)) if text]
    return found


def _of_widget(widget: QWidget) -> Iterator[str]:
    for name in PROPERTIES:
        value = widget.property(name)
        if isinstance(value, str):
            yield value
    yield from (widget.toolTip(), widget.statusTip(), widget.whatsThis())
    yield from (widget.accessibleName(), widget.accessibleDescription())
    text = getattr(widget, "text", None)
    if callable(text) and not isinstance(widget, QAction):
        value = text()
        if isinstance(value, str):
            yield value
    for action in widget.actions():
        yield from (action.text(), action.toolTip(), action.statusTip(), action.iconText())
    if isinstance(widget, QTabBar):
        for tab in range(widget.count()):
            yield from (widget.tabText(tab), widget.tabToolTip(tab))
    if isinstance(widget, QComboBox):
        yield from _of_model(widget.model())
    if isinstance(widget, QAbstractItemView) and widget.model() is not None:
        yield from _of_model(widget.model())


def _of_model(model: QAbstractItemModel, parent: QModelIndex = QModelIndex()) -> Iterator[str]:  # noqa: B008
    columns = 1 if isinstance(model, QAbstractListModel) else model.columnCount(parent)
    for row in range(model.rowCount(parent)):
        for column in range(columns):
            for role in ROLES:
                yield str(model.index(row, column, parent).data(role) or "")
    for section in range(columns):
        yield str(model.headerData(section, Qt.Orientation.Horizontal) or "")
    for section in range(model.rowCount(parent)):
        yield str(model.headerData(section, Qt.Orientation.Vertical) or "")


def _spoken(one: QAccessibleInterface | None, depth: int = 0) -> Iterator[str]:
    if one is None or not one.isValid() or depth > 12:
        return
    for kind in SPOKEN:
        yield one.text(kind)
    for place in range(one.childCount()):
        yield from _spoken(one.child(place), depth + 1)
