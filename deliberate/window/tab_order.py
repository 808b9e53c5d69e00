"""The order in which Tab goes through the window: as it is laid out, whatever was made first.

Qt's own chain follows the order in which widgets came to be, and cards and the chart come late.
"""

from __future__ import annotations

from collections.abc import Iterator

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QAbstractScrollArea, QLayout, QScrollArea, QSplitter, QWidget

STEPS = (Qt.FocusReason.BacktabFocusReason, Qt.FocusReason.TabFocusReason)


def tab_to_next(window: QWidget, root: QWidget, *, forward: bool) -> bool:
    """Give the focus to the next control inside `root`, round and round; False where the focus is not in it."""
    stops = [widget for widget in in_reading_order(root) if _takes_tab(widget)]
    here = window.focusWidget()
    while here is not None and here not in stops:
        here = here.parentWidget()
    if here is None:
        return False
    stop = stops[(stops.index(here) + (1 if forward else -1)) % len(stops)]
    stop.setFocus(STEPS[forward])
    around = stop.parentWidget()
    while around is not None:
        if isinstance(around, QScrollArea):
            around.ensureWidgetVisible(stop)
        around = around.parentWidget()
    return True


def in_reading_order(root: QWidget) -> Iterator[QWidget]:
    """`root` and all in it, as laid out: rows from above, in each from the left."""
    yield root
    if isinstance(root, QSplitter):
        parts = [root.widget(place) for place in range(root.count())]
    elif isinstance(root, QScrollArea):
        parts = [root.widget()] if root.widget() is not None else []
    elif isinstance(root, QAbstractScrollArea):
        parts = []  # a control of its own
    else:
        parts = list(_laid_out(root.layout()))
        parts += [one for one in root.children() if isinstance(one, QWidget) and one not in parts]
    for part in parts:
        if not part.isWindow():
            yield from in_reading_order(part)


def _laid_out(layout: QLayout | None) -> Iterator[QWidget]:
    for place in range(layout.count() if layout is not None else 0):
        item = layout.itemAt(place)
        if item.widget() is not None:
            yield item.widget()
        else:
            yield from _laid_out(item.layout())


def _takes_tab(widget: QWidget) -> bool:
    takes = bool(widget.focusPolicy() & Qt.FocusPolicy.TabFocus) and widget.focusProxy() is None
    return takes and widget.isVisible() and widget.isEnabled()
