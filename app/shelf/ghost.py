"""The block that follows the pointer from the shelf to the path."""

from __future__ import annotations

from PySide6.QtCore import QPoint, QRectF, Qt
from PySide6.QtGui import QPainter, QPaintEvent
from PySide6.QtWidgets import QWidget

from app.inks import Inks
from engine.sections.base import Domain

from .entries import paint_entry

WIDTH_PX, HEIGHT_PX = 116, 30


class Carried(QWidget):
    """Lies over the whole window, lets every event through, and shows what the hand carries."""

    def __init__(self, window: QWidget) -> None:
        super().__init__(window)
        self.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
        self.resize(WIDTH_PX, HEIGHT_PX)
        self._title, self._domain = "", Domain.ANALOGUE
        self._inks: Inks | None = None
        self.hide()

    def show_at(self, at: QPoint, title: str, domain: Domain, inks: Inks) -> None:
        """Show a kind above a point of the window, so that what it is carried over stays in sight."""
        self._title, self._domain, self._inks = title, domain, inks
        self.move(at + QPoint(-16, -HEIGHT_PX - 8))
        if not self.isVisible():
            self.show()
            self.raise_()
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        if self._inks is None:
            return
        painter = QPainter(self)
        painter.setOpacity(0.9)
        box = QRectF(self.rect()).adjusted(1.0, 1.0, -1.0, -1.0)
        paint_entry(painter, box, self._title, self._domain, self._inks, active=True, hovered=False)
        painter.end()
