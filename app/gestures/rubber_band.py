"""A rectangle pulled over empty space: what it touches is selected."""

from __future__ import annotations

from .base import Gesture, Plan, Point, Preview, Surface


class RubberBand(Gesture):
    """Selects what it touches, beside what was selected where the hand asked to extend."""

    def __init__(self, surface: Surface, start: Point, kept: frozenset[str] = frozenset()) -> None:
        super().__init__(surface)
        self.start = start
        self.kept = kept

    def move(self, x: float, y: float) -> None:
        left, right = sorted((self.start[0], x))
        top, bottom = sorted((self.start[1], y))
        band = (left, top, right - left, bottom - top)
        caught = self.surface.inside(band) | self.kept
        self.preview = Preview(band=band, caught=caught)
        self.plan = Plan("", {}, caught)
