"""The level diagram sheet: one path on a page, its diagram, the numbers that matter, and a table of its nodes."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtGui import QPainter

from app import tabular, words
from app.inks import PRINT
from app.picture import Picture, tightest
from engine.outcome import Outcome

from . import faces
from .flow import Block, pour, stacked
from .frame import body_area
from .nodes import node_grid, node_rows
from .page import BODY, Drawing, Page, Paper, Text

POINTS_PER_PX = 8.0 / 11.0  # the diagram's labels, 11 px on screen, are 8 points on paper
_LEAST_HEIGHT = 250.0  # of the picture, below which the table goes to the next page
_MOST_RATIO = 0.72  # height over width
_LEADING = 13.5


def pages(outcome: Outcome, paper: Paper) -> list[Page]:
    """One path per page: to every seat, feed and other end, in signal order."""
    return [page for path in outcome.paths() for page in path_pages(outcome, path, paper)]


def path_pages(outcome: Outcome, path: Sequence[str], paper: Paper) -> list[Page]:
    """The diagram of one path with its table; the table goes over to a second page where it would crowd the diagram."""
    area = body_area(paper)
    _, _, width, height = area
    grid = node_grid(width)
    rows = [Block(8.0), grid.head(), *node_rows(outcome, outcome.trace(path), grid)]
    summary = _summary(outcome, path, width)
    beside = height - summary.height - sum(row.height for row in rows)
    room = beside if beside >= _LEAST_HEIGHT else height - summary.height
    picture = _picture(outcome, path, width, min(room - 6.0, width * _MOST_RATIO))
    blocks = (
        [picture, summary, stacked(rows[:2]), *rows[2:]] if room == beside else [stacked([picture, summary])]
    )
    placed = pour(blocks, Block(0.0), area)
    if room != beside:
        placed += pour(rows[2:], grid.head(), area)
    stages = outcome.project.stage
    about = f"Path: {stages[path[0]].name} to {stages[path[-1]].name}"
    return [Page(paper, "Level diagram", about, tuple(items)) for items in placed]


def make_picture(outcome: Outcome, path: Sequence[str], width: float, height: float) -> Picture:
    """The path's picture for a rectangle in points."""
    return Picture(outcome, path, width / POINTS_PER_PX, height / POINTS_PER_PX)


def _picture(outcome: Outcome, path: Sequence[str], width: float, height: float) -> Block:
    picture = make_picture(outcome, path, width, height)

    def paint(painter: QPainter) -> None:
        painter.scale(POINTS_PER_PX, POINTS_PER_PX)
        picture.paint(painter, PRINT)

    return Block(height + 6.0, (Drawing(0.0, 0.0, width, height, paint),))


def _summary(outcome: Outcome, path: Sequence[str], width: float) -> Block:
    """What it starts from, where it clips first, and what comes out, in a few lines."""
    lines = [line for text in _sentences(outcome, path) for line in faces.wrapped(text, BODY, width)]
    items = tuple(Text(0.0, BODY + 2.0 + _LEADING * at, line) for at, line in enumerate(lines))
    return Block(_LEADING * len(lines) + 4.0, items)


def _sentences(outcome: Outcome, path: Sequence[str]) -> list[str]:
    trace = outcome.trace(path)
    found = []
    first = trace[0]
    if first.level is not None and first.peak is not None:
        crest = words.margin(first.peak - first.level + 3.0103)
        found.append(
            f"{first.name}: {words.level(first.level, first.unit)}, crest factor {crest}. All sources are taken to rise together."
        )
    node = tightest(outcome, path)
    if node is not None:
        found.append(
            f"Narrowest on this path: {words.margin(node.peak_margin)} of peak margin and {words.margin(node.headroom)} of headroom "
            f"at {tabular.place(outcome.project, node)}; S/N there {words.margin(node.snr)}."
        )  # fmt: skip
    seat = next((seat for seat in outcome.seats if seat.stage == path[-1]), None)
    if seat is not None:
        said = f"{seat.name}: {words.level(seat.level, 'dB SPL')}"
        said += f", target {words.level(seat.target, 'dB SPL')}" if seat.target is not None else ""
        said += f"; hiss {words.level(seat.hiss_a, 'dB(A)')}"
        if seat.ambient is not None and seat.hiss_margin is not None:
            side = "under" if seat.hiss_margin >= 0.0 else "over"
            said += f", {words.margin(abs(seat.hiss_margin))} {side} the room ({seat.ambient.name})"
        found.append(f"{said}.")
    count = len(outcome.assumptions.open)
    if count:
        figures = "figure leaves" if count == 1 else "figures leave"
        found.append(
            f"{count} {figures} something open: upright strokes show the range it makes; the findings name them."
        )
    return found
