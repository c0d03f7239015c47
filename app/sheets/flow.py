"""Blocks of a sheet poured into pages: heads repeat, and a block stays whole unless it is taller than a page."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from .page import Item, moved


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


def pour(blocks: Iterable[Block], head: Block, area: tuple[float, float, float, float]) -> list[list[Item]]:
    """The blocks as items of one page after another, each page beginning with the head. At least one page."""
    left, top, _, height = area
    room = height - head.height
    pages: list[list[Item]] = []
    used = room + 1.0
    for group in _bound(_broken(blocks, room), room):
        if used + group.height > room or not pages:
            pages.append(moved(head.items, left, top))
            used = 0.0
        pages[-1] += moved(group.items, left, top + head.height + used)
        used += group.height
    return pages or [moved(head.items, left, top)]


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
