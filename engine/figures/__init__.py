"""Figures as data sheets write them: read, checked, echoed, said."""

from __future__ import annotations

from .errors import FigureError
from .figure import Figure, Origin, figure_interval
from .format import echo, format_amount, format_db
from .parse import Parsed, parse
from .quantity import QUANTITIES, Quantity

__all__ = [
    "QUANTITIES",
    "Figure",
    "FigureError",
    "Origin",
    "Parsed",
    "Quantity",
    "echo",
    "figure_interval",
    "format_amount",
    "format_db",
    "parse",
]
