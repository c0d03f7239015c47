"""Sheets gathered into one book: which there are, which are wanted, framed and numbered through."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from pathlib import Path
from types import MappingProxyType

from engine.outcome import Outcome
from engine.store import digest

from . import findings, levels, nodes, settings
from .frame import Stamp, framed
from .page import Page, Paper
from .paint import Progress, write_pdf

Maker = Callable[[Outcome, Paper], list[Page]]

#: Every sheet by the name it is asked for, in the order of the book.
SHEETS: Mapping[str, Maker] = MappingProxyType(
    {
        "diagram": levels.pages,
        "settings": lambda outcome, paper: settings.signal_order_pages(outcome.project, paper),
        "racks": lambda outcome, paper: settings.rack_order_pages(outcome.project, paper),
        "levels": nodes.pages,
        "findings": findings.pages,
    }
)


@dataclass(frozen=True)
class Book:
    """Pages ready to be painted, and what the document is called."""

    title: str
    pages: tuple[Page, ...]

    def write(self, target: Path, progress: Progress | None = None) -> None:
        """Write it as a vector PDF. Raises OSError where the file cannot be written."""
        write_pdf(target, self.pages, self.title, progress)


def make_book(
    outcome: Outcome, paper: Paper | None = None, only: Sequence[str] | None = None, day: date | None = None
) -> Book:
    """The book of a solved project: all sheets, or `only` those named, on `paper` (A4 upright), dated `day` (today).

    Raises ValueError for a sheet that is not kept. Needs a QGuiApplication, for the typeface.
    """
    paper = paper or Paper()
    header = outcome.project.header
    stamp = Stamp(header, digest(outcome.project), day or date.today())  # noqa: DTZ011 - the day on the wall
    pages = [page for name in chosen(only) for page in SHEETS[name](outcome, paper)]
    return Book(f"{header.name}, revision {header.revision}", framed(pages, stamp))


def chosen(only: Sequence[str] | None) -> list[str]:
    """The names wanted, in the book's order. Raises ValueError for one that is not kept."""
    if not only:
        return list(SHEETS)
    for name in only:
        if name not in SHEETS:
            raise ValueError(f"there is no sheet {name!r}: take {', '.join(SHEETS)}")
    return [name for name in SHEETS if name in only]
