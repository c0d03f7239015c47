"""Onto paper and into pictures: what the menus call, and what is told when it fails."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from pathlib import Path

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtWidgets import QDialog, QWidget

from .ask import Ask
from .diagram.geometry import Look
from .document import Document
from .files import why

PICTURES = ("PNG picture (*.png)", "SVG drawing (*.svg)", "PDF page (*.pdf)")
SHEETS = ("PDF (*.pdf)",)

PICTURE_PX = (1400, 700)


class Exports(QObject):
    """Sheets and diagram of a document. The sheets' code is loaded when first asked for."""

    noted = Signal(str)  # what was written, and where

    def __init__(self, document: Document, ask: Ask, window: QWidget) -> None:
        super().__init__(window)
        self._document, self._ask, self._window = document, ask, window
        self._printer: object = None

    def write_sheets(self, *_: object) -> bool:
        """Write the sheets as a PDF where the person says."""
        from .sheets.book import make_book

        path = self._ask.save_path("Save the sheets", self._suggested(" sheets.pdf"), SHEETS)
        if path is None:
            return False
        return self._write(path, lambda target: make_book(self._document.outcome).write(target))

    def write_diagram(self, path_shown: Sequence[str], look: Look) -> bool:
        """Write the level diagram that is shown as a picture where the person says."""
        from .inks import LIGHT
        from .picture_file import write_picture

        path = self._ask.save_path("Save the level diagram", self._suggested(" levels.png"), PICTURES)
        if path is None:
            return False
        return self._write(
            path,
            lambda target: write_picture(target, self._document.outcome, path_shown, PICTURE_PX, LIGHT, look),
        )

    def print_sheets(self, *_: object) -> None:
        """The system's print dialog, then the sheets."""
        from .sheets import printing

        self._document.flush()
        printer = printing.make_printer()
        dialog = printing.print_dialog(printer, self._window)
        dialog.accepted.connect(lambda: self._print(printer))
        self._show(dialog, printer)

    def preview_sheets(self, *_: object) -> None:
        """The sheets as they will be printed."""
        from .sheets import printing

        self._document.flush()
        printer = printing.make_printer()
        self._show(printing.preview_dialog(printer, self._document.outcome, None, self._window), printer)

    def _show(self, dialog: QDialog, printer: object) -> None:
        """Over the window, without a loop of its own. The dialog does not keep its printer alive: we do."""
        self._printer = printer
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.setWindowModality(Qt.WindowModality.WindowModal)
        dialog.show()

    def _print(self, printer: object) -> None:
        from PySide6.QtPrintSupport import QPrinter

        from .sheets import printing

        assert isinstance(printer, QPrinter)
        try:
            pages = printing.print_sheets(printer, self._document.outcome)
        except OSError as reason:
            self._ask.tell("Nothing was printed", f"The printer does not begin: {reason}.")
            return
        self.noted.emit(f"{pages} pages sent to {printer.printerName() or 'the file'}.")

    def _suggested(self, ending: str) -> Path:
        path = self._document.path
        if path is not None:
            return path.with_name(f"{path.stem}{ending}")
        name = self._document.project.header.name.replace("/", "-").replace("\\", "-")
        return Path.home() / f"{name}{ending}"

    def _write(self, path: Path, write: Callable[[Path], object]) -> bool:
        self._document.flush()
        try:
            write(path)
        except OSError as reason:
            self._ask.tell(f"{path.name} was not written", why(reason))
        except ValueError as reason:
            self._ask.tell(f"{path.name} was not written", f"{reason}.")
        else:
            self.noted.emit(f"Written: {path}")
            return True
        return False
