"""The stage card: everything about what is selected, made from what its kind declares."""

from __future__ import annotations

from .card import StageCard

__all__ = ["StageCard"]
