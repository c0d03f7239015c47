"""Findings and cautions: what was noticed and how to mend it, what the seats get, and what may hurt someone."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from app import tabular
from app.cautions import CAUTIONS
from engine.findings import Finding
from engine.outcome import Outcome

from . import faces
from .flow import Block, column_width, columns_in, pour, stacked
from .frame import body_area
from .grid import Column, Grid, heading, paragraph
from .page import BODY, HAIR, LARGE, SMALL, Box, Line, Page, Paper, Text

_BOX_WIDTH = 20.0
_TEXT_LEFT = 60.0
_MANY = 6  # findings alike above which they are set small
_SEATS = (
    Column("seat", 84.0, 2.0),
    Column("dB SPL", 34.0, align="right"),
    Column("dB(A)", 30.0, align="right"),
    Column("peak", 30.0, align="right"),
    Column("target", 30.0, align="right"),
    Column("off target", 40.0, align="right"),
    Column("hiss dB(A)", 42.0, align="right"),
    Column("under room", 46.0, align="right"),
    Column("who owns the hiss", 110.0, 3.0),
)
_LOUDSPEAKERS = (
    Column("loudspeaker", 110.0, 2.0),
    Column("average", 60.0, 0.5, "right"),
    Column("peak", 60.0, 0.5, "right"),
    Column("left to continuous", 78.0, 0.5, "right"),
    Column("left to peak", 78.0, 0.5, "right"),
)


def pages(outcome: Outcome, paper: Paper) -> list[Page]:
    """Findings first, then seats and loudspeakers, then the cautions in full."""
    area = body_area(paper)
    found = outcome.findings
    counts = ", ".join(
        f"{sum(each.severity == severity for each in found)} {severity}"
        for severity in ("stop", "mend", "note")
    )
    width = column_width(area[2])
    blocks = [
        *_findings(outcome, width),
        *_seats(outcome, width),
        *_loudspeakers(outcome, width),
        _cautions(width),
    ]
    return [
        Page(paper, "Findings and cautions", f"What was noticed: {counts}", tuple(items))
        for items in pour(blocks, Block(0.0), area, columns_in(area[2]))
    ]


def _findings(outcome: Outcome, width: float) -> Iterator[Block]:
    yield heading("Findings", width, LARGE)
    if not outcome.findings:
        yield paragraph("Nothing to mend.", width)
    for group in tabular.grouped(outcome.findings):
        yield from _group(group, width)


def _group(group: Sequence[Finding], width: float) -> list[Block]:
    """The severity as a word, what was noticed, how to mend it; a box to tick unless it is only a note.

    A large group is set small, and may break over pages.
    """
    severity, mend = group[0].severity, group[0].mend
    points = SMALL if len(group) > _MANY else BODY
    leading = points + 3.5
    room = width - _TEXT_LEFT
    parts: list[Block] = []
    for finding in group:
        lines = faces.wrapped(finding.message, points, room, points == BODY)
        texts = [
            Text(_TEXT_LEFT, points + leading * at, line, points, points == BODY)
            for at, line in enumerate(lines)
        ]
        box = [] if severity == "note" else [Box(1.0, 0.5, 10.0, 10.0)]
        parts.append(Block(leading * len(lines), (*box, *texts)))
    first = Text(_BOX_WIDTH, float(BODY), severity, BODY, severity == "stop")
    parts[0] = Block(parts[0].height, (first, *parts[0].items))
    advice = faces.wrapped(mend, BODY, room)
    texts = [Text(_TEXT_LEFT, BODY + (BODY + 3.5) * at, line) for at, line in enumerate(advice)]
    end = (BODY + 3.5) * len(advice) + 4.0
    parts.append(Block(end, (*texts, Line(0.0, end - 1.0, width, end - 1.0, HAIR))))
    parts = [Block(4.0, keep=True), *parts]
    return parts if len(group) > _MANY else [stacked(parts)]


def _seats(outcome: Outcome, width: float) -> Iterator[Block]:
    if outcome.seats:
        yield from _table("Seats", Grid.over(width, _SEATS), tabular.seat_table(outcome)[1:])


def _loudspeakers(outcome: Outcome, width: float) -> Iterator[Block]:
    if outcome.loudspeakers:
        yield from _table(
            "Loudspeakers", Grid.over(width, _LOUDSPEAKERS), tabular.loudspeaker_table(outcome)[1:]
        )


def _table(title: str, grid: Grid, rows: list[list[str]]) -> Iterator[Block]:
    """A titled table; the title and the headings keep with the first row."""
    yield heading(title, grid.width, LARGE)
    head = grid.head()
    yield Block(head.height, head.items, keep=True)
    yield from (grid.row(row) for row in rows)


def _cautions(width: float) -> Block:
    """All cautions together, on one page where the paper allows it."""
    parts = [heading("Cautions", width, LARGE)]
    parts += [paragraph(caution.text, width, title=caution.about) for caution in CAUTIONS]
    whole = stacked(parts)
    return Block(whole.height, whole.items, parts=tuple(parts))
