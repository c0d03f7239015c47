"""Pages onto paper: the same few strokes for a PDF file, a printer and its preview."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path

from PySide6.QtCore import QBuffer, QIODevice, QMarginsF, QPointF, QRectF, Qt
from PySide6.QtGui import QPagedPaintDevice, QPageLayout, QPageSize, QPainter, QPdfWriter, QPen

from . import faces
from .page import Box, Drawing, Line, Page, Paper, Text

_SIZES = {"A4": QPageSize.PageSizeId.A4, "A3": QPageSize.PageSizeId.A3, "Letter": QPageSize.PageSizeId.Letter}
_DOTS_PER_INCH = 1200

Progress = Callable[[int, int], None]


def page_layout(paper: Paper) -> QPageLayout:
    """Qt's layout for a paper; the margins are in the page itself."""
    way = QPageLayout.Orientation.Landscape if paper.landscape else QPageLayout.Orientation.Portrait
    return QPageLayout(QPageSize(_SIZES[paper.name]), way, QMarginsF(0.0, 0.0, 0.0, 0.0))


def write_pdf(target: Path, pages: Sequence[Page], title: str, progress: Progress | None = None) -> None:
    """Write the pages as a vector PDF, in one piece when all are drawn. Raises OSError where that cannot be."""
    drawn = QBuffer()
    drawn.open(QIODevice.OpenModeFlag.WriteOnly)
    writer = QPdfWriter(drawn)
    writer.setTitle(title)
    writer.setCreator("Gainwright")
    writer.setResolution(_DOTS_PER_INCH)
    if pages:
        writer.setPageLayout(page_layout(pages[0].paper))
    draw_pages(writer, pages, progress)
    target.write_bytes(drawn.data().data())


def draw_pages(device: QPagedPaintDevice, pages: Sequence[Page], progress: Progress | None = None) -> None:
    """Draw the pages one after the other, each on its own paper. Raises OSError where the device does not begin.

    A printer keeps the paper chosen in its dialog: a page that is larger is made smaller to fit.
    """
    with _begun(device) as painter:
        for place, page in enumerate(pages):
            if place and not device.newPage():
                raise OSError("the next page could not be started")
            wide, high = page.paper.size
            across, down = device.width() / wide, device.height() / high
            painter.save()
            painter.scale(min(across, down), min(across, down))
            paint_page(painter, page)
            painter.restore()
            if progress:
                progress(place + 1, len(pages))


@contextmanager
def _begun(device: QPagedPaintDevice) -> Iterator[QPainter]:
    painter = QPainter()
    if not painter.begin(device):
        raise OSError("the printer or file does not begin: is it ready, and not open elsewhere?")
    try:
        yield painter
    finally:
        painter.end()


def paint_page(painter: QPainter, page: Page) -> None:
    """Paint one page; one unit of the painter is a point."""
    for item in page.items:
        if isinstance(item, Text):
            _text(painter, item)
        elif isinstance(item, Line):
            painter.setPen(_pen(item.thick))
            painter.drawLine(QPointF(item.x1, item.y1), QPointF(item.x2, item.y2))
        elif isinstance(item, Box):
            painter.setPen(_pen(item.thick))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRect(QRectF(item.x, item.y, item.width, item.height))
        elif isinstance(item, Drawing):
            painter.save()
            painter.translate(item.x, item.y)
            item.paint(painter)
            painter.restore()


def _text(painter: QPainter, item: Text) -> None:
    painter.setPen(Qt.GlobalColor.black)
    painter.setFont(faces.font(item.points, item.strong))
    wide = faces.width(item.text, item.points, item.strong)
    back = {"left": 0.0, "right": wide, "middle": 0.5 * wide}[item.align]
    painter.drawText(QPointF(item.x - back, item.y), item.text)


def _pen(thick: float) -> QPen:
    pen = QPen(Qt.GlobalColor.black, thick)
    pen.setCapStyle(Qt.PenCapStyle.FlatCap)
    pen.setJoinStyle(Qt.PenJoinStyle.MiterJoin)
    return pen
