"""`gainwright diagram FILE -o OUT.png`: the level diagram of one path as PNG, SVG or PDF."""

from __future__ import annotations

import argparse
import re
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from .arguments import Arguments, CommandError, command, output, read_outcome

if TYPE_CHECKING:
    from engine.outcome import Outcome

USUAL_SIZE = (1400, 700)
LEAST_PX, MOST_PX = 320, 10_000
SCHEMES = ("light", "dark", "red", "print")


@command
def run(argv: Sequence[str]) -> int:
    """Write the diagram; status 0, or 2 where something cannot be read or written."""
    arguments = Arguments("diagram", "Write the level diagram of one path as PNG, SVG or PDF.")
    arguments.add_argument(
        "-o", "--output", metavar="OUT", type=Path, required=True, help="ends in .png, .svg or .pdf"
    )
    arguments.add_argument(
        "--path", metavar="STAGE", help="the path through this stage, by name or id; else the first one"
    )
    arguments.add_argument("--scheme", choices=SCHEMES, default="light")
    arguments.add_argument(
        "--size", metavar="WxH", type=size, default=USUAL_SIZE, help="in pixels, 1400x700 if not given"
    )
    given = arguments.parse_args(argv)

    from app.inks import DARK, LIGHT, PRINT, RED
    from app.picture_file import ending_of, write_picture

    from .painting import application

    try:
        ending_of(given.output)
    except ValueError as reason:
        raise CommandError(str(reason)) from None
    outcome = read_outcome(given.file)
    path = path_named(outcome, given.path)
    inks = dict(zip(SCHEMES, (LIGHT, DARK, RED, PRINT), strict=True))[given.scheme]
    drawing_with = application()
    output(given.output, lambda target: write_picture(target, outcome, path, given.size, inks))
    del drawing_with
    return 0


def size(text: str) -> tuple[int, int]:
    """A width and height as typed: "1400x700"."""
    found = re.fullmatch(r"(\d+)\s*[x×X]\s*(\d+)", text.strip())
    if not found:
        raise argparse.ArgumentTypeError(
            f"{text!r} is no size: give width and height in pixels, such as 1400x700"
        )
    wide, high = int(found[1]), int(found[2])
    if not (LEAST_PX <= wide <= MOST_PX and LEAST_PX <= high <= MOST_PX):
        raise argparse.ArgumentTypeError(
            f"{text!r} is no size for a diagram: from {LEAST_PX} to {MOST_PX} pixels each way"
        )
    return wide, high


def path_named(outcome: Outcome, stage: str | None) -> Sequence[str]:
    """The path through a stage by its id or name; the first one where none is asked for. Raises `CommandError`."""
    stages = outcome.project.stages
    if not stages:
        raise CommandError("the project is empty: there is no path to draw")
    if stage is None:
        seats = [seat.stage for seat in outcome.seats]
        ends = [path for path in outcome.paths() if path[-1] in seats] or list(outcome.paths())
        return ends[0] if ends else outcome.path_through(stages[0].id)
    found = [each.id for each in stages if each.id == stage] or [
        each.id for each in stages if each.name.casefold() == stage.casefold()
    ]
    if not found:
        raise CommandError(
            f"there is no stage {stage!r}: the stages are {', '.join(each.name for each in stages)}"
        )
    return outcome.path_through(found[0])
