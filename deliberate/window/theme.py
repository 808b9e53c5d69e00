"""Colours and type of the window, light and dark.

Beliefs go on a diverging scale, ochre for low and slate blue for high, with its neutral middle at the pass mark,
so that for and against can be told apart; a number always says the same thing too. Contrast is held by test
(WCAG 2.2: text 4.5:1, lines and marks 3:1).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QObject, QSettings, Qt, Signal
from PySide6.QtGui import QColor, QGuiApplication, QPalette

from deliberate.scenario.values import Question

SHADES = 256  # belief colours are quantised to this many, so that sprites can be cached


@dataclass(frozen=True)
class Theme:
    """Named colours (``#rrggbb``) of one appearance, and the eleven stops of the belief scale, low to high."""

    name: str
    canvas: str  # the ground people stand on
    panel: str  # sidebars and bars
    raised: str  # fields, the shown variant
    ink: str
    muted: str  # second-rank text, at least 4.5:1 on panel and canvas
    line: str  # hairlines between parts
    mark: str  # arrows, ticks, rings, edges of fields: at least 3:1 on all grounds
    accent: str  # selected, played, pointed at
    on_accent: str
    tint: str  # accent ground behind text
    stops: tuple[str, ...]


LIGHT = Theme(
    name="light",
    canvas="#faf8f4",
    panel="#ffffff",
    raised="#f3f1ec",
    ink="#23252b",
    muted="#666a73",
    line="#dedbd3",
    mark="#82858c",
    accent="#7c2a5c",
    on_accent="#ffffff",
    tint="#f3e9ef",
    stops=(
        "#8a5600", "#a77128", "#bc905d", "#d0b08c", "#e3d0bc", "#f0f2f4",
        "#c6d5eb", "#9eb8de", "#789bcf", "#537fbf", "#2d62ae",
    ),
)  # fmt: skip

DARK = Theme(
    name="dark",
    canvas="#1e1f23",
    panel="#25282e",
    raised="#31353c",
    ink="#eceae4",
    muted="#a9abb2",
    line="#3b3f47",
    mark="#84878f",
    accent="#e6a1cc",
    on_accent="#2a1322",
    tint="#3b3038",
    stops=(
        "#f1af5e", "#cb9757", "#a67f50", "#836849", "#615241", "#3c3d3f",
        "#4a5667", "#596f8f", "#6989b8", "#7aa4e2", "#95c0fe",
    ),
)  # fmt: skip


def belief_fractions(beliefs: NDArray[np.float64], question: Question) -> NDArray[np.float64]:
    """Where beliefs stand on the colour scale: 0 at `low`, 0.5 at the pass mark (else the middle), 1 at `high`."""
    middle = question.middle if question.pass_mark is None else question.pass_mark
    return np.interp(beliefs, [question.low, middle, question.high], [0.0, 0.5, 1.0])


@lru_cache(maxsize=4)
def shades(theme: Theme) -> tuple[QColor, ...]:
    """The belief scale in `SHADES` steps, mixed linearly between the stops."""
    stops = np.array([[int(stop[i : i + 2], 16) for i in (1, 3, 5)] for stop in theme.stops], dtype=float)
    at = np.linspace(0, len(stops) - 1, SHADES)
    mixed = np.stack([np.interp(at, np.arange(len(stops)), stops[:, channel]) for channel in range(3)], axis=1)
    return tuple(QColor(*(round(value) for value in row)) for row in mixed)


def shade_indices(beliefs: NDArray[np.float64], question: Question) -> NDArray[np.intp]:
    """Index into `shades` for each belief."""
    return np.rint(belief_fractions(beliefs, question) * (SHADES - 1)).astype(np.intp)


def belief_color(belief: float, question: Question, theme: Theme) -> QColor:
    """The colour of one belief."""
    return shades(theme)[int(shade_indices(np.array([belief]), question)[0])]


def luminance(color: QColor) -> float:
    """Relative luminance, 0 to 1 (WCAG 2.2)."""
    channels = np.array([color.redF(), color.greenF(), color.blueF()])
    linear = np.where(channels <= 0.04045, channels / 12.92, ((channels + 0.055) / 1.055) ** 2.4)
    return float(linear @ [0.2126, 0.7152, 0.0722])


def contrast(one: QColor, other: QColor) -> float:
    """Contrast ratio, 1 to 21 (WCAG 2.2)."""
    low, high = sorted((luminance(one), luminance(other)))
    return (high + 0.05) / (low + 0.05)


INK_ON_FILL = (QColor("#000000"), QColor("#ffffff"))  # only these two reach 4.5:1 on every fill


@lru_cache(maxsize=1024)
def ink_on(rgb: int) -> QColor:
    """Black or white, whichever reads better on a fill given as ``QColor.rgb()``."""
    fill = QColor.fromRgb(rgb)
    return max(INK_ON_FILL, key=lambda ink: contrast(ink, fill))


def mix(one: str, other: str, share: float) -> QColor:
    """An opaque colour `share` of the way from `one` to `other`: painting it is far cheaper than translucency."""
    a, b = QColor(one), QColor(other)
    return QColor(*(round(x + (y - x) * share) for x, y in zip(a.getRgb()[:3], b.getRgb()[:3], strict=True)))


@lru_cache(maxsize=2048)
def line_color(color: str, theme: Theme) -> QColor:
    """`color` with as much ink as a line on a panel needs to be seen (3:1): pale beliefs are nearly paper."""
    steps = (mix(color, theme.ink, step / 20) for step in range(21))
    return next(mixed for mixed in steps if contrast(mixed, QColor(theme.panel)) >= 3.0)


def qt_palette(theme: Theme) -> QPalette:
    """The palette that makes Qt's own widgets wear the theme."""
    palette = QPalette()
    roles = {
        QPalette.ColorRole.Window: theme.panel,
        QPalette.ColorRole.WindowText: theme.ink,
        QPalette.ColorRole.Base: theme.panel,
        QPalette.ColorRole.AlternateBase: theme.raised,
        QPalette.ColorRole.Text: theme.ink,
        QPalette.ColorRole.PlaceholderText: theme.muted,
        QPalette.ColorRole.Button: theme.raised,
        QPalette.ColorRole.ButtonText: theme.ink,
        QPalette.ColorRole.ToolTipBase: theme.raised,
        QPalette.ColorRole.ToolTipText: theme.ink,
        QPalette.ColorRole.Highlight: theme.accent,
        QPalette.ColorRole.HighlightedText: theme.on_accent,
        QPalette.ColorRole.Accent: theme.accent,
        QPalette.ColorRole.Link: theme.accent,
        QPalette.ColorRole.Light: theme.raised,
        QPalette.ColorRole.Midlight: theme.line,
        QPalette.ColorRole.Mid: theme.line,
        QPalette.ColorRole.Dark: theme.muted,
        QPalette.ColorRole.Shadow: theme.canvas,
    }
    for role, color in roles.items():
        palette.setColor(role, QColor(color))
    for role in (QPalette.ColorRole.WindowText, QPalette.ColorRole.Text, QPalette.ColorRole.ButtonText):
        palette.setColor(QPalette.ColorGroup.Disabled, role, mix(theme.muted, theme.panel, 0.35))
    return palette


class Look(QObject):
    """The appearance in force: follows the system unless she chose light or dark. `changed` follows a change."""

    changed = Signal()

    def __init__(self, settings: QSettings, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._settings = settings
        self._choice = str(settings.value("look/theme", "system", str))
        self._still = settings.value("look/still", "false", str) == "true"
        self.theme = self._wanted()
        QGuiApplication.styleHints().colorSchemeChanged.connect(self._refresh)
        QGuiApplication.setPalette(qt_palette(self.theme))

    @property
    def choice(self) -> str:
        """ "system", "light" or "dark"."""
        return self._choice

    @property
    def still(self) -> bool:
        """True when pictures jump from round to round instead of gliding."""
        return self._still

    def choose(self, choice: str) -> None:
        """Follow the system, or stay light or dark; remembered."""
        self._choice = choice
        self._settings.setValue("look/theme", choice)
        self._refresh()

    def set_still(self, still: bool) -> None:
        """Reduce motion, or not; remembered."""
        self._still = still
        self._settings.setValue("look/still", "true" if still else "false")
        self.changed.emit()

    def _wanted(self) -> Theme:
        if self._choice in ("light", "dark"):
            return DARK if self._choice == "dark" else LIGHT
        return DARK if QGuiApplication.styleHints().colorScheme() == Qt.ColorScheme.Dark else LIGHT

    def _refresh(self) -> None:
        wanted = self._wanted()
        if wanted is not self.theme:
            self.theme = wanted
            QGuiApplication.setPalette(qt_palette(wanted))
            self.changed.emit()
