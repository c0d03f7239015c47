"""Small parts of the card: labels that are cut with an ellipsis, headings, words that are pressed."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QPainter, QPaintEvent
from PySide6.QtWidgets import QHBoxLayout, QLabel, QPushButton, QSizePolicy, QVBoxLayout, QWidget

from app.inks import Inks, font

GAP_PX = 6
HEAD_GAP_PX = 12


class Elided(QLabel):
    """One line of text, cut with an ellipsis where there is no room; the whole of it is in the tip."""

    def __init__(
        self, text: str = "", size_px: int = 12, *, strong: bool = False, quiet: bool = False
    ) -> None:
        super().__init__()
        self._help = ""
        self.setFont(font(size_px, strong=strong))
        self.setProperty("quiet", quiet)
        self.setTextFormat(Qt.TextFormat.PlainText)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
        self.setText(text)

    def set_help(self, text: str) -> None:
        """What the tip says beside the text."""
        self._help = text
        self.setToolTip(_tip(text))

    def show_text(self, text: str) -> None:
        """Show another text."""
        if text != self.text():
            self.setText(text)
            self.setToolTip(_tip(self._help or text))

    def minimumSizeHint(self) -> QSize:
        return QSize(0, super().minimumSizeHint().height())

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setPen(self.palette().color(self.foregroundRole()))
        painter.setFont(self.font())
        text = self.fontMetrics().elidedText(self.text(), Qt.TextElideMode.ElideRight, self.width())
        painter.drawText(self.rect(), int(self.alignment()), text)
        painter.end()


class Said(QLabel):
    """Why something typed cannot be, under its field; takes no room while there is nothing to say."""

    def __init__(self) -> None:
        super().__init__()
        self.setFont(font(11))
        self.setProperty("wrong", True)
        self.setWordWrap(True)
        self.setTextFormat(Qt.TextFormat.PlainText)
        self.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Minimum)
        self.hide()

    def say(self, reason: str) -> None:
        """Show the reason, or nothing."""
        self.setText(reason)
        self.setVisible(bool(reason))


class Word(QPushButton):
    """A quiet word that can be pressed."""

    def __init__(self, text: str = "", *, quiet: bool = True) -> None:
        super().__init__(text)
        self.setFont(font(11))
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setProperty("flat", True)
        self.setProperty("word", "quiet" if quiet else "strong")
        self.setSizePolicy(QSizePolicy.Policy.Maximum, QSizePolicy.Policy.Preferred)


class Heading(QWidget):
    """A group's name over a hairline."""

    def __init__(self, text: str, inks: Inks) -> None:
        super().__init__()
        self._inks = inks
        label = QLabel(text)
        label.setFont(font(12, strong=True))
        column = QVBoxLayout(self)
        column.setContentsMargins(0, HEAD_GAP_PX, 0, 0)
        column.addWidget(label)

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setPen(self._inks.hairline)
        painter.drawLine(0, 3, self.width(), 3)
        painter.end()


def row(*widgets: QWidget, stretch: int = 0, spacing: int = GAP_PX) -> QHBoxLayout:
    """Widgets side by side; the one at `stretch` takes the room that is left."""
    made = QHBoxLayout()
    made.setContentsMargins(0, 0, 0, 0)
    made.setSpacing(spacing)
    for place, widget in enumerate(widgets):
        made.addWidget(widget, 1 if place == stretch else 0)
    return made


def column(widget: QWidget, spacing: int = 0) -> QVBoxLayout:
    """The column a widget stands its parts in, without margins."""
    made = QVBoxLayout(widget)
    made.setContentsMargins(0, 0, 0, 0)
    made.setSpacing(spacing)
    return made


def _tip(text: str) -> str:
    """Qt breaks a tip into lines only where it is rich text."""
    plain = text.replace("&", "&amp;").replace("<", "&lt;")
    return f"<qt>{plain}</qt>" if len(text) > 40 else plain


def tip(text: str) -> str:
    """A tip that is broken into lines."""
    return _tip(text)


def card_sheet(inks: Inks, *, touch: bool = False) -> str:
    """What the card adds to the application's style sheet; fingers need its words as high as rows."""
    small_px = 40 if touch else 18
    return f"""
QPushButton[word] {{ border-color: transparent; padding: 0 4px; margin: 0 -4px 0 0; min-height: {small_px}px; }}
QPushButton[word="quiet"] {{ color: {inks.muted.name()}; }}
QPushButton[word="strong"] {{ color: {inks.accent.name()}; margin: 0 0 0 -5px; }}
QPushButton[word]:focus {{ border-color: {inks.accent.name()}; }}
QPushButton[segment="true"] {{ padding: 0 4px; }}
QLineEdit[bare="true"] {{ background: transparent; border-color: transparent; padding: 0; }}
QLineEdit[title="true"] {{ margin-left: -3px; }}
QLineEdit[value="true"] {{ margin-right: -4px; }}
QLineEdit[title="true"]:hover, QLineEdit[title="true"]:focus, QLineEdit[title="true"][wrong="true"] {{ margin-left: 0; }}
QLineEdit[value="true"]:hover, QLineEdit[value="true"]:focus, QLineEdit[value="true"][wrong="true"] {{ margin-right: 0; }}
QLineEdit[bare="true"]:hover {{ border-color: {inks.hairline.name()}; }}
QLineEdit[bare="true"]:focus {{ background: {inks.raised.name()}; border-color: {inks.accent.name()}; }}
QLineEdit[bare="true"][wrong="true"] {{ border-color: {inks.stop.name()}; }}
QComboBox {{ padding-left: 8px; }}
QLineEdit[small="true"] {{ min-height: {small_px}px; }}
QScrollArea, QWidget#card {{ background: {inks.paper.name()}; border: none; }}
"""
