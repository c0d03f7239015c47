"""The sheets' type: the shipped face in points, its widths, and lines broken to fit."""

from __future__ import annotations

from functools import cache

from PySide6.QtGui import QFont, QFontMetricsF

from app import fonts


@cache
def font(points: int, strong: bool = False) -> QFont:
    """The shipped face where one unit of the painter is a point, with unrounded widths."""
    face = QFont(fonts.family())
    face.setPixelSize(points)
    face.setWeight(QFont.Weight.DemiBold if strong else QFont.Weight.Normal)
    face.setHintingPreference(QFont.HintingPreference.PreferNoHinting)
    return face


@cache
def _metrics(points: int, strong: bool) -> QFontMetricsF:
    return QFontMetricsF(font(points, strong))


def width(text: str, points: int, strong: bool = False) -> float:
    """How wide a line of text runs, in points."""
    return _metrics(points, strong).horizontalAdvance(text)


def wrapped(text: str, points: int, limit: float, strong: bool = False) -> list[str]:
    """The text broken into lines no wider than `limit` points, between words; a longer word is broken inside."""
    lines: list[str] = []
    line = ""
    for word in text.split(" "):  # not at a no-break space: a number keeps its unit
        for piece in _pieces(word, points, limit, strong):
            longer = f"{line} {piece}" if line else piece
            if line and width(longer, points, strong) > limit:
                lines.append(line)
                line = piece
            else:
                line = longer
    return [*lines, line] if line else lines


def _pieces(word: str, points: int, limit: float, strong: bool) -> list[str]:
    pieces: list[str] = []
    while len(word) > 1 and width(word, points, strong) > limit:
        fits = next(
            n for n in range(len(word) - 1, 0, -1) if n == 1 or width(word[:n], points, strong) <= limit
        )
        pieces.append(word[:fits])
        word = word[fits:]
    return [*pieces, word]


def fitted(text: str, points: int, limit: float, strong: bool = False) -> str:
    """The text, cut with an ellipsis where it would run wider than `limit` points."""
    if width(text, points, strong) <= limit:
        return text
    while text and width(f"{text}…", points, strong) > limit:
        text = text[:-1].rstrip()
    return f"{text}…"
