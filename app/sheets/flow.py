"""Blocks of a sheet poured into pages: heads repeat, and a block stays whole unless it is taller than a page."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from .page import Item, moved

LEAST_COLUMN = 515.0  # of text and tables, in points: an upright A4 sheet holds one
GUTTER = 26.0

Area = tuple[float, float, float, float]


@dataclass(frozen=True)
class Block:
    """Something that stays together; items are placed from its own top left corner.

    `parts` are where it may break if it is taller than a whole page; `again` is repeated above what follows a break.
    `keep` binds it to the block after it, as a heading is bound to its first line.
    """

    height: float
    items: tuple[Item, ...] = ()
    parts: tuple[Block, ...] = ()
    again: Block | None = None
    keep: bool = False


def stacked(blocks: Iterable[Block]) -> Block:
    """Several blocks as one, each under the one before."""
    items: list[Item] = []
    y = 0.0
    for block in blocks:
        items += moved(block.items, 0.0, y)
        y += block.height
    return Block(y, tuple(items))


def columns_in(width: float) -> int:
    """How many columns of text a width takes: a line that runs over a whole wide page is hard to follow."""
    return max(1, int((width + GUTTER) / (LEAST_COLUMN + GUTTER)))


def column_width(width: float) -> float:
    """The width of each of those columns, in points."""
    count = columns_in(width)
    return (width - GUTTER * (count - 1)) / count


def pour(blocks: Iterable[Block], head: Block, area: Area, columns: int = 1) -> list[list[Item]]:
    """The blocks as items of one page after another, column by column, each beginning with the head.

    At least one page.
    """
    left, top, width, height = area
    step = (width + GUTTER) / columns
    filled = _columns(blocks, head, height)
    return [
        [
            item
            for place, column in enumerate(filled[first : first + columns])
            for item in moved(column, left + step * place, top)
        ]
        for first in range(0, len(filled), columns)
    ]


def _columns(blocks: Iterable[Block], head: Block, height: float) -> list[list[Item]]:
    room = height - head.height
    columns: list[list[Item]] = []
    used = room + 1.0
    for group in _bound(_broken(blocks, room), room):
        if used + group.height > room or not columns:
            columns.append(list(head.items))
            used = 0.0
        columns[-1] += moved(group.items, 0.0, head.height + used)
        used += group.height
    return columns or [list(head.items)]


def _broken(blocks: Iterable[Block], room: float) -> Iterator[Block]:
    """Blocks taller than a page as several that are not."""
    for block in blocks:
        if block.height <= room or not block.parts:
            yield block
            continue
        again = block.again or Block(0.0)
        held: list[Block] = []
        for part in block.parts:
            if held and sum(each.height for each in held) + part.height > room:
                yield stacked(held)
                held = [again]
            held.append(part)
        yield stacked(held)


def _bound(blocks: Iterable[Block], room: float) -> Iterator[Block]:
    """Blocks that keep with the next joined to it, as long as both fit one page."""
    held: list[Block] = []
    for block in blocks:
        held.append(block)
        if not block.keep:
            joined = stacked(held)
            yield from [joined] if joined.height <= room else held
            held = []
    yield from held
