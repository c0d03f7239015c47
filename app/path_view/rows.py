"""How blocks are sized: by the pitch of the columns, in three steps, so that type keeps its size and thins out."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Detail = Literal["full", "name", "bare"]

BARE_BELOW_PX = 40.0  # a block under this pitch has no room for text
NAME_BELOW_PX = 72.0  # under this pitch, a name alone
TOP_MARGIN_PX = 16.0


@dataclass(frozen=True)
class RowScale:
    """Heights of blocks and rows in px."""

    detail: Detail
    block_px: float
    row_px: float

    def top(self, row: int) -> float:
        """Where a row's blocks begin, before scrolling."""
        return TOP_MARGIN_PX + row * self.row_px

    def row_at(self, y: float) -> int:
        """The row whose band holds this height; the gap above a block belongs to it by half."""
        gap = self.row_px - self.block_px
        return max(0, int((y - TOP_MARGIN_PX + gap / 2.0) // self.row_px))

    def height(self, rows: int) -> float:
        """What `rows` rows need, margins included."""
        return 2.0 * TOP_MARGIN_PX + rows * self.row_px - (self.row_px - self.block_px)


FULL = RowScale("full", 52.0, 72.0)
NAME = RowScale("name", 28.0, 44.0)
BARE = RowScale("bare", 12.0, 20.0)


def row_scale(pitch_px: float) -> RowScale:
    """The heights that go with a pitch."""
    if pitch_px < BARE_BELOW_PX:
        return BARE
    return NAME if pitch_px < NAME_BELOW_PX else FULL
