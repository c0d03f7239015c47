"""What every sheet carries: the title block above, conventions and cautions below, and where a sheet begins and ends."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import date

from app.cautions import CAUTION_LINE, CONVENTION_LINE
from app.words import THIN, number
from engine.project import Header

from . import faces
from .page import BODY, HAIR, HEAVY, LARGE, SMALL, TITLE, Item, Line, Page, Paper, Text

_LEADING = 10.0  # between lines of small type
_HEAD = 66.0  # height of the title block, in points
_GAP = 10.0  # between the body and what stands above and below it


@dataclass(frozen=True)
class Stamp:
    """What the title block says of the file a sheet was made from."""

    header: Header
    digest: str
    day: date


def body_area(paper: Paper) -> tuple[float, float, float, float]:
    """What a sheet has for itself: left, top, width, height in points."""
    left, top, width, height = paper.inside
    foot = _LEADING * len(_foot_lines(width)) + 2.0
    return left, top + _HEAD + _GAP, width, height - _HEAD - foot - 2.0 * _GAP


def framed(pages: Sequence[Page], stamp: Stamp) -> tuple[Page, ...]:
    """Every page in its frame, numbered page n of m."""
    return tuple(
        replace(
            page, items=(*_title_block(page, stamp, place + 1, len(pages)), *page.items, *_foot(page.paper))
        )
        for place, page in enumerate(pages)
    )


def _title_block(page: Page, stamp: Stamp, place: int, pages: int) -> list[Item]:
    left, top, width, _ = page.paper.inside
    right = left + width
    count = f"page {place} of {pages}"
    venue_room = width - faces.width(page.title, TITLE, True) - 24.0
    venue = faces.fitted(stamp.header.name, LARGE, venue_room, True)
    about = faces.fitted(page.about, BODY, width - 80.0)
    items: list[Item] = [
        Line(left, top, right, top, HEAVY),
        Text(left, top + 22.0, page.title, TITLE, True),
        Text(right, top + 20.0, venue, LARGE, True, "right"),
        Text(left, top + 37.0, about, BODY),
        Text(right, top + 37.0, count, BODY, False, "right"),
    ]
    return [
        *items,
        *_fields(stamp, left, top + 58.0, width),
        Line(left, top + _HEAD, right, top + _HEAD, HAIR),
    ]


def _fields(stamp: Stamp, left: float, baseline: float, width: float) -> list[Item]:
    """Status, revision, digest, date, author, temperature: a label and a word each, spread over the width."""
    header = stamp.header
    fields = (
        ("status", header.status),
        ("revision", str(header.revision)),
        ("digest", stamp.digest),
        ("date", stamp.day.isoformat()),
        ("by", header.author or "________________"),
        ("air", f"{number(header.temperature_k - 273.15, 0)}{THIN}°C"),
    )
    widths = [faces.width(f"{label} ", SMALL) + faces.width(value, BODY, True) for label, value in fields]
    gap = min(28.0, (width - sum(widths)) / (len(fields) - 1))
    items: list[Item] = []
    x = left
    for (label, value), wide in zip(fields, widths, strict=True):
        items.append(Text(x, baseline, label, SMALL))
        items.append(Text(x + faces.width(f"{label} ", SMALL), baseline, value, BODY, True))
        x += wide + gap
    return items


def _foot(paper: Paper) -> list[Item]:
    left, top, width, height = paper.inside
    lines = _foot_lines(width)
    first = top + height - _LEADING * (len(lines) - 1) - 2.0
    rule = first - _LEADING - 1.0
    texts = [Text(left, first + _LEADING * place, line, SMALL) for place, line in enumerate(lines)]
    return [Line(left, rule, left + width, rule, HAIR), *texts]


def _foot_lines(width: float) -> list[str]:
    return [*faces.wrapped(CONVENTION_LINE, SMALL, width), *faces.wrapped(CAUTION_LINE, SMALL, width)]
