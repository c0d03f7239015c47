"""The sheets on a printer: the system's dialog, a preview, and the same pages as in the PDF.

QtPrintSupport is imported when first asked for.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from PySide6.QtGui import QPageLayout, QPageSize

from engine.outcome import Outcome

from .book import Book, make_book
from .page import PAPERS, POINTS_PER_MM, Page, Paper
from .paint import draw_pages, page_layout

if TYPE_CHECKING:
    from PySide6.QtPrintSupport import QPrintDialog, QPrinter, QPrintPreviewDialog
    from PySide6.QtWidgets import QWidget


def make_printer(paper: Paper | None = None) -> QPrinter:
    """The system's usual printer with our paper in it; the margins are in the pages."""
    from PySide6.QtPrintSupport import QPrinter

    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setFullPage(True)
    printer.setPageLayout(page_layout(paper or Paper()))
    printer.setCreator("Gainwright")
    return printer


def print_dialog(printer: QPrinter, parent: QWidget | None = None) -> QPrintDialog:
    """The system's print dialog, with page ranges. Where it is accepted, `print_sheets` prints what it chose."""
    from PySide6.QtPrintSupport import QAbstractPrintDialog, QPrintDialog

    dialog = QPrintDialog(printer, parent)
    dialog.setOption(QAbstractPrintDialog.PrintDialogOption.PrintPageRange, True)
    dialog.setWindowTitle("Print the sheets")
    return dialog


def preview_dialog(
    printer: QPrinter, outcome: Outcome, only: Sequence[str] | None = None, parent: QWidget | None = None
) -> QPrintPreviewDialog:
    """A preview of the pages as the printer will get them; its own button prints them."""
    from PySide6.QtPrintSupport import QPrintPreviewDialog

    dialog = QPrintPreviewDialog(printer, parent)
    dialog.setWindowTitle("Preview of the sheets")
    dialog.paintRequested.connect(lambda asked: print_sheets(asked, outcome, only))
    return dialog


def print_sheets(printer: QPrinter, outcome: Outcome, only: Sequence[str] | None = None) -> int:
    """Lay the sheets out for the printer's paper and print the range it was set to; says how many pages.

    Raises OSError where the printer does not begin.
    """
    printer.setFullPage(True)
    book = make_book(outcome, paper_in(printer.pageLayout()), only)
    printer.setDocName(book.title)
    pages = _wanted(printer, book)
    draw_pages(printer, pages)
    return len(pages)


def _wanted(printer: QPrinter, book: Book) -> Sequence[Page]:
    """The pages from and to which the dialog asked for; 0 is all."""
    first, last = printer.fromPage(), printer.toPage()
    return book.pages[max(first - 1, 0) : last or None]


def paper_in(layout: QPageLayout) -> Paper:
    """The one of our papers that comes nearest to the one in the printer, and which way round it lies."""
    lying = layout.orientation() == QPageLayout.Orientation.Landscape
    size = layout.pageSize().size(QPageSize.Unit.Point)
    upright = sorted((size.width(), size.height()))

    def off(name: str) -> float:
        return sum(abs(have - POINTS_PER_MM * want) for have, want in zip(upright, PAPERS[name], strict=True))

    return Paper(min(PAPERS, key=off), lying)
