"""`gainwright sheet FILE -o OUT.pdf`: the sheets as a vector PDF."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from pathlib import Path

from .arguments import Arguments, CommandError, command, output, read_outcome


@command
def run(argv: Sequence[str]) -> int:
    """Write the book of sheets; status 0, or 2 where something cannot be read or written."""
    from app.sheets.book import SHEETS, make_book
    from app.sheets.page import PAPERS, Paper

    from .painting import application

    arguments = Arguments("sheet", "Write the sheets for the crew as a vector PDF.")
    arguments.add_argument(
        "-o", "--output", metavar="OUT.pdf", type=Path, required=True, help="the PDF to write"
    )
    arguments.add_argument("--paper", choices=tuple(PAPERS), default="A4")
    arguments.add_argument("--landscape", action="store_true", help="lay the paper on its long side")
    arguments.add_argument(
        "--only", metavar="NAMES", help=f"some of the sheets, with commas between: {','.join(SHEETS)}"
    )
    given = arguments.parse_args(argv)
    names = (
        [name.strip() for name in given.only.split(",") if name.strip()] if given.only is not None else None
    )
    outcome = read_outcome(given.file)
    drawing_with = application()
    try:
        book = make_book(outcome, Paper(given.paper, given.landscape), names)
    except ValueError as reason:
        raise CommandError(str(reason)) from None
    output(given.output, lambda target: book.write(target, _progress if sys.stderr.isatty() else None))
    del drawing_with
    return 0


def _progress(done: int, pages: int) -> None:
    """Say how far it is, on a terminal only."""
    print(f"\rpage {done} of {pages}", end="\n" if done == pages else "", file=sys.stderr, flush=True)
