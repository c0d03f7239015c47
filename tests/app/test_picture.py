"""The level diagram on paper and in files: ink lies where geometry says."""

from __future__ import annotations

import re
from pathlib import Path

import pypdf
import pytest
from PySide6.QtGui import QColor, QImage

from app.inks import LIGHT
from app.picture import KEY_PX, Picture, tightest
from app.picture_file import EDGE_PX, TITLE_PX, write_picture
from app.sheets.book import make_book
from app.sheets.levels import POINTS_PER_PX, make_picture
from app.sheets.page import Drawing, Paper
from engine.outcome import Outcome, evaluate
from engine.store import read

SAMPLES = Path(__file__).parents[2] / "sample_projects"


@pytest.fixture(scope="module")
def outcome() -> Outcome:
    return evaluate(read(SAMPLES / "house_of_worship.gainwright")[0])


def words_at(page: pypdf.PageObject) -> list[tuple[str, float, float]]:
    """Every piece of text of a page with the place of its baseline, in points from the lower left corner."""
    found: list[tuple[str, float, float]] = []

    def visit(text, cm, tm, font, size):
        if text.strip():
            x = tm[4] * cm[0] + tm[5] * cm[2] + cm[4]
            y = tm[4] * cm[1] + tm[5] * cm[3] + cm[5]
            found.append((text.strip(), x, y))

    page.extract_text(visitor_text=visit)
    return found


@pytest.mark.parametrize("paper", [Paper("A4"), Paper("A3", True), Paper("Letter")])
def test_axis_labels_of_the_pdf_stand_at_their_levels(outcome, qapp, tmp_path, paper):
    """Every label of the left axis within half a point of its line; the right axis reads the left one plus the shift."""
    book = make_book(outcome, paper, only=["diagram"])
    target = tmp_path / "diagram.pdf"
    book.write(target)
    page, made = pypdf.PdfReader(target).pages[0], book.pages[0]
    drawing = next(item for item in made.items if isinstance(item, Drawing))
    picture = make_picture(outcome, outcome.paths()[0], drawing.width, drawing.height)
    shrink = float(page.mediabox.width) / made.paper.size[0]
    words = words_at(page)

    def on_page(y_px: float) -> float:
        return float(page.mediabox.height) - shrink * (drawing.y + POINTS_PER_PX * (picture.top + y_px))

    left_end = drawing.x + POINTS_PER_PX * picture.geometry.plot.left
    right_end = drawing.x + POINTS_PER_PX * picture.geometry.plot.right
    for ticks, is_left in ((picture.geometry.ticks, True), (picture.geometry.right_ticks, False)):
        assert ticks
        for tick in ticks:
            heights = [
                y
                for text, x, y in words
                if text == tick.text and (x < left_end if is_left else x > right_end)
            ]
            # Type is centred on its line: the baseline lies some 4 px under it.
            under = [on_page(tick.y) - y for y in heights]
            assert any(abs(each - 4.0 * POINTS_PER_PX) < 0.6 for each in under), (tick.text, under)


def test_png_has_the_level_where_geometry_says(outcome, qapp, tmp_path):
    path = outcome.paths()[0]
    width, height = 1400, 700
    target = tmp_path / "diagram.png"
    write_picture(target, outcome, path, (width, height), LIGHT)
    picture = Picture(outcome, path, width - 2 * EDGE_PX, height - 2 * EDGE_PX - TITLE_PX)
    image = QImage(str(target))
    top = EDGE_PX + TITLE_PX + picture.top
    spans = [span for span in picture.geometry.spans["level"] if span[2] - span[0] > 40.0]
    assert spans
    for x1, y1, x2, y2 in spans:
        x, y = EDGE_PX + (x1 + x2) / 2.0, top + (y1 + y2) / 2.0
        column = [QColor(image.pixel(round(x), round(y) + step)) for step in (-2, -1, 0, 1, 2)]
        nearest = min(
            abs(c.red() - LIGHT.level.red())
            + abs(c.green() - LIGHT.level.green())
            + abs(c.blue() - LIGHT.level.blue())
            for c in column
        )
        assert nearest < 60


@pytest.mark.parametrize("size", [(1400, 700), (900, 500), (600, 800), (320, 320)])
def test_no_label_leaves_the_picture(outcome, qapp, size):
    for path in outcome.paths():
        picture = Picture(outcome, path, *size)
        geometry = picture.geometry
        for label in geometry.labels:
            assert 0.0 <= label.box.left <= label.box.right <= size[0]
        assert geometry.plot.bottom <= size[1] - picture.top - KEY_PX


def test_every_stage_of_the_path_is_named_in_the_svg(outcome, qapp, tmp_path):
    target = tmp_path / "diagram.svg"
    path = outcome.path_through("choir_mic")
    write_picture(target, outcome, path, (1400, 700), LIGHT)
    text = " ".join(re.findall(r">([^<]+)</text>", target.read_text(encoding="utf-8")))
    for key in path:
        for word in outcome.project.stage[key].name.split():
            assert word in text
    assert "<image" not in target.read_text(encoding="utf-8")


def test_the_tightest_node_has_the_least_margin(outcome):
    path = outcome.paths()[0]
    node = tightest(outcome, path)
    assert node is not None
    assert node.peak_margin == min(n.peak_margin for n in outcome.trace(path) if n.peak_margin is not None)
