"""Where numbers stand beside the lines without touching one another. No Qt here."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

TextWidth = Callable[[str, bool], float]  # a text in the label size, regular or strong, to its width [px]

GAP_PX = 4.0
LIFT_PX = 5.0


@dataclass(frozen=True)
class Box:
    """A rectangle [px]."""

    left: float
    top: float
    right: float
    bottom: float

    def touches(self, other: Box, gap: float = 0.0) -> bool:
        return (
            self.left - gap < other.right
            and other.left - gap < self.right
            and self.top - gap < other.bottom
            and other.top - gap < self.bottom
        )

    def inside(self, other: Box) -> bool:
        return (
            other.left <= self.left
            and other.top <= self.top
            and self.right <= other.right
            and self.bottom <= other.bottom
        )


@dataclass(frozen=True)
class Wish:
    """A label that would like to stand at a point. Lower `rank` goes first; `above` is the side it likes better."""

    x: float
    y: float
    text: str
    series: str
    rank: int
    above: bool
    strong: bool = False


@dataclass(frozen=True)
class Label:
    """A label that stands: its box, text and the series whose ink it takes."""

    box: Box
    text: str
    series: str
    strong: bool


def place_labels(
    wishes: Iterable[Wish], plot: Box, height: float, width_of: TextWidth, taken: Iterable[Box] = ()
) -> tuple[Label, ...]:
    """The labels that find room, the most wanted first; none touches another or leaves the plot."""
    standing: list[Label] = []
    occupied = list(taken)
    for wish in sorted(wishes, key=lambda w: w.rank):
        width = width_of(wish.text, wish.strong)
        for box in _candidates(wish, width, height):
            if box.inside(plot) and not any(box.touches(other, 2.0) for other in occupied):
                standing.append(Label(box, wish.text, wish.series, wish.strong))
                occupied.append(box)
                break
    return tuple(standing)


def _candidates(wish: Wish, width: float, height: float) -> Iterable[Box]:
    above = (wish.y - LIFT_PX - height, wish.y - LIFT_PX)
    below = (wish.y + LIFT_PX, wish.y + LIFT_PX + height)
    sides = (above, below) if wish.above else (below, above)
    for top, bottom in sides:
        for left in (wish.x + GAP_PX, wish.x - width / 2.0, wish.x - width - GAP_PX):
            yield Box(left, top, left + width, bottom)
