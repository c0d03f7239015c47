"""Paint a level diagram: the same strokes for window, PNG, SVG, PDF and printer. QtGui only.

Lines are told apart without colour: clip heavy solid, usable ceiling thin dotted, peak dashed, level medium solid with dots,
noise dotted, room long-dashed. One `drawLines` call per line: polylines cost three times as much.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QPainter, QPen, QPolygonF

from app.inks import Inks, blend, font

from .geometry import Geometry, Span

AXIS_PX, LABEL_PX, TITLE_PX = 11, 11, 12


@dataclass(frozen=True)
class Stroke:
    """How one line looks: its ink by name, width, and dash in multiples of the width."""

    ink: str
    width: float
    dash: tuple[float, ...] = ()


STROKES: Mapping[str, Stroke] = {
    "noise": Stroke("noise", 1.6, (1.0, 2.6)),
    "peak": Stroke("peak", 1.6, (4.5, 3.0)),
    "ceiling": Stroke("clip", 1.0, (1.0, 3.0)),
    "level": Stroke("level", 2.2),
    "clip": Stroke("clip", 2.8),
    "room": Stroke("muted", 1.6, (8.0, 4.0)),
}
HELD_SHARE = 0.45
BAND_SHARE = 0.10


def paint(painter: QPainter, geometry: Geometry, inks: Inks) -> None:
    """The whole diagram."""
    paint_still(painter, geometry, inks)
    paint_moving(painter, geometry, inks)


def paint_still(painter: QPainter, geometry: Geometry, inks: Inks) -> None:
    """What does not move while a hand does: paper, grid, axes."""
    plot = geometry.plot
    grid = blend(inks.hairline, inks.paper, 0.8)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, on=False)
    painter.setPen(QPen(grid, 1.0))
    painter.drawLines([QLineF(plot.left, tick.y, plot.right, tick.y) for tick in geometry.ticks])
    painter.setFont(_font(AXIS_PX))
    painter.setPen(inks.muted)
    line = QRectF(0, 0, plot.left - 8.0, 16.0)
    for tick in geometry.ticks:
        painter.drawText(
            line.translated(0.0, tick.y - 8.0),
            Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter,
            tick.text,
        )
    for tick in geometry.right_ticks:
        at = QRectF(plot.right + 8.0, tick.y - 8.0, 60.0, 16.0)
        painter.drawText(at, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter, tick.text)
    if geometry.right_ticks:
        painter.setPen(QPen(inks.hairline, 1.0))
        painter.drawLine(QLineF(plot.right, plot.top, plot.right, plot.bottom))


def paint_moving(painter: QPainter, geometry: Geometry, inks: Inks) -> None:
    """The lines and their numbers."""
    if geometry.empty:
        painter.setFont(_font(14))
        painter.setPen(inks.muted)
        plot = geometry.plot
        middle = QRectF(plot.left, plot.top, plot.right - plot.left, plot.bottom - plot.top)
        painter.drawText(
            middle, int(Qt.AlignmentFlag.AlignCenter) | int(Qt.TextFlag.TextWordWrap), geometry.empty
        )
        return
    painter.save()
    plot = geometry.plot
    painter.setClipRect(QRectF(plot.left - 4.0, plot.top - 4.0, 1e6, plot.bottom - plot.top + 8.0))
    guide = QPen(inks.hairline, 1.0)
    guide.setDashPattern([1.0, 4.0])
    painter.setPen(guide)
    painter.drawLines([QLineF(x, plot.top, x, plot.bottom) for x in geometry.guides])
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, on=True)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(blend(inks.level, inks.paper, BAND_SHARE))
    for corners in geometry.bands:
        painter.drawPolygon(QPolygonF([QPointF(x, y) for x, y in corners]))
    for name, spans in geometry.held.items():
        _lines(painter, spans, _pen(STROKES[name], inks, held=True))
    for name, spans in geometry.spans.items():
        _lines(painter, spans, _pen(STROKES[name], inks))
    for span, name in geometry.bars:
        _lines(painter, [span], _pen(STROKES[name], inks))
    painter.setPen(QPen(inks.muted, 1.0))
    painter.drawLines([QLineF(w.x, w.top, w.x, w.bottom) for w in geometry.whiskers])
    painter.drawLines(
        [QLineF(w.x - 3.0, y, w.x + 3.0, y) for w in geometry.whiskers for y in (w.top, w.bottom)]
    )
    painter.setPen(QPen(inks.level, 1.6))
    painter.setBrush(inks.paper)
    for x, y in geometry.dots:
        painter.drawEllipse(QPointF(x, y), 2.6, 2.6)
    painter.restore()
    _labels(painter, geometry, inks)


def _labels(painter: QPainter, geometry: Geometry, inks: Inks) -> None:
    for strong in (False, True):
        painter.setFont(_font(LABEL_PX, strong=strong))
        for label in geometry.labels:
            if label.strong is strong:
                painter.setPen(_ink(STROKES[label.series].ink, inks))
                box = label.box
                at = QRectF(box.left, box.top, box.right - box.left + 2.0, box.bottom - box.top)
                painter.drawText(at, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter, label.text)


def _lines(painter: QPainter, spans: Iterable[Span], pen: QPen) -> None:
    lines = [QLineF(*span) for span in spans]
    if lines:
        painter.setPen(pen)
        painter.drawLines(lines)


def _pen(stroke: Stroke, inks: Inks, *, held: bool = False) -> QPen:
    ink = _ink(stroke.ink, inks)
    if held:
        ink = blend(ink, inks.paper, HELD_SHARE)
    pen = QPen(ink, stroke.width * (0.7 if held else 1.0))
    pen.setCapStyle(Qt.PenCapStyle.FlatCap if stroke.dash else Qt.PenCapStyle.SquareCap)
    if stroke.dash:
        pen.setDashPattern(list(stroke.dash))
    return pen


def _ink(name: str, inks: Inks) -> QColor:
    colour: QColor = getattr(inks, name)
    return colour


def _font(px: int, *, strong: bool = False) -> QFont:
    return font(px, strong=strong)
