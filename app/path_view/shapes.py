"""The outline of a block: its shape says its domain. Acoustic round-ended, analogue square, digital one cut corner."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QPainterPath, QPolygonF

from engine.sections.base import Domain
from engine.stages import Stage

SQUARE_RADIUS_PX = 2.0


def shape_of(stage: Stage) -> Domain:
    """The domain that a block's shape tells: air where any port is in air, digital where any is, else its own."""
    domains = {port.domain for port in (*stage.inputs(), *stage.outputs())}
    for telling in (Domain.ACOUSTIC, Domain.DIGITAL):
        if telling in domains:
            return telling
    return stage.domain


def outline(domain: Domain, box: QRectF) -> QPainterPath:
    """The closed outline of a block of this domain."""
    path = QPainterPath()
    if domain == Domain.ACOUSTIC:
        radius = min(20.0, box.height() / 2.0, box.width() / 2.0)
        path.addRoundedRect(box, radius, radius)
    elif domain == Domain.DIGITAL:
        cut = min(11.0, box.height() / 2.6, box.width() / 2.0)
        corners = [
            box.topLeft(),
            QPointF(box.right() - cut, box.top()),
            QPointF(box.right(), box.top() + cut),
            box.bottomRight(),
            box.bottomLeft(),
        ]
        path.addPolygon(QPolygonF(corners))
        path.closeSubpath()
    else:
        path.addRoundedRect(box, SQUARE_RADIUS_PX, SQUARE_RADIUS_PX)
    return path


def sharp(left: float, top: float, width: float, height: float) -> QRectF:
    """A rectangle on pixel centres, where a line one pixel wide is crisp."""
    x, y = round(left), round(top)
    return QRectF(x + 0.5, y + 0.5, round(left + width) - x - 1.0, round(top + height) - y - 1.0)
