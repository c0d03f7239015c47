"""The inks a scheme is drawn with: colour has meaning only. Light, dark, red light, and print."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from PySide6.QtGui import QColor, QFont

from app import fonts

TYPE_PX = (11, 12, 14, 16)  # the only sizes in the window


@dataclass(frozen=True)
class Inks:
    """One scheme. `clip`, `peak`, `level`, `noise` are the four data inks; `stop`, `mend`, `note` the severities."""

    name: str
    paper: QColor
    raised: QColor
    hairline: QColor
    ink: QColor
    muted: QColor
    accent: QColor
    clip: QColor
    peak: QColor
    level: QColor
    noise: QColor

    @property
    def stop(self) -> QColor:
        return self.clip

    @property
    def mend(self) -> QColor:
        return self.peak

    @property
    def note(self) -> QColor:
        return self.level

    @property
    def is_dark(self) -> bool:
        return self.paper.lightnessF() < 0.5

    def severity(self, word: str) -> QColor:
        """The ink of a finding's severity."""
        return {"stop": self.stop, "mend": self.mend, "note": self.note}[word]


def _scheme(name: str, colours: str) -> Inks:
    """Colours in the order of the fields, paper first."""
    return Inks(name, *(QColor(f"#{colour}") for colour in colours.split()))


LIGHT = _scheme("light", "FBFAF7 FFFFFF DEDAD2 1F2328 5C616A 0B6E75 C23B22 8F5B06 1B4F9C 6B5B95")
DARK = _scheme("dark", "16181C 1F2227 343941 E8E6E1 A0A4AB 4FC1C7 FF7A5C E8B04A 7FB2FF B9A6E8")
RED = _scheme("red light", "0A0000 160303 4A1010 FF6A5A C74B40 FF8A70 FF6A5A FF6A5A FF6A5A C74B40")
PRINT = _scheme("print", "FFFFFF FFFFFF B0B0B0 000000 000000 000000 000000 000000 000000 000000")
SCHEMES: Mapping[str, Inks] = {inks.name: inks for inks in (LIGHT, DARK, RED)}


def font(size_px: int, *, strong: bool = False) -> QFont:
    """The UI face at a size in pixels, regular or 600. Its figures are tabular."""
    face = QFont(fonts.family())
    face.setPixelSize(size_px)
    face.setWeight(QFont.Weight.DemiBold if strong else QFont.Weight.Normal)
    return face


def blend(ink: QColor, paper: QColor, share: float) -> QColor:
    """`share` of an ink on paper, opaque."""
    ends = ((ink.red(), paper.red()), (ink.green(), paper.green()), (ink.blue(), paper.blue()))
    mixed = (round(a * share + b * (1.0 - share)) for a, b in ends)
    return QColor(*mixed)
