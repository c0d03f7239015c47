"""Dress the whole application in a scheme: palette and style sheet from its inks, at one density."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtGui import QColor, QPalette
from PySide6.QtWidgets import QApplication

from app.inks import Inks, blend, font


@dataclass(frozen=True)
class Density:
    """Heights in pixels at 100 %."""

    row_px: int
    gap_px: int


POINTER = Density(24, 6)
TOUCH = Density(44, 8)
PADDING_PX = 20
CORNER_PX = 5


def apply(app: QApplication, inks: Inks, density: Density = POINTER) -> None:
    """Set palette, font and style sheet of the application."""
    app.setStyle("Fusion")
    app.setPalette(palette(inks))
    app.setFont(font(12))
    app.setStyleSheet(sheet(inks, density))


def palette(inks: Inks) -> QPalette:
    """The scheme as a palette, for what no style sheet reaches."""
    made = QPalette()
    roles = {
        QPalette.ColorRole.Window: inks.paper,
        QPalette.ColorRole.WindowText: inks.ink,
        QPalette.ColorRole.Base: inks.raised,
        QPalette.ColorRole.AlternateBase: inks.paper,
        QPalette.ColorRole.Text: inks.ink,
        QPalette.ColorRole.Button: inks.paper,
        QPalette.ColorRole.ButtonText: inks.ink,
        QPalette.ColorRole.BrightText: inks.stop,
        QPalette.ColorRole.Highlight: blend(inks.accent, inks.raised, 0.25),
        QPalette.ColorRole.HighlightedText: inks.ink,
        QPalette.ColorRole.ToolTipBase: inks.raised,
        QPalette.ColorRole.ToolTipText: inks.ink,
        QPalette.ColorRole.PlaceholderText: inks.muted,
        QPalette.ColorRole.Mid: inks.hairline,
        QPalette.ColorRole.Dark: inks.hairline,
        QPalette.ColorRole.Light: inks.raised,
        QPalette.ColorRole.Link: inks.accent,
    }
    for role, colour in roles.items():
        made.setColor(role, colour)
    for role in (QPalette.ColorRole.Text, QPalette.ColorRole.ButtonText, QPalette.ColorRole.WindowText):
        made.setColor(QPalette.ColorGroup.Disabled, role, blend(inks.muted, inks.paper, 0.6))
    return made


def sheet(inks: Inks, density: Density = POINTER) -> str:
    """The style sheet: hairlines instead of frames, accent for what a hand can move."""
    tint = _name(blend(inks.accent, inks.raised, 0.14))
    hover = _name(blend(inks.ink, inks.paper, 0.06))
    accent, hairline, ink, muted = (_name(c) for c in (inks.accent, inks.hairline, inks.ink, inks.muted))
    paper, raised, stop = (_name(c) for c in (inks.paper, inks.raised, inks.stop))
    faint = _name(blend(inks.muted, inks.paper, 0.55))
    row = density.row_px - 2
    return f"""
QMainWindow, QDialog, QWidget#panel, QScrollArea, QScrollArea > QWidget > QWidget {{ background: {paper}; }}
QToolTip {{ background: {raised}; color: {ink}; border: 1px solid {hairline}; padding: 4px 6px; }}
QWidget#topLine {{ background: {paper}; border-bottom: 1px solid {hairline}; }}
QWidget#notice {{ background: {tint}; border-bottom: 1px solid {hairline}; }}
QMenuBar {{ background: transparent; color: {ink}; padding: 0; }}
QMenuBar::item {{ padding: 4px 8px; border-radius: {CORNER_PX}px; background: transparent; }}
QMenuBar::item:selected {{ background: {hover}; }}
QMenu {{ background: {raised}; color: {ink}; border: 1px solid {hairline}; padding: 4px; }}
QMenu::item {{ padding: 4px 24px 4px 20px; border-radius: {CORNER_PX}px; min-height: {row - 8}px; }}
QMenu::item:selected {{ background: {tint}; }}
QMenu::item:disabled {{ color: {faint}; }}
QMenu::separator {{ height: 1px; background: {hairline}; margin: 4px 8px; }}
QPushButton, QToolButton {{ background: transparent; color: {ink}; border: 1px solid {hairline};
    border-radius: {CORNER_PX}px; padding: 0 10px; min-height: {row}px; }}
