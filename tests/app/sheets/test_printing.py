"""The same pages through a printer and its preview."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pypdf
import pytest

from app.sheets.book import make_book
from app.sheets.page import Paper
from app.sheets.paint import page_layout
from app.sheets.printing import make_printer, paper_in, preview_dialog, print_dialog, print_sheets


@pytest.fixture
def printer(qapp, tmp_path):
    """A printer whose paper is a PDF file."""
    from PySide6.QtPrintSupport import QPrinter

    printer = make_printer(Paper("A4"))
    printer.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(tmp_path / "printed.pdf"))
    return printer


def test_a_printer_gets_the_pages_of_the_pdf(printer, theatre_outcome, tmp_path):
    count = print_sheets(printer, theatre_outcome, ["findings"])
    book = make_book(theatre_outcome, only=["findings"])
    book.write(tmp_path / "written.pdf")
    printed, written = pypdf.PdfReader(tmp_path / "printed.pdf"), pypdf.PdfReader(tmp_path / "written.pdf")
    assert count == len(printed.pages) == len(written.pages)
    for one, other in zip(printed.pages, written.pages, strict=True):
        assert one.extract_text().split() == other.extract_text().split()


def test_a_range_of_pages(printer, theatre_outcome, tmp_path):
    printer.setFromTo(2, 3)
    assert print_sheets(printer, theatre_outcome, ["settings"]) == 2
    text = " ".join(pypdf.PdfReader(tmp_path / "printed.pdf").pages[0].extract_text().split())
    assert "page 2 of" in text


@pytest.mark.parametrize("paper", [Paper("A4"), Paper("A4", True), Paper("A3"), Paper("Letter", True)])
def test_the_paper_in_the_printer_is_known(paper):
    assert paper_in(page_layout(paper)) == paper


def test_the_preview_paints_the_pages(printer, theatre_outcome, qtbot):
    dialog = preview_dialog(printer, theatre_outcome, ["findings"])
    qtbot.addWidget(dialog)
    asked: list[object] = []
    dialog.paintRequested.connect(asked.append)
    dialog.paintRequested.emit(printer)
    assert asked


def test_the_print_dialog_offers_a_range(printer, qtbot):
    from PySide6.QtPrintSupport import QAbstractPrintDialog

    dialog = print_dialog(printer)
    qtbot.addWidget(dialog)
    assert dialog.testOption(QAbstractPrintDialog.PrintDialogOption.PrintPageRange)


def test_sheets_need_neither_widgets_nor_print_support():
    code = (
        "import sys; import app.sheets.book, app.picture, app.picture_file, app.sheets.printing; "
        "print(sorted(m for m in sys.modules if m in ('PySide6.QtWidgets', 'PySide6.QtPrintSupport', 'pyqtgraph')))"
    )
    ran = subprocess.run(
        [sys.executable, "-c", code],
        cwd=Path(__file__).parents[3],
        capture_output=True,
        text=True,
        check=True,
    )
    assert ran.stdout.strip() == "[]"
