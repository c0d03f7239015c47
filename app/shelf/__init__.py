"""The shelf: every kind of stage, to be carried onto the path or added by key."""

from __future__ import annotations

from .shelf import Shelf

__all__ = ["Shelf"]
