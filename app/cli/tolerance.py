"""`gainwright tolerance FILE`: what the tolerances of the figures leave of headroom, level and hiss."""

from __future__ import annotations

import sys
from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

from app import tabular, words

from .arguments import Arguments, CommandError, command, read_outcome

if TYPE_CHECKING:
    from engine.outcome import Outcome
    from engine.tolerance import Band, Tolerance

_MORE = """\
Each figure with a tolerance or a typed band is drawn at random within it, and the project solved for every draw. The bands
are the 5th and 95th percentile. The same seed gives the same bands.
"""
AIMS = {
    "headroom": "Smallest peak margin",
    "level": "Level at the reference seat",
    "hiss": "Hiss at the nearest seat",
}


@command
def run(argv: Sequence[str]) -> int:
    """Print the bands; status 0, or 2 where the file cannot be read."""
    from engine.tolerance import spread

    arguments = Arguments(
        "tolerance", "Print what the figures' tolerances leave of headroom, level and hiss.", _MORE
    )
    arguments.add_argument(
        "--draws", metavar="N", type=int, default=10_000, help="how many draws, 10 000 unless told"
    )
    arguments.add_argument("--seed", metavar="N", type=int, default=1, help="where the random draws begin")
    given = arguments.parse_args(argv)
    if not 1 <= given.draws <= 1_000_000:
        raise CommandError(f"--draws {given.draws}: give a number from 1 to 1000000")
    outcome = read_outcome(given.file)
    found = spread(outcome, given.draws, given.seed, _progress if sys.stderr.isatty() else None)
    sys.stdout.write("\n".join(_text(outcome, found)) + "\n")
    sys.stdout.flush()
    return 0


def _progress(done: float) -> None:
    print(f"\r{done * 100:.0f} %", end="\n" if done >= 1.0 else "", file=sys.stderr, flush=True)


def _text(outcome: Outcome, found: Tolerance) -> Iterator[str]:
    if not found.drawn:
        yield "No figure has a tolerance or a band: type one beside a figure, such as ±1 dB or 5 %."
        return
    yield f"{found.draws} draws of {len(found.drawn)} figures, seed {found.seed}: 5th to 95th percentile."
    yield ""
    rows = [["node", "unit", "headroom from", "to", "level from", "to", "noise from", "to"]]
    for node, band in zip(outcome.nodes, found.nodes, strict=True):
        cells = [*_ends(band.headroom), *_ends(band.level), *_ends(band.noise)]
        rows.append([tabular.place(outcome.project, node), band.unit, *cells])
    yield tabular.aligned(rows, left=2)
    if found.seats:
        yield ""
        seats = [["seat", "dB SPL from", "to", "hiss from", "to"]]
        seats += [[seat.name, *_ends(seat.level), *_ends(seat.hiss)] for seat in found.seats]
        yield tabular.aligned(seats)
    for aim, each in found.influences.items():
        first = next(iter(each), None)
        if first is not None and first.shrinks_db > 0.0:
            owner, label = first.drawn.owner, first.drawn.label.lower()
            yield ""
            yield (
                f"{AIMS[aim]}: a band of {words.margin(first.width_db)}. Measuring {label} of {owner} would shrink it by "
                f"{words.margin(first.shrinks_db)}."
            )


def _ends(band: Band | None) -> list[str]:
    return [
        words.number(None if band is None else band.low),
        words.number(None if band is None else band.high),
    ]
