"""Links as hairlines with right-angle turns."""

from __future__ import annotations

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QPainter, QPen, QPolygonF

from app.gestures.base import Point
from app.inks import Inks


def corners(line: tuple[Point, ...]) -> QPolygonF:
    """A link's corners on pixel centres, so that a hairline is crisp."""
    return QPolygonF([QPointF(round(x) + 0.5, round(y) + 0.5) for x, y in line])


def paint_link(
    painter: QPainter, line: tuple[Point, ...], inks: Inks, *,
    selected: bool = False, hovered: bool = False, refused: bool = False, several: bool = False,
    on_path: bool = False,
) -> None:  # fmt: skip
    """One link. A link of many alike is drawn double, one of the path that the diagram follows stronger."""
    ink = (
        inks.stop if refused else inks.accent if selected else inks.ink if hovered or on_path else inks.muted
    )
    pen = QPen(ink, 2.0 if selected or refused or on_path else 1.0)
    pen.setCapStyle(Qt.PenCapStyle.FlatCap)
    pen.setJoinStyle(Qt.PenJoinStyle.MiterJoin)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    if several and not selected:
        pen.setWidthF(5.0 if on_path else 3.0)
        painter.setPen(pen)
        painter.drawPolyline(corners(line))
        pen.setColor(inks.paper)
        pen.setWidthF(1.0)
    painter.setPen(pen)
    painter.drawPolyline(corners(line))
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
