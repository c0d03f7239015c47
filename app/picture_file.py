"""A path's level diagram into a file: PNG, SVG or PDF by the file's ending. QtGui only; QtSvg where it is asked for."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from pathlib import Path

from PySide6.QtCore import QBuffer, QIODevice, QMarginsF, QPointF, QRect, QRectF, QSize, QSizeF
from PySide6.QtGui import QImage, QPageSize, QPaintDevice, QPainter, QPdfWriter

from app.diagram.geometry import Look
from app.diagram.metrics import text_width
from app.inks import Inks, font
from app.picture import Picture
from engine.outcome import Outcome

ENDINGS = (".png", ".svg", ".pdf")
EDGE_PX = 16.0
TITLE_PX = 30.0
_PDF_DOTS_PER_INCH = 1200


def write_picture(
    target: Path,
    outcome: Outcome,
    path: Sequence[str],
    size: tuple[int, int],
    inks: Inks,
    look: Look | None = None,
) -> None:
    """Write the diagram of one path, `size` px (in SVG and PDF 96 px an inch), under a line that names it.

    Raises ValueError for another ending, OSError where the file cannot be written. Needs a QGuiApplication.
    """
    header, stages = outcome.project.header, outcome.project.stage
    title = f"{header.name}, revision {header.revision}"
    about = f"{stages[path[0]].name} to {stages[path[-1]].name}"
    width, height = size
    picture = Picture(outcome, path, width - 2.0 * EDGE_PX, height - 2.0 * EDGE_PX - TITLE_PX, look)

    def draw(painter: QPainter) -> None:
        painter.fillRect(QRectF(0.0, 0.0, width, height), inks.paper)
        painter.translate(EDGE_PX, EDGE_PX)
        painter.setPen(inks.ink)
        painter.setFont(font(14, strong=True))
        painter.drawText(QPointF(0.0, 14.0), title)
        painter.setFont(font(11))
        painter.setPen(inks.muted)
        painter.drawText(QPointF(width - 2.0 * EDGE_PX - text_width(about, False), 14.0), about)
        painter.translate(0.0, TITLE_PX)
        picture.paint(painter, inks)

    target.write_bytes(_MAKERS[ending_of(target)](size, title, draw))


def ending_of(target: Path) -> str:
    """The file's ending. Raises ValueError for one that cannot be written."""
    ending = target.suffix.lower()
    if ending not in ENDINGS:
        raise ValueError(f"{target.name} has to end in {', '.join(ENDINGS[:-1])} or {ENDINGS[-1]}")
    return ending


Draw = Callable[[QPainter], None]


def _png(size: tuple[int, int], title: str, draw: Draw) -> bytes:
    image = QImage(QSize(*size), QImage.Format.Format_RGB32)
    image.setText("Title", title)
    _on(image, draw)
    made = _buffer()
    image.save(made, "PNG")  # type: ignore[call-overload]
    return bytes(made.data().data())


def _svg(size: tuple[int, int], title: str, draw: Draw) -> bytes:
    from PySide6.QtSvg import QSvgGenerator

    made = _buffer()
    generator = QSvgGenerator()
    generator.setOutputDevice(made)
    generator.setResolution(96)
    generator.setSize(QSize(*size))
    generator.setViewBox(QRect(0, 0, *size))
    generator.setTitle(title)
    _on(generator, draw)
    return bytes(made.data().data())


def _pdf(size: tuple[int, int], title: str, draw: Draw) -> bytes:
    made = _buffer()
    writer = QPdfWriter(made)
    writer.setTitle(title)
    writer.setCreator("Gainwright")
    writer.setResolution(_PDF_DOTS_PER_INCH)
    inches = QSizeF(size[0] / 96.0, size[1] / 96.0)
    writer.setPageSize(QPageSize(inches, QPageSize.Unit.Inch, "", QPageSize.SizeMatchPolicy.ExactMatch))
    writer.setPageMargins(QMarginsF(0.0, 0.0, 0.0, 0.0))

    def scaled(painter: QPainter) -> None:
        painter.scale(_PDF_DOTS_PER_INCH / 96.0, _PDF_DOTS_PER_INCH / 96.0)
        draw(painter)

    _on(writer, scaled)
    return bytes(made.data().data())


def _buffer() -> QBuffer:
    made = QBuffer()
    made.open(QIODevice.OpenModeFlag.WriteOnly)
    return made


def _on(device: QPaintDevice, draw: Draw) -> None:
    painter = QPainter(device)
    try:
        draw(painter)
    finally:
        painter.end()


_MAKERS = {".png": _png, ".svg": _svg, ".pdf": _pdf}
