"""The three columns of the window: sidebar, picture, and chart with findings."""

from __future__ import annotations

from PySide6.QtCore import QByteArray, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QSplitter, QWidget

LEFT, RIGHT = (236, 290), (296, 370)  # least and most pixels, where a line of text is as high as usual
USUAL_LINE = 14  # pixels
LEFT_SHARE, RIGHT_SHARE = 0.227, 0.29


class Columns(QSplitter):
    """Shares the width so that the picture keeps most of it, until a handle is dragged: then as it was left."""

    def __init__(self, parent: QWidget | None, left: QWidget, middle: QWidget, right: QWidget) -> None:
        super().__init__(Qt.Orientation.Horizontal, parent)
        for part in (left, middle, right):
            self.addWidget(part)
        self.setStretchFactor(1, 1)
        self.setChildrenCollapsible(False)
        self.setHandleWidth(1)
        self._chosen = False
        self.splitterMoved.connect(self._keep)

    def kept(self) -> QByteArray | None:
        """The widths that were chosen by hand, to be remembered; None when none were."""
        return self.saveState() if self._chosen else None

    def keep(self, state: QByteArray) -> None:
        """Take up widths that were remembered."""
        self._chosen = self.restoreState(state)

    def fit_into(self, width: int) -> None:
        """Put sides away, the left one first, until what is left has room in `width` pixels."""
        for side in (self.widget(0), self.widget(2)):
            needed = sum(part.minimumSizeHint().width() for part in map(self.widget, range(3)) if not part.isHidden())
            if needed > width:
                side.hide()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        if not self._chosen:
            width, larger = self.width(), max(self.fontMetrics().height() / USUAL_LINE, 1.0)
            left = round(min(max(width * LEFT_SHARE, LEFT[0] * larger), LEFT[1] * larger))
            right = round(min(max(width * RIGHT_SHARE, RIGHT[0] * larger), RIGHT[1] * larger))
            self.setSizes([left, width - left - right, right])

    def _keep(self) -> None:
        self._chosen = True
