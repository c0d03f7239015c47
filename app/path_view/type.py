"""Widths of the shipped face, and names cut or broken to fit a block."""

from __future__ import annotations

from functools import cache

from PySide6.QtCore import Qt
from PySide6.QtGui import QFontMetricsF

from app.inks import font


@cache
def metrics(px: int, *, strong: bool = False) -> QFontMetricsF:
    """Widths of that face."""
    return QFontMetricsF(font(px, strong=strong))


@cache
def _fitted(text: str, limit: int, px: int, strong: bool) -> str:
    return metrics(px, strong=strong).elidedText(text, Qt.TextElideMode.ElideRight, limit)


def fitted(text: str, limit_px: float, px: int, *, strong: bool = False) -> str:
    """The text in one line, cut with an ellipsis where it would run wider."""
    return _fitted(text, max(0, int(limit_px)), px, strong)


@cache
def _two_lines(text: str, limit: int, px: int, strong: bool) -> tuple[str, ...]:
    face = metrics(px, strong=strong)
    if face.horizontalAdvance(text) <= limit:
        return (text,)
    words = text.split()
    taken = 1
    while taken < len(words) and face.horizontalAdvance(" ".join(words[: taken + 1])) <= limit:
        taken += 1
    lines = (" ".join(words[:taken]), " ".join(words[taken:]))
    return tuple(_fitted(line, limit, px, strong) for line in lines if line)


def two_lines(text: str, limit_px: float, px: int, *, strong: bool = False) -> tuple[str, ...]:
    """The text in one line or two, broken between words."""
    return _two_lines(text, max(0, int(limit_px)), px, strong)


def fits_in_two(text: str, limit_px: float, px: int, *, strong: bool = False) -> bool:
    """Whether `two_lines` leaves nothing out."""
    return " ".join(two_lines(text, limit_px, px, strong=strong)) == " ".join(text.split())
