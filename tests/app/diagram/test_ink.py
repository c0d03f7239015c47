"""Once per target: ink lies where geometry says."""

from __future__ import annotations

import re

import pytest
from pypdf import PdfReader
from PySide6.QtGui import QColor, QImage

from app.diagram.export import HEAD_PX, ExportError, picture, write
from app.inks import LIGHT
from engine.outcome import evaluate
from tests.app.diagram.chains import chain

WIDTH, HEIGHT = 1400, 700


@pytest.fixture
def solved(qapp):
    outcome = evaluate(chain())
    return outcome, outcome.path_through("processor-5")


def near(one: QColor, two: QColor) -> bool:
    return all(abs(a - b) <= 60 for a, b in zip(one.getRgb()[:3], two.getRgb()[:3], strict=True))


def test_png_has_the_clip_line_where_geometry_says(solved, tmp_path):
    outcome, path = solved
    write(outcome, path, tmp_path / "d.png", width=WIDTH, height=HEIGHT)
    image = QImage(str(tmp_path / "d.png"))
    assert (image.width(), image.height()) == (2 * WIDTH, 2 * HEIGHT)
    found = picture(outcome, path, WIDTH, HEIGHT - HEAD_PX)
    x1, y1, x2, y2 = max(found.spans["clip"], key=lambda span: span[2] - span[0])
    x, y = (x1 + x2) / 2.0, (y1 + y2) / 2.0 + HEAD_PX
    column = [image.pixelColor(round(2 * x), row) for row in range(round(2 * y) - 8, round(2 * y) + 9)]
    inked = [row for row, colour in enumerate(column) if near(colour, LIGHT.clip)]
    assert inked
    assert abs(sum(inked) / len(inked) - 8.0) <= 1.5  # half pixels: the picture is drawn at twice its size


def test_svg_holds_text_and_no_raster(solved, tmp_path):
    outcome, path = solved
    write(outcome, path, tmp_path / "d.svg", width=WIDTH, height=HEIGHT)
    text = (tmp_path / "d.svg").read_text()
    assert "<image" not in text
    assert "Processor" in text


def test_pdf_words_stand_where_geometry_says(solved, tmp_path):
    outcome, path = solved
    target = tmp_path / "d.pdf"
    write(outcome, path, target, width=WIDTH, height=HEIGHT)
    assert not re.search(rb"/Subtype\s*/Image", target.read_bytes())
    page = PdfReader(target).pages[0]
    assert float(page.mediabox.width) == pytest.approx(WIDTH * 0.6, abs=1.0)
    words: dict[str, float] = {}

    def visit(text, cm, tm, font, size):
        if text.strip():
            words.setdefault(text.strip(), tm[5] * cm[3] + cm[5])

    page.extract_text(visitor_text=visit)
    found = picture(outcome, path, WIDTH, HEIGHT - HEAD_PX)
    ticks = {tick.text: (tick.y + HEAD_PX) * 0.6 for tick in found.ticks}
    known = [text for text in ticks if text in words]
    assert len(known) >= 3
    one, two = known[0], known[-1]
    # The baseline lies a fixed way under the tick, so distances between ticks must agree.
    assert abs(words[one] - words[two]) == pytest.approx(abs(ticks[one] - ticks[two]), abs=0.6)


def test_another_ending_is_refused(solved, tmp_path):
    outcome, path = solved
    with pytest.raises(ExportError, match=r"\.png, \.svg, \.pdf"):
        write(outcome, path, tmp_path / "d.bmp")


def test_a_folder_that_is_not_there_is_said(solved, tmp_path):
    outcome, path = solved
    with pytest.raises(ExportError, match="cannot be written"):
        write(outcome, path, tmp_path / "nowhere" / "d.png")
