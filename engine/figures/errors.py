"""The error every unreadable figure ends in."""

from __future__ import annotations


class FigureError(ValueError):
    """Says what was wrong with a figure and what would be right."""