QPushButton:hover, QToolButton:hover {{ background: {hover}; }}
QPushButton:pressed, QToolButton:pressed, QPushButton:checked, QToolButton:checked {{ background: {tint}; border-color: {accent}; }}
QPushButton:focus, QToolButton:focus {{ border-color: {accent}; }}
QPushButton:disabled, QToolButton:disabled {{ color: {faint}; }}
QPushButton[flat="true"], QToolButton[flat="true"] {{ border-color: transparent; }}
QDialogButtonBox, QMessageBox {{ dialogbuttonbox-buttons-have-icons: 0; }}
QToolButton[small="true"] {{ min-height: 20px; padding: 0 7px; }}
QPushButton[primary="true"] {{ background: {tint}; border-color: {tint}; color: {accent}; font-weight: 600; }}
QPushButton[primary="true"]:disabled {{ background: transparent; border-color: {hairline}; color: {faint}; }}
QLineEdit, QPlainTextEdit, QTextEdit, QComboBox, QAbstractSpinBox {{ background: {raised}; color: {ink};
    border: 1px solid {hairline}; border-radius: {CORNER_PX}px; padding: 0 6px; min-height: {row}px;
    selection-background-color: {tint}; selection-color: {ink}; }}
QLineEdit:focus, QPlainTextEdit:focus, QTextEdit:focus, QComboBox:focus, QAbstractSpinBox:focus {{ border-color: {accent}; }}
QLineEdit[wrong="true"] {{ border-color: {stop}; }}
QComboBox::drop-down {{ border: none; width: 18px; }}
QComboBox QAbstractItemView {{ background: {raised}; color: {ink}; border: 1px solid {hairline}; selection-background-color: {tint};
    selection-color: {ink}; outline: none; }}
QCheckBox {{ color: {ink}; spacing: 6px; min-height: {row}px; }}
QLabel {{ color: {ink}; background: transparent; }}
QLabel[quiet="true"] {{ color: {muted}; }}
QLabel[strong="true"] {{ font-weight: 600; }}
QLabel[wrong="true"] {{ color: {stop}; }}
QListView, QTreeView, QTableView {{ background: {paper}; color: {ink}; border: none; outline: none; gridline-color: {hairline};
    selection-background-color: {tint}; selection-color: {ink}; }}
QHeaderView::section {{ background: {paper}; color: {muted}; border: none; border-bottom: 1px solid {hairline}; padding: 4px 6px; }}
QSplitter::handle {{ background: {hairline}; }}
QSplitter::handle:horizontal {{ width: 1px; }}
QSplitter::handle:vertical {{ height: 1px; }}
QScrollBar {{ background: transparent; border: none; margin: 0; }}
QScrollBar:vertical {{ width: 10px; }}
QScrollBar:horizontal {{ height: 10px; }}
QScrollBar::handle {{ background: {_name(blend(inks.muted, inks.paper, 0.35))}; border-radius: 3px; margin: 2px;
    min-width: 24px; min-height: 24px; }}
QScrollBar::handle:hover {{ background: {muted}; }}
QScrollBar::add-line, QScrollBar::sub-line, QScrollBar::add-page, QScrollBar::sub-page {{ background: none;
    border: none; width: 0; height: 0; }}
QSlider {{ min-height: {density.row_px}px; background: transparent; }}
QSlider::groove:horizontal {{ height: 3px; background: {hairline}; border-radius: 1px; }}
QSlider::sub-page:horizontal {{ background: {accent}; height: 3px; border-radius: 1px; }}
QSlider::handle:horizontal {{ background: {raised}; border: 2px solid {accent}; width: 10px; height: 10px;
    margin: -6px 0; border-radius: 7px; }}
QSlider:focus::handle:horizontal, QSlider::handle:horizontal:hover {{ background: {accent}; }}
QSlider::sub-page:horizontal:disabled, QSlider::handle:horizontal:disabled {{ background: {hairline}; border-color: {faint}; }}
QStatusBar {{ background: {raised}; color: {ink}; border-top: 1px solid {hairline}; }}
"""


def _name(colour: QColor) -> str:
    return colour.name()
