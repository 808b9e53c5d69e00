"""The one style sheet: what Qt's own widgets need beyond the palette to wear the theme."""

from __future__ import annotations

from deliberate.files.resources import resources
from deliberate.window.theme import Theme


def style_sheet(theme: Theme) -> str:
    """Quiet fields, hairlines, one accent for what has the focus or is chosen."""
    tick = (resources() / f"tick-{theme.name}.svg").as_posix()
    up, down = ((resources() / f"{way}-{theme.name}.svg").as_posix() for way in ("up", "down"))
    return f"""
    QLabel[muted="true"] {{ color: {theme.muted}; }}
    QWidget[hairline="true"] {{ background: {theme.line}; }}
    QMainWindow, QMenuBar, QStatusBar, QScrollArea, QScrollArea > QWidget > QWidget {{ background: {theme.panel}; }}
    QMenuBar {{ border-bottom: 1px solid {theme.line}; padding: 1px 6px; }}
    QMenuBar::item {{ padding: 4px 9px; border-radius: 4px; background: transparent; color: {theme.ink}; }}
    QMenuBar::item:selected {{ background: {theme.tint}; color: {theme.accent}; }}
    QMenu {{ background: {theme.panel}; border: 1px solid {theme.line}; padding: 4px; }}
    QMenu::item {{ padding: 5px 28px 5px 24px; border-radius: 4px; }}
    QMenu::item:selected {{ background: {theme.tint}; color: {theme.accent}; }}
    QMenu::item:disabled {{ color: {theme.muted}; }}
    QMenu::separator {{ height: 1px; background: {theme.line}; margin: 4px 8px; }}
    QStatusBar {{ border-top: 1px solid {theme.line}; color: {theme.muted}; }}
    QStatusBar::item {{ border: none; }}
    QSplitter::handle {{ background: {theme.line}; }}
    QSplitter::handle:hover {{ background: {theme.accent}; }}
    QPushButton, QToolButton {{
        background: {theme.raised}; border: 1px solid {theme.line}; border-radius: 5px; padding: 4px 10px;
        color: {theme.ink}; min-height: 16px;
    }}
    QPushButton:hover, QToolButton:hover {{ border-color: {theme.accent}; }}
    QPushButton:default {{ border: 1px solid {theme.accent}; }}
    QPushButton:pressed, QToolButton:pressed, QPushButton:checked, QToolButton:checked {{
        background: {theme.tint}; color: {theme.accent}; border-color: {theme.accent};
    }}
    QPushButton:focus, QToolButton:focus {{ border: 2px solid {theme.accent}; padding: 3px 9px; }}
    QPushButton:disabled, QToolButton:disabled {{ color: {theme.muted}; }}
    QPushButton[quiet="true"], QToolButton[quiet="true"] {{
        background: transparent; border: 1px solid transparent; color: {theme.accent}; text-align: left;
        font-weight: 600; padding: 4px 4px;
    }}
    QPushButton[quiet="true"]:hover, QToolButton[quiet="true"]:hover {{ background: {theme.tint}; }}
    QPushButton[quiet="true"]:focus, QToolButton[quiet="true"]:focus {{
        border: 2px solid {theme.accent}; padding: 3px 3px;
    }}
    QToolButton[quiet="true"]:checked {{ background: {theme.tint}; border-color: {theme.accent}; }}
    QDialogButtonBox, QMessageBox {{ dialogbuttonbox-buttons-have-icons: 0; }}
    QLineEdit, QPlainTextEdit {{
        background: {theme.panel}; border: 1px solid {theme.mark}; border-radius: 5px; padding: 3px 6px;
        color: {theme.ink}; selection-background-color: {theme.accent}; selection-color: {theme.on_accent};
        min-height: 18px;
    }}
    QLineEdit:focus, QPlainTextEdit:focus {{ border: 2px solid {theme.accent}; padding: 2px 5px; }}
    QLineEdit:disabled {{ color: {theme.muted}; background: {theme.raised}; border-color: {theme.raised}; }}
    QTableView, QListView {{
        background: {theme.panel}; border: 1px solid {theme.panel}; gridline-color: {theme.line};
        selection-background-color: {theme.tint}; selection-color: {theme.ink};
    }}
    QTableView:focus, QListView:focus {{ border: 1px solid {theme.accent}; }}
    QComboBox {{
        background: {theme.raised}; border: 1px solid {theme.mark}; border-radius: 5px; padding: 3px 4px 3px 8px;
        color: {theme.ink}; min-height: 16px;
    }}
    QComboBox:focus {{ border: 2px solid {theme.accent}; padding: 2px 3px 2px 7px; }}
    QComboBox:disabled {{ color: {theme.muted}; border-color: {theme.line}; }}
    QComboBox::drop-down {{ border: none; width: 18px; }}
    QComboBox::down-arrow {{ image: url("{down}"); width: 11px; height: 11px; }}
    QComboBox QAbstractItemView {{ background: {theme.panel}; border: 1px solid {theme.line}; }}
    QSpinBox {{
        background: {theme.panel}; border: 1px solid {theme.mark}; border-radius: 5px; padding: 3px 6px;
        color: {theme.ink}; selection-background-color: {theme.accent}; selection-color: {theme.on_accent};
        min-height: 16px;
    }}
    QSpinBox:focus {{ border-color: {theme.accent}; }}
    QSpinBox::up-button, QSpinBox::down-button {{ background: transparent; border: none; width: 18px; }}
    QSpinBox::up-arrow {{ image: url("{up}"); width: 9px; height: 9px; }}
    QSpinBox::down-arrow {{ image: url("{down}"); width: 9px; height: 9px; }}
    QSlider {{ border: 1px solid transparent; border-radius: 4px; }}
    QSlider:focus {{ border-color: {theme.accent}; }}
    QListWidget::item {{ padding: 7px 10px; border-radius: 4px; }}
    QListWidget::item:selected {{ background: {theme.tint}; color: {theme.ink}; }}
    QHeaderView {{ background: {theme.panel}; }}
    QHeaderView::section {{
        background: {theme.panel}; color: {theme.muted}; border: none; border-bottom: 1px solid {theme.line};
        padding: 4px 4px;
    }}
    QHeaderView::up-arrow, QHeaderView::down-arrow {{
        subcontrol-origin: border; subcontrol-position: top center; width: 9px; height: 6px;
    }}
    QTableCornerButton::section {{ background: {theme.panel}; border: none; }}
    QTabBar {{ background: transparent; }}
    QTabBar::tab {{
        background: transparent; color: {theme.muted}; border: 1px solid transparent; border-radius: 6px;
        padding: 5px 12px; margin: 2px 1px; max-width: 240px;
    }}
    QTabBar::tab:selected {{
        background: {theme.raised}; color: {theme.ink}; border-color: {theme.line}; font-weight: 600;
    }}
    QTabBar::tab:hover {{ color: {theme.accent}; }}
    QTabBar::tab:selected:focus {{ border: 2px solid {theme.accent}; padding: 4px 11px; }}
    QTabBar QToolButton {{ padding: 2px; }}
    QTabBar[words="true"] {{ margin-left: 5px; }}
    QTabBar[words="true"]::tab {{
        border: none; border-bottom: 2px solid transparent; border-radius: 0; padding: 5px 2px 4px 2px; margin: 0 3px;
    }}
    QTabBar[words="true"]::tab:selected {{
        background: transparent; color: {theme.ink}; border-bottom-color: {theme.accent}; font-weight: 400;
    }}
    QTabBar[words="true"]::tab:hover {{ color: {theme.accent}; }}
    QTabBar[words="true"]::tab:selected:focus {{ color: {theme.accent}; border: 1px solid {theme.accent}; }}
    QToolTip {{
        background: {theme.raised}; color: {theme.ink}; border: 1px solid {theme.line}; padding: 4px;
    }}
    QCheckBox {{ spacing: 6px; }}
    QCheckBox::indicator, QTableView::indicator {{
        width: 13px; height: 13px; border: 1px solid {theme.mark}; border-radius: 3px; background: {theme.panel};
    }}
    QCheckBox::indicator:checked, QTableView::indicator:checked {{
        background: {theme.accent}; border-color: {theme.accent}; image: url("{tick}");
    }}
    QTableView::indicator:checked {{ background: {theme.mark}; border-color: {theme.mark}; }}
    QCheckBox::indicator:hover, QCheckBox::indicator:focus {{ border-color: {theme.accent}; }}
    QCheckBox:focus {{ color: {theme.accent}; }}
    QScrollBar:vertical {{ background: transparent; width: 10px; margin: 0; }}
    QScrollBar:horizontal {{ background: transparent; height: 10px; margin: 0; }}
    QScrollBar::handle {{
        background: {theme.mark}; border-radius: 3px; min-height: 24px; min-width: 24px; margin: 2px;
    }}
    QScrollBar::handle:hover {{ background: {theme.muted}; }}
    QScrollBar::add-line, QScrollBar::sub-line, QScrollBar::add-page, QScrollBar::sub-page {{
        background: transparent; border: none; width: 0; height: 0;
    }}
    """
