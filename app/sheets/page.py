"""A page as data: what stands where, in points (1/72 inch) from the top left corner. Nothing is painted here."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from PySide6.QtGui import QPainter

POINTS_PER_MM = 72.0 / 25.4
MARGIN_MM = 13.0  # no office printer needs more
SMALL, BODY, LARGE, TITLE = 8, 10, 14, 20  # the sheets' own type scale, in points
HAIR, RULE, HEAVY = 0.4, 0.8, 1.6  # line widths, in points

#: Width and height of each paper in upright use, in mm (ISO 216; ANSI/ASME Y14.1 A).
PAPERS: dict[str, tuple[float, float]] = {
    "A4": (210.0, 297.0),
    "A3": (297.0, 420.0),
    "Letter": (215.9, 279.4),
}


@dataclass(frozen=True)
class Paper:
    """A paper and which way round it lies. Raises ValueError for a paper that is not kept."""

    name: str = "A4"
    landscape: bool = False

    def __post_init__(self) -> None:
        if self.name not in PAPERS:
            raise ValueError(f"paper {self.name!r} is not kept here: take {', '.join(PAPERS)}")

    @property
    def size(self) -> tuple[float, float]:
        """Width and height in points as it lies."""
        wide, high = (millimetres * POINTS_PER_MM for millimetres in PAPERS[self.name])
        return (high, wide) if self.landscape else (wide, high)

    @property
    def inside(self) -> tuple[float, float, float, float]:
        """The printed area: left, top, width, height in points."""
        margin = MARGIN_MM * POINTS_PER_MM
        width, height = self.size
        return margin, margin, width - 2.0 * margin, height - 2.0 * margin


@dataclass(frozen=True)
class Text:
    """A line of text; `x` is its left end, right end or middle by `align`, `y` its baseline."""

    x: float
    y: float
    text: str
    points: int = BODY
    strong: bool = False
    align: Literal["left", "right", "middle"] = "left"


@dataclass(frozen=True)
class Line:
    """A straight black line."""

    x1: float
    y1: float
    x2: float
    y2: float
    thick: float = HAIR


@dataclass(frozen=True)
class Box:
    """An empty rectangle, such as a box to tick or to write in."""

    x: float
    y: float
    width: float
    height: float
    thick: float = RULE


@dataclass(frozen=True)
class Drawing:
    """A part painted by others inside a rectangle; the painter's origin stands at its corner, one unit is a point."""

    x: float
    y: float
    width: float
    height: float
    paint: Callable[[QPainter], None]


Item = Text | Line | Box | Drawing


@dataclass(frozen=True)
class Page:
    """One side of paper. `title` and `about` (the path, or what the sheet covers) stand in its title block."""

    paper: Paper
    title: str
    about: str
    items: tuple[Item, ...] = field(default=())

    @property
    def texts(self) -> tuple[str, ...]:
        """All that is written on it by the sheets themselves, in the order it was set down."""
        return tuple(item.text for item in self.items if isinstance(item, Text))


def moved(items: Iterable[Item], x: float, y: float) -> list[Item]:
    """The items moved right by x and down by y."""
    placed: list[Item] = []
    for item in items:
        if isinstance(item, Line):
            placed.append(replace(item, x1=item.x1 + x, x2=item.x2 + x, y1=item.y1 + y, y2=item.y2 + y))
        else:
            placed.append(replace(item, x=item.x + x, y=item.y + y))
    return placed
