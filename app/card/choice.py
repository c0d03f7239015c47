"""A choice among names: side by side where they fit, else a list that drops down."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QEvent, QObject, QPointF, Qt, Signal
from PySide6.QtGui import (
    QFontMetrics,
    QKeyEvent,
    QPainter,
    QPaintEvent,
    QPalette,
    QPen,
    QResizeEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QButtonGroup, QComboBox, QPushButton, QSizePolicy, QWidget

from app.inks import font

from .pieces import column

ROOM_PX = 240  # what the card leaves at its narrowest
MOST_SEGMENTS = 4
PADDING_PX = 14
_ALONG = {Qt.Key.Key_Left: -1, Qt.Key.Key_Up: -1, Qt.Key.Key_Right: 1, Qt.Key.Key_Down: 1}


class Choice(QWidget):
    """Emits the place of what was chosen; shows a place, or -1 for several at once."""

    chosen = Signal(int)

    def __init__(self, name: str, names: Sequence[str]) -> None:
        super().__init__()
        self._row = column(self)
        self.inner: Segments | StillCombo = (
            Segments(name, names) if fits_side_by_side(names) else StillCombo(name, names)
        )
        self.setFocusProxy(self.inner)
        self._row.addWidget(self.inner)
        self.inner.chosen.connect(self.chosen)

    def show_place(self, place: int) -> None:
        """Show what is chosen."""
        self.inner.show_place(place)


def fits_side_by_side(names: Sequence[str]) -> bool:
    """Whether the names are few and short enough to stand in one line."""
    metrics = QFontMetrics(font(12))
    widest = max((metrics.horizontalAdvance(name) for name in names), default=0) + PADDING_PX
    return 2 <= len(names) <= MOST_SEGMENTS and widest * len(names) <= ROOM_PX


class Segments(QWidget):
    """Buttons side by side, one of them down. Arrow keys go along them."""

    chosen = Signal(int)

    def __init__(self, name: str, names: Sequence[str]) -> None:
        super().__init__()
        self.setAccessibleName(name)
        self._group = QButtonGroup(self)
        self.buttons: list[QPushButton] = []
        for place, text in enumerate(names):
            button = QPushButton(text, self)
            button.setCheckable(True)
            button.setAccessibleName(f"{name}: {text}")
            button.setProperty("segment", True)
            button.installEventFilter(self)
            self._group.addButton(button, place)
            self.buttons.append(button)
        self._group.idClicked.connect(self.chosen)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setMinimumHeight(self.buttons[0].sizeHint().height())
        if self.buttons:
            self.setFocusProxy(self.buttons[0])

    def show_place(self, place: int) -> None:
        """Press the button of a place; -1 none."""
        if place < 0:
            self._group.setExclusive(False)
            for button in self.buttons:
                button.setChecked(False)
            self._group.setExclusive(True)
        elif not self.buttons[place].isChecked():
            self.buttons[place].setChecked(True)
        self.setFocusProxy(self.buttons[max(0, place)])

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Left and right choose the neighbour, as in any such row."""
        if isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress and watched in self.buttons:
            step = _ALONG.get(Qt.Key(event.key()))
            if step is not None:
                place = self.buttons.index(watched) + step
                if 0 <= place < len(self.buttons):
                    self.buttons[place].setFocus(Qt.FocusReason.OtherFocusReason)
                    self.buttons[place].click()
                return True
        return False

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Share the width; neighbours share a line between them."""
        count, width = len(self.buttons), self.width()
        for place, button in enumerate(self.buttons):
            left, right = round(place * width / count), round((place + 1) * width / count)
            button.setGeometry(left, 0, right - left - (2 if place + 1 < count else 0), self.height())


class StillCombo(QComboBox):
    """A drop-down list that a wheel passing over it does not turn, and that never asks for more room than there is."""

    chosen = Signal(int)

    def __init__(self, name: str, names: Sequence[str]) -> None:
        super().__init__()
        self.setAccessibleName(name)
        self.addItems(list(names))
        self.setPlaceholderText("several")
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.setMinimumContentsLength(4)
        self.activated.connect(self.chosen)

    def show_place(self, place: int) -> None:
        """Show a place; -1 several."""
        if place != self.currentIndex():
            self.setCurrentIndex(place)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The style sheet leaves out the arrow that says there is more."""
        super().paintEvent(event)
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(self.palette().color(QPalette.ColorRole.PlaceholderText), 1.4))
        x, y = self.width() - 13.0, self.height() / 2.0 - 1.5
        painter.drawPolyline([QPointF(x - 3.5, y), QPointF(x, y + 3.5), QPointF(x + 3.5, y)])
        painter.end()

    def wheelEvent(self, event: QWheelEvent) -> None:
        if self.hasFocus():
            super().wheelEvent(event)
        else:
            event.ignore()
