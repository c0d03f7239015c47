"""How wide a label is in the shipped face. QtGui only."""

from __future__ import annotations

from functools import cache, lru_cache

from PySide6.QtGui import QFontMetricsF

from app.inks import font

from .paint import LABEL_PX


@cache
def _metrics(*, strong: bool) -> QFontMetricsF:
    return QFontMetricsF(font(LABEL_PX, strong=strong))


@lru_cache(maxsize=20_000)
def text_width(text: str, strong: bool) -> float:
    """The width of a label [px]."""
    return _metrics(strong=strong).horizontalAdvance(text)
