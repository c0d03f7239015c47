"""A press that is not yet a drag: it becomes one when the pointer has gone far enough, else it was a click."""

from __future__ import annotations

from .base import Gesture, Hit, Point, Surface
from .link_drag import start_of_link
from .move_blocks import MoveBlocks
from .rubber_band import RubberBand

DRAG_PX = 6.0
TOUCH_DRAG_PX = 12.0


class Press:
    """Remembers where the hand came down, and on what."""

    def __init__(
        self, surface: Surface, x: float, y: float, selection: frozenset[str], *,
        extend: bool = False, touch: bool = False,
    ) -> None:  # fmt: skip
        self.surface = surface
        self.start: Point = (x, y)
        self.hit: Hit = surface.hit(x, y, reach=14.0 if touch else 7.0)
        self.selection = selection
        self.extend = extend
        self._slack = TOUCH_DRAG_PX if touch else DRAG_PX

    def move(self, x: float, y: float) -> Gesture | None:
        """The gesture that the press has become; None while it may still be a click."""
        if max(abs(x - self.start[0]), abs(y - self.start[1])) < self._slack:
            return None
        gesture = self._gesture()
        gesture.move(x, y)
        return gesture

    def click(self) -> frozenset[str]:
        """What a press without motion selects. With `extend` it adds or takes away."""
        here = frozenset({self.hit.id}) if self.hit.id else frozenset()
        if not self.extend:
            return here
        return self.selection ^ here

    def _gesture(self) -> Gesture:
        if self.hit.what in ("output", "input"):
            return start_of_link(self.surface, self.hit, self.start)
        if self.hit.what == "stage":
            held = self.selection if self.hit.id in self.selection else frozenset({self.hit.id})
            return MoveBlocks(self.surface, held, self.start)
        return RubberBand(self.surface, self.start, self.selection if self.extend else frozenset())
