"""Paint what the pointer shows over a node: everything there, beside the lines. QtGui only."""

from __future__ import annotations

from PySide6.QtCore import QLineF, QRect, QRectF, Qt
from PySide6.QtGui import QFontMetricsF, QPainter, QPen

from app.inks import Inks, font

from . import readout
from .geometry import Geometry
from .traces import Place

ROW_PX, PAD_PX, GAP_PX = 17.0, 10.0, 16.0


def paint_readout(painter: QPainter, place: Place, geometry: Geometry, inks: Inks, view: QRect) -> None:
    """A vertical hairline at the node, and its numbers in a box beside it."""
    rows = readout.lines(place.node)
    strong, plain = QFontMetricsF(font(11, strong=True)), QFontMetricsF(font(11))
    width = (
        max(plain.horizontalAdvance(label) + strong.horizontalAdvance(value) for label, value in rows)
        + GAP_PX
    )
    box = QRectF(0.0, 0.0, width + 2.0 * PAD_PX, ROW_PX * len(rows) + 2.0 * PAD_PX)
    on_right = place.x + 12.0 + box.width() < view.width()
    box.moveTo(
        place.x + 12.0 if on_right else place.x - 12.0 - box.width(), max(4.0, geometry.plot.top + 6.0)
    )
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, on=True)
    painter.setPen(QPen(inks.accent, 1.0))
    painter.drawLine(QLineF(place.x, geometry.plot.top, place.x, geometry.plot.bottom))
    painter.setPen(QPen(inks.hairline, 1.0))
    painter.setBrush(inks.raised)
    painter.drawRoundedRect(box, 5.0, 5.0)
    for index, (label, value) in enumerate(rows):
        line = QRectF(box.left() + PAD_PX, box.top() + PAD_PX + index * ROW_PX, width, ROW_PX)
        painter.setFont(font(11, strong=index == 0))
        painter.setPen(inks.ink if index == 0 else inks.muted)
        painter.drawText(line, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter, label)
        painter.setFont(font(11, strong=index > 0))
        painter.setPen(inks.ink if index else inks.muted)
        painter.drawText(line, Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter, value)
