"""Findings and cautions: what was noticed and how to mend it, what the seats get, and what may hurt someone."""

from __future__ import annotations

from collections.abc import Iterator

from app import tabular
from app.cautions import CAUTIONS
from engine.findings import Finding
from engine.outcome import Outcome

from . import faces
from .flow import Block, pour
from .frame import body_area
from .grid import Column, Grid, heading, paragraph
from .page import BODY, HAIR, LARGE, Box, Item, Line, Page, Paper, Text

_SEVERITY_WIDTH = 40.0
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
        f"{sum(each.severity == severity for each in found)} {severity}" for severity in ("stop", "mend", "note")
    )
    blocks = [*_findings(outcome, area[2]), *_seats(outcome, area[2]), *_loudspeakers(outcome, area[2]), *_cautions(area[2])]
    return [
        Page(paper, "Findings and cautions", f"What was noticed: {counts}", tuple(items))
        for items in pour(blocks, Block(0.0), area)
    ]


def _findings(outcome: Outcome, width: float) -> Iterator[Block]:
    yield heading("Findings", width, LARGE)
    if not outcome.findings:
        yield paragraph("Nothing to mend.", width)
    yield from (_finding(each, width) for each in outcome.findings)


def _finding(finding: Finding, width: float) -> Block:
    """A box to tick, the severity as a word, what was noticed, and how to mend it."""
    left = 20.0 + _SEVERITY_WIDTH
    leading = BODY + 3.5
    message = faces.wrapped(finding.message, BODY, width - left, True)
    mend = faces.wrapped(finding.mend, BODY, width - left)
    items: list[Item] = [Box(1.0, 4.0, 11.0, 11.0), Text(20.0, 13.0, finding.severity, BODY, finding.severity == "stop")]
    items += [
        Text(left, 13.0 + leading * place, line, BODY, place < len(message))
        for place, line in enumerate((*message, *mend))
    ]
    height = 9.0 + leading * (len(message) + len(mend))
    return Block(height, (*items, Line(0.0, height - 1.0, width, height - 1.0, HAIR)))


def _seats(outcome: Outcome, width: float) -> Iterator[Block]:
    if outcome.seats:
        yield from _table("Seats", Grid.over(width, _SEATS), tabular.seat_table(outcome)[1:])


def _loudspeakers(outcome: Outcome, width: float) -> Iterator[Block]:
    if outcome.loudspeakers:
        yield from _table("Loudspeakers", Grid.over(width, _LOUDSPEAKERS), tabular.loudspeaker_table(outcome)[1:])


def _table(title: str, grid: Grid, rows: list[list[str]]) -> Iterator[Block]:
    """A titled table; the title and the headings keep with the first row."""
    yield heading(title, grid.width, LARGE)
    head = grid.head()
    yield Block(head.height, head.items, keep=True)
    yield from (grid.row(row) for row in rows)


def _cautions(width: float) -> Iterator[Block]:
    yield heading("Cautions", width, LARGE)
    yield from (paragraph(caution.text, width, title=caution.about) for caution in CAUTIONS)
