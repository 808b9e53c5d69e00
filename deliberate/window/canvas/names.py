"""Names on the canvas: wrapped over a few lines, placed clear of discs and arrows, painted from cached layouts."""

from __future__ import annotations

import re

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QSizeF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QStaticText, QTextOption

from deliberate.window.canvas.labels import OVER_SOMETHING, offsets, place_labels
from deliberate.window.theme import Theme

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]

LEAST_PX, LEAST_PX_IN_CROWDS = 8.0, 14.0  # radius below which names are shown only for those selected or pointed at
COMMITTEE = 60  # people; of more, names that would lie on something wait until they are pointed at
CROWD = 200  # people; names of so many only cover the picture
LINES, LINES_IN_COMMITTEE = 2, 3
_BREAKS = re.compile(r"\s+|(?<=\w)[-־‐](?=\w)")
_HALO = ((-1, 0), (1, 0), (0, -1), (0, 1), (-1, -1), (1, 1), (-1, 1), (1, -1))


class Names:
    """Measured names of one set of people at one size, and where they go."""

    def __init__(self) -> None:
        self._texts: dict[tuple[str, int, int], tuple[QStaticText, QSizeF]] = {}
        self._font: QFont | None = None
        self._chosen = np.zeros(0, dtype=np.intp)
        self.sizes = np.zeros((0, 2))
        self.all_up_to = COMMITTEE  # people whose names are all painted, also where they lie on something
        self.crowded = np.zeros(0)
        self._shown: list[QStaticText] = []

    def place(
        self,
        names: tuple[str, ...],
        points: Floats,
        radius: float,
        arrow_lines: Floats,
        font: QFont,
        room: float,
        paper: tuple[float, float],
    ) -> None:
        """Measure and place the names of people at `points`; `room` is how wide a line may be, `paper` how wide and
        high the picture is. All in pixels."""
        lines = LINES_IN_COMMITTEE if len(names) <= COMMITTEE else LINES
        if self._font != font or len(self._texts) > 4000:
            self._texts.clear()
            self._font = QFont(font)
        laid = [self._laid(name, room, lines) for name in names]
        self._shown = [text for text, _ in laid]
        self.sizes = np.array([(size.width(), size.height()) for _, size in laid]).reshape(len(names), 2)
        self._chosen, self.crowded = place_labels(points, radius, self.sizes, arrow_lines, paper)

    def clear(self) -> NDArray[np.bool_]:
        """Whose name lies on no disc and no other name, shape (people,)."""
        return self.crowded < OVER_SOMETHING

    def readable(self, radius: float) -> NDArray[np.bool_]:
        """Whose name is painted at a radius in pixels: in a committee everybody's, in a crowd the clear ones."""
        count = len(self.crowded)
        if not has_room(count, radius):
            return np.zeros(count, dtype=bool)
        return self.clear() if count > self.all_up_to else np.ones(count, dtype=bool)

    def areas(self, points: Floats, radius: float) -> Floats:
        """Where the names are, as rows (left, top, width, height)."""
        corner = points + offsets(self._chosen, radius, self.sizes) - self.sizes / 2
        return np.concatenate([corner, self.sizes], axis=1)

    def paint(
        self,
        painter: QPainter,
        points: Floats,
        radius: float,
        which: Indices,
        theme: Theme,
        pale: NDArray[np.bool_],
        *,
        halo: bool,
    ) -> None:
        """Paint the names of `which`, with a `halo` of the paper where something lies behind."""
        if self._font is None:
            return
        painter.setFont(self._font)
        ink, muted, paper = QColor(theme.ink), QColor(theme.muted), QColor(theme.canvas)
        corner = self.areas(points, radius)[:, :2]
        for index in which.tolist():
            x, y = corner[index]
            text = self._shown[index]
            if halo and self.crowded[index] > 0.5:
                painter.setPen(paper)
                for dx, dy in _HALO:
                    painter.drawStaticText(QPointF(x + dx * 1.2, y + dy * 1.2), text)
            painter.setPen(muted if pale[index] else ink)
            painter.drawStaticText(QPointF(x, y), text)

    def _laid(self, name: str, room: float, most: int) -> tuple[QStaticText, QSizeF]:
        key = (name, round(room), most)
        if key not in self._texts:
            assert self._font is not None
            lines = wrapped(name, self._font, room, most)
            metrics = QFontMetricsF(self._font)
            width = max(metrics.horizontalAdvance(line) for line in lines)
            text = QStaticText("\n".join(lines).replace("\n", "\u2028"))
            text.setTextFormat(Qt.TextFormat.PlainText)
            option = QTextOption(Qt.AlignmentFlag.AlignHCenter)
            option.setWrapMode(QTextOption.WrapMode.ManualWrap)
            text.setTextOption(option)
            text.setTextWidth(width + 2)
            text.prepare(font=self._font)
            self._texts[key] = (text, QSizeF(width + 2, metrics.height() * len(lines)))
        return self._texts[key]


def has_room(people: int, radius: float) -> bool:
    """Whether names are painted at all for so many people of a radius in pixels."""
    return radius >= (LEAST_PX_IN_CROWDS if people > CROWD else LEAST_PX)


def wrapped(name: str, font: QFont, room: float, most: int = 2) -> list[str]:
    """`name` on up to `most` lines, broken at spaces and behind hyphens where there are any; what is more than
    that is shortened at the end of the last line."""
    metrics = QFontMetricsF(font)
    lines = []
    rest = name
    while rest and len(lines) < most - 1:
        line, rest = _broken(rest, metrics, room)
        lines.append(line)
    return [*lines, metrics.elidedText(rest, Qt.TextElideMode.ElideRight, room)] if rest else lines


def _broken(text: str, metrics: QFontMetricsF, room: float) -> tuple[str, str]:
    """The first line of `text` in `room`, and what is left."""
    if metrics.horizontalAdvance(text) <= room:
        return text, ""
    ends = [match.end() for match in _BREAKS.finditer(text)]
    fit = max((end for end in ends if metrics.horizontalAdvance(text[:end].rstrip()) <= room), default=0)
    end = fit or max(1, _fitting(text, metrics, room))
    return text[:end].rstrip(), text[end:].lstrip()


def _fitting(text: str, metrics: QFontMetricsF, room: float) -> int:
    """How many characters of `text` fit into `room`."""
    low, high = 0, len(text)
    while low < high:
        middle = (low + high + 1) // 2
        if metrics.horizontalAdvance(text[:middle]) <= room:
            low = middle
        else:
            high = middle - 1
    return low
