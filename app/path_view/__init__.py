"""The signal path view: blocks and links on the grid, by hand and by keyboard."""

from __future__ import annotations

from .adding import How, add_kind
from .view import PathView

__all__ = ["How", "PathView", "add_kind"]
