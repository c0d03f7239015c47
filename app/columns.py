"""The only map from a column of the grid to x: path view and level diagram read it, and move it.

A block's input stands at its left edge, its output at its right edge, so a stage's gain is a slope under its block and
an interface's loss a slope in the gap. Zooming changes the pitch, never a view transform: type keeps its size.
"""

from __future__ import annotations

from PySide6.QtCore import QObject, Signal

USUAL_PITCH_PX = 112.0
LEAST_PITCH_PX = 6.0
MOST_PITCH_PX = 320.0
BLOCK_SHARE = 0.84  # of the pitch; the rest is the gap
TEXT_PITCH_PX = 40.0  # narrower blocks draw no text


class Columns(QObject):
    """Pitch and scroll of the grid, in pixels of the shared width."""

    changed = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._pitch_px = USUAL_PITCH_PX
        self._scroll_px = 0.0
        self._count = 0
        self._view_px = 0.0
        self.left_px = 64.0  # room for the diagram's left axis
        self.right_px = 72.0  # room for its right axis

    @property
    def pitch_px(self) -> float:
        return self._pitch_px

    @property
    def scroll_px(self) -> float:
        return self._scroll_px

    @property
    def count(self) -> int:
        """How many columns the project has."""
        return self._count

    @property
    def shows_text(self) -> bool:
        return self._pitch_px >= TEXT_PITCH_PX

    @property
    def most_scroll_px(self) -> float:
        """How far the grid scrolls; one free column stands behind the last."""
        content = self.left_px + (self._count + 1) * self._pitch_px + self.right_px
        return max(0.0, content - self._view_px)

    def left(self, column: float) -> float:
        """The left end of a column's cell."""
        return self.left_px + column * self._pitch_px - self._scroll_px

    def x_in(self, column: float) -> float:
        """A block's left edge: where its input stands."""
        return self.left(column) + self._pitch_px * (1.0 - BLOCK_SHARE) / 2.0

    def x_out(self, column: float) -> float:
        """A block's right edge: where its output stands."""
        return self.left(column) + self._pitch_px * (1.0 + BLOCK_SHARE) / 2.0

    def column_at(self, x: float) -> int:
        """The column whose cell holds x; never below 0."""
        return max(0, int((x - self.left_px + self._scroll_px) // self._pitch_px))

    def set_extent(self, count: int, view_px: float) -> None:
        """Tell how many columns there are and how wide the view is."""
        if (count, view_px) != (self._count, self._view_px):
            self._count, self._view_px = count, view_px
            self._move(self._pitch_px, self._scroll_px)
            self.changed.emit()

    def scroll_to(self, scroll_px: float) -> None:
        """Scroll to a place, as far as there is something to see."""
        if self._move(self._pitch_px, scroll_px):
            self.changed.emit()

    def scroll_by(self, step_px: float) -> None:
        """Scroll on by a step."""
        self.scroll_to(self._scroll_px + step_px)

    def zoom_by(self, factor: float, at_x: float) -> None:
        """Change the pitch, keeping what is under `at_x` there."""
        pitch = min(MOST_PITCH_PX, max(LEAST_PITCH_PX, self._pitch_px * factor))
        place = (at_x - self.left_px + self._scroll_px) / self._pitch_px
        if self._move(pitch, place * pitch - at_x + self.left_px):
            self.changed.emit()

    def fit(self, first: int = 0, last: int | None = None) -> None:
        """Show columns `first` to `last` (all of them), not wider than the usual pitch."""
        last = max(first, self._count - 1) if last is None else last
        pitch = self._fitting(last - first + 1)
        if self._move(pitch, first * pitch):
            self.changed.emit()

    @property
    def fitted_pitch_px(self) -> float:
        """The pitch at which all columns are in view."""
        return self._fitting(max(1, self._count))

    def _fitting(self, columns: int) -> float:
        room = self._view_px - self.left_px - self.right_px
        return min(USUAL_PITCH_PX, max(LEAST_PITCH_PX, room / columns))

    def reveal(self, column: int) -> None:
        """Scroll no further than needed to show a column."""
        left, right = self.left(column), self.left(column + 1)
        if left < self.left_px:
            self.scroll_by(left - self.left_px)
        elif right > self._view_px - self.right_px:
            self.scroll_by(right - self._view_px + self.right_px)

    def _move(self, pitch_px: float, scroll_px: float) -> bool:
        before = (self._pitch_px, self._scroll_px)
        self._pitch_px = pitch_px
        self._scroll_px = min(max(0.0, scroll_px), self.most_scroll_px)
        return before != (self._pitch_px, self._scroll_px)
