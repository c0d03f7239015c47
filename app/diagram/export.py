"""A path's level diagram as a picture of its own: PNG, SVG or PDF. QtGui only."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cache
from pathlib import Path

from PySide6.QtCore import QMarginsF, QPointF, QRect, QRectF, QSize, QSizeF, Qt
from PySide6.QtGui import QFontMetricsF, QImage, QPageSize, QPainter, QPdfWriter

from app.inks import LIGHT, PRINT, Inks, blend, font
from engine.outcome import Outcome

from .geometry import Geometry, Look, Request, build
from .paint import LABEL_PX, paint

HEAD_PX = 58.0
FORMATS = (".png", ".svg", ".pdf")


class ExportError(ValueError):
    """A diagram that cannot be written. Says why and what would do."""


@cache
def _metrics(*, strong: bool) -> QFontMetricsF:
    return QFontMetricsF(font(LABEL_PX, strong=strong))


def text_width(text: str, strong: bool) -> float:
    """The width of a label in the shipped face [px]."""
    return _metrics(strong=strong).horizontalAdvance(text)


@dataclass(frozen=True)
class EvenColumns:
    """Columns of a picture: the path's stages side by side, whatever stands between them on the grid."""

    left_px: float
    pitch_px: float

    def x_in(self, column: float) -> float:
        return self.left_px + self.pitch_px * (column + 0.1)

    def x_out(self, column: float) -> float:
        return self.left_px + self.pitch_px * (column + 0.9)


def picture(
    outcome: Outcome, path: Sequence[str], width: float, height: float, look: Look | None = None
) -> Geometry:
    """The geometry of a path's diagram for paper or a picture, its stages in equal columns."""
    left, right = 64.0, 76.0
    columns = EvenColumns(left, (width - left - right) / max(1, len(path)))
    seat = next((seat for seat in outcome.seats if path and seat.stage == path[-1]), None)
    narrowest = outcome.narrowest.stage if outcome.narrowest else None
    look = replace(look or Look(), narrowest=narrowest, every_label=True)
    return build(
        Request(
            trace=outcome.trace(path), column_of={stage: i for i, stage in enumerate(path)}, columns=columns,
            width=width, height=height, text_width=text_width, look=look, seat=seat, left_px=left, right_px=right,
        )
    )  # fmt: skip


def paint_picture(
    painter: QPainter,
    outcome: Outcome,
    path: Sequence[str],
    size: QSizeF,
    inks: Inks,
    look: Look | None = None,
) -> Geometry:
    """Stage names over their columns, then the diagram; returns its geometry, whose origin lies `HEAD_PX` down."""
    geometry = picture(outcome, path, size.width(), size.height() - HEAD_PX, look)
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.TextAntialiasing)
    _heads(painter, outcome, path, geometry, inks)
    painter.translate(0.0, HEAD_PX)
    paint(painter, geometry, inks)
    painter.restore()
    return geometry


def _heads(painter: QPainter, outcome: Outcome, path: Sequence[str], geometry: Geometry, inks: Inks) -> None:
    plot = geometry.plot
    pitch = (plot.right - plot.left) / max(1, len(path))
    metrics = QFontMetricsF(font(11, strong=True))
    for place, key in enumerate(path):
        box = QRectF(plot.left + place * pitch + 2.0, 4.0, pitch - 4.0, 34.0)
        name = outcome.project.stage[key].name
        painter.setFont(font(11, strong=True))
        painter.setPen(inks.ink)
        flags = int(Qt.AlignmentFlag.AlignHCenter | Qt.AlignmentFlag.AlignBottom) | int(
            Qt.TextFlag.TextWordWrap
        )
        fits = metrics.boundingRect(box, flags, name).height() <= box.height()
        painter.drawText(
            box, flags, name if fits else metrics.elidedText(name, Qt.TextElideMode.ElideRight, pitch * 1.6)
        )
    painter.setFont(font(11))
    painter.setPen(inks.muted)
    painter.drawText(QPointF(8.0, HEAD_PX - 6.0), geometry.left_title)
    if geometry.right_title:
        painter.drawText(QPointF(plot.right + 8.0, HEAD_PX - 6.0), geometry.right_title)
    painter.setPen(blend(inks.hairline, inks.paper, 0.9))


def write(
    outcome: Outcome, path: Sequence[str], target: Path, *, width: int = 1400, height: int = 700,
    inks: Inks | None = None, look: Look | None = None,
) -> None:  # fmt: skip
    """Write the diagram to `target`, in the format its name ends in. Raises ExportError for another, or where it cannot be written."""
    ending = target.suffix.lower()
    if ending not in FORMATS:
        raise ExportError(f"{target.name}: a diagram is written as {', '.join(FORMATS)}")
    size = QSizeF(width, height)
    if ending == ".png":
        _write_png(outcome, path, target, size, inks or LIGHT, look)
    elif ending == ".svg":
        _write_svg(outcome, path, target, size, inks or LIGHT, look)
    else:
        _write_pdf(outcome, path, target, size, inks or PRINT, look)


def _write_png(
    outcome: Outcome, path: Sequence[str], target: Path, size: QSizeF, inks: Inks, look: Look | None
) -> None:
    image = QImage(size.toSize() * 2, QImage.Format.Format_RGB32)
    image.setDevicePixelRatio(2.0)
    image.fill(inks.paper)
    painter = QPainter(image)
    try:
        paint_picture(painter, outcome, path, size, inks, look)
    finally:
        painter.end()
    if not image.save(str(target)):
        raise ExportError(f"{target} cannot be written: look at the folder and its permissions")


def _write_svg(
    outcome: Outcome, path: Sequence[str], target: Path, size: QSizeF, inks: Inks, look: Look | None
) -> None:
    from PySide6.QtSvg import QSvgGenerator

    generator = QSvgGenerator()
    generator.setFileName(str(target))
    generator.setSize(QSize(round(size.width()), round(size.height())))
    generator.setViewBox(QRect(0, 0, round(size.width()), round(size.height())))
    generator.setTitle(f"{outcome.project.header.name}: level diagram")
    painter = QPainter()
    if not painter.begin(generator):
        raise ExportError(f"{target} cannot be written: look at the folder and its permissions")
    try:
        painter.fillRect(QRectF(QPointF(0, 0), size), inks.paper)
        paint_picture(painter, outcome, path, size, inks, look)
    finally:
        painter.end()


def _write_pdf(
    outcome: Outcome, path: Sequence[str], target: Path, size: QSizeF, inks: Inks, look: Look | None
) -> None:
    writer = QPdfWriter(str(target))
    writer.setResolution(72)
    writer.setPageSize(QPageSize(size * 0.6, QPageSize.Unit.Point))
    writer.setPageMargins(QMarginsF(0, 0, 0, 0))
    writer.setTitle(f"{outcome.project.header.name}: level diagram")
    painter = QPainter()
    if not painter.begin(writer):
        raise ExportError(f"{target} cannot be written: look at the folder and its permissions")
    try:
        painter.scale(0.6, 0.6)
        paint_picture(painter, outcome, path, size, inks, look)
    finally:
        painter.end()
