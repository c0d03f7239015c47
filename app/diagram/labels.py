"""Where numbers stand beside the lines without touching one another. No Qt here."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass

Span = tuple[float, float, float, float]
TextWidth = Callable[[str, bool], float]  # a text in the label size, regular or strong, to its width [px]

GAP_PX = 4.0
LIFT_PX = 5.0
MUST_STAND = 20  # ranks below this are the selection's and the narrowest margin's


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

    def crossed_by(self, span: Span) -> bool:
        """Whether a line piece runs through the box."""
        x1, y1, x2, y2 = span
        if max(x1, x2) <= self.left or min(x1, x2) >= self.right:
            return False
        slope = (y2 - y1) / (x2 - x1) if x2 != x1 else 0.0
        left, right = max(self.left, min(x1, x2)), min(self.right, max(x1, x2))
        heights = (y1 + slope * (left - x1), y1 + slope * (right - x1))
        return min(heights) < self.bottom and max(heights) > self.top

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
    wishes: Iterable[Wish], plot: Box, height: float, width_of: TextWidth, lines: Sequence[Span] = ()
) -> tuple[Label, ...]:
    """The labels that find room, the most wanted first; none touches another, leaves the plot or stands on a line.

    The first ranks may stand on a line where nothing else is free.
    """
    standing: list[Label] = []
    for wish in sorted(wishes, key=lambda w: w.rank):
        width = width_of(wish.text, wish.strong)
        reach = width + GAP_PX
        left, right = wish.x - reach, wish.x + reach
        near = [line for line in lines if line[0] < right and line[2] > left]
        beside = [
            other.box for other in standing if other.box.left - 2.0 < right and left < other.box.right + 2.0
        ]
        fallback: Box | None = None
        for box in _candidates(wish, width, height):
            if not box.inside(plot) or any(box.touches(other, 2.0) for other in beside):
                continue
            if not any(box.crossed_by(line) for line in near):
                break
            fallback = fallback or box
        else:
            if fallback is None or wish.rank >= MUST_STAND:
                continue
            box = fallback
        standing.append(Label(box, wish.text, wish.series, wish.strong))
    return tuple(standing)


def _candidates(wish: Wish, width: float, height: float) -> Iterable[Box]:
    above = (wish.y - LIFT_PX - height, wish.y - LIFT_PX)
    below = (wish.y + LIFT_PX, wish.y + LIFT_PX + height)
    sides = (above, below) if wish.above else (below, above)
    for top, bottom in sides:
        for left in (wish.x + GAP_PX, wish.x - width / 2.0, wish.x - width - GAP_PX):
            yield Box(left, top, left + width, bottom)
