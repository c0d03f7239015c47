"""The shipped face: two weights, tabular figures, every sign of our labels, text that a PDF gives back."""

from __future__ import annotations

import pytest
from pypdf import PdfReader
from PySide6.QtGui import QFontDatabase, QFontInfo, QFontMetricsF, QPainter, QPdfWriter, QRawFont

from app import fonts, places

SIGNS = "−–—±·×≤≥√∞°²³½ΩΩµμ→←↑↓▲▼●◆✓…’“”\u202f\u2009"


@pytest.mark.usefixtures("qapp")
def test_both_weights_are_ours():
    assert fonts.family() == "Gainwright Sans"
    assert QFontDatabase.styles(fonts.family()) == ["Regular", "SemiBold"]
    widths = set()
    for strong, weight in ((False, 400), (True, 600)):
        face = fonts.face(12, strong=strong)
        assert QFontInfo(face).family() == "Gainwright Sans"
        assert QFontInfo(face).weight() == weight
        widths.add(QFontMetricsF(face).horizontalAdvance("Headroom"))
    assert len(widths) == 2, "each weight has a face of its own, none is made up"


@pytest.mark.usefixtures("qapp")
@pytest.mark.parametrize("strong", [False, True])
def test_figures_are_tabular(strong):
    metrics = QFontMetricsF(fonts.face(96, strong=strong))
    widths = [metrics.horizontalAdvance(digit) for digit in "0123456789"]
    assert max(widths) == pytest.approx(min(widths), rel=0.002)  # one glyph of the semi-bold is a unit wider
    assert metrics.horizontalAdvance("11111") == pytest.approx(metrics.horizontalAdvance("80808"), abs=0.5)


@pytest.mark.usefixtures("qapp")
@pytest.mark.parametrize("file", sorted(places.fonts().glob("*.otf")), ids=lambda path: path.stem)
def test_every_sign_is_in_the_face(file):
    raw = QRawFont(str(file), 12)
    assert raw.isValid()
    assert [sign for sign in SIGNS if not raw.glyphIndexesForString(sign)[0]] == []


@pytest.mark.usefixtures("qapp")
def test_a_pdf_gives_the_digits_back(tmp_path):
    text = "−12.5 dBu 0123456789 √ Ω µ"
    writer = QPdfWriter(str(tmp_path / "face.pdf"))
    painter = QPainter(writer)
    painter.setFont(fonts.face(11))
    painter.drawText(500, 500, text)
    painter.end()
    found = PdfReader(tmp_path / "face.pdf").pages[0].extract_text()
    assert found.split()[:3] == ["−12.5", "dBu", "0123456789"]
