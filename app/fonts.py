"""The shipped face: loaded once, so that widths are the same on every machine.

Its figures are tabular in the character map itself (see resources/fonts/build.py): asking for the `tnum`
feature would only hide the digits from search in a PDF.
"""

from __future__ import annotations

from functools import cache

from PySide6.QtGui import QFont, QFontDatabase

from app import places


@cache
def family() -> str:
    """Load the shipped faces and name their family.

    Needs a QGuiApplication; raises OSError, saying what to do, where a face is damaged or missing.
    """
    names: list[str] = []
    for face in sorted(places.fonts().glob("*.otf")):
        number = QFontDatabase.addApplicationFont(str(face))
        if number < 0:
            raise OSError(f"the typeface {face} cannot be read: install the program again")
        names += QFontDatabase.applicationFontFamilies(number)
    if not names:
        raise OSError(f"no typeface in {places.fonts()}: install the program again")
    return names[0]


def face(points: float, *, strong: bool = False) -> QFont:
    """The shipped face at a size in points, regular or semi-bold."""
    font = QFont(family())
    font.setPointSizeF(points)
    font.setWeight(QFont.Weight.DemiBold if strong else QFont.Weight.Normal)
    return font
