"""Columns on paper: widths shared out over a page, heads, and cells of text."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from . import faces
from .flow import Block
from .page import BODY, HAIR, RULE, SMALL, Item, Line, Text

GAP = 8.0  # between columns, in points


@dataclass(frozen=True)
class Column:
    """A column: what stands over it, its least width in points, and its share of what is left over."""

    heading: str
    least: float
    grow: float = 0.0
    align: Literal["left", "right"] = "left"


@dataclass(frozen=True)
class Grid:
    """Columns laid out over a width."""

    columns: tuple[Column, ...]
    lefts: tuple[float, ...]
    widths: tuple[float, ...]

    @classmethod
    def over(cls, width: float, columns: Sequence[Column], gap: float = GAP) -> Grid:
        """The columns over `width` points: each has its least, and what is left over goes by `grow`."""
        spare = width - sum(column.least for column in columns) - gap * (len(columns) - 1)
        shares = sum(column.grow for column in columns) or 1.0
        widths = [column.least + spare * column.grow / shares for column in columns]
        lefts = [sum(widths[:place]) + gap * place for place in range(len(widths))]
        return cls(tuple(columns), tuple(lefts), tuple(widths))

    @property
    def width(self) -> float:
        return self.lefts[-1] + self.widths[-1]

    def head(self) -> Block:
        """The headings over a rule."""
        items: list[Item] = [
            self.cell(at, 9.0, column.heading, SMALL) for at, column in enumerate(self.columns)
        ]
        return Block(16.0, (*items, Line(0.0, 13.0, self.width, 13.0, RULE)))

    def cell(self, at: int, y: float, text: str, points: int = BODY, strong: bool = False) -> Text:
        """Text on the baseline `y` in column `at`, cut where it does not fit."""
        shown = faces.fitted(text, points, self.widths[at], strong)
        if self.columns[at].align == "right":
            return Text(self.lefts[at] + self.widths[at], y, shown, points, strong, "right")
        return Text(self.lefts[at], y, shown, points, strong)

    def row(self, texts: Sequence[str], *, points: int = BODY, first_strong: bool = True) -> Block:
        """A row of plain text, its first cell strong, broken into as many lines as its longest text needs."""
        leading = points + 3.0
        items: list[Item] = []
        most = 1
        for at, text in enumerate(texts):
            strong = first_strong and at == 0
            lines = faces.wrapped(text, points, self.widths[at], strong) or [""]
            items += [
                self.cell(at, 11.0 + leading * place, line, points, strong)
                for place, line in enumerate(lines)
            ]
            most = max(most, len(lines))
        height = 4.0 + leading * most + 1.0
        return Block(height, (*items, Line(0.0, height - 1.0, self.width, height - 1.0, HAIR)))


def heading(text: str, width: float, points: int, about: str = "") -> Block:
    """A heading inside a sheet, bound to what follows it."""
    items: list[Item] = [Text(0.0, points + 8.0, text, points, True)]
    if about:
        items.append(Text(width, points + 8.0, about, BODY, False, "right"))
    return Block(points + 16.0, tuple(items), keep=True)


def paragraph(text: str, width: float, *, title: str = "", points: int = BODY) -> Block:
    """Text over the whole width, a strong title above it."""
    leading = points + 3.5
    lines = faces.wrapped(text, points, width)
    first = leading if title else 0.0
    items: list[Item] = [Text(0.0, float(points), title, points, True)] if title else []
    items += [Text(0.0, first + points + leading * place, line, points) for place, line in enumerate(lines)]
    return Block(first + leading * len(lines) + 6.0, tuple(items))
