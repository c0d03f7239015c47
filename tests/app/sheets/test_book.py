"""The book as a PDF: paper, frame, type and margins, read back from the file and from its ink."""

from __future__ import annotations

import numpy as np
import pypdf
import pytest
from PySide6.QtGui import QImage, QPainter

from app.cautions import CAUTION_LINE, CAUTIONS, CONVENTION_LINE
from app.sheets.book import SHEETS, chosen, make_book
from app.sheets.page import PAPERS, POINTS_PER_MM, SMALL, Page, Paper, Text
from app.sheets.paint import paint_page
from engine.store import digest

from .conftest import DAY


@pytest.fixture(scope="session")
def pdf(book, tmp_path_factory) -> pypdf.PdfReader:
    target = tmp_path_factory.mktemp("books") / "book.pdf"
    book.write(target)
    return pypdf.PdfReader(target)


@pytest.fixture(scope="session")
def texts(pdf) -> list[str]:
    """What is written on each page, every space and break as one space."""
    return [flat(page.extract_text()) for page in pdf.pages]


def flat(text: str) -> str:
    """Text with every kind of space and break as one space."""
    return " ".join(text.split())


def test_pages_have_the_size_of_their_paper(book, pdf):
    """ISO 216 and ANSI/ASME Y14.1 sizes; Qt rounds a page to whole points."""
    for page, made in zip(pdf.pages, book.pages, strict=True):
        wide, high = sorted(POINTS_PER_MM * mm for mm in PAPERS[made.paper.name])
        have = (float(page.mediabox.width), float(page.mediabox.height))
        assert sorted(have) == pytest.approx([wide, high], abs=1.0)
        assert (have[0] > have[1]) == made.paper.landscape


def test_vectors_only_and_every_font_embedded(pdf):
    fonts = 0
    for page in pdf.pages:
        resources = page["/Resources"]
        for drawn in resources.get("/XObject", {}).values():
            assert drawn.get_object()["/Subtype"] != "/Image"
        for font in resources["/Font"].values():
            descendant = font.get_object()["/DescendantFonts"][0].get_object()
            descriptor = descendant["/FontDescriptor"].get_object()
            assert "GainwrightSans" in descriptor["/FontName"]
            assert {"/FontFile", "/FontFile2", "/FontFile3"} & set(descriptor)
            fonts += 1
    assert fonts


def test_no_image_stands_anywhere_in_the_file(book, tmp_path):
    target = tmp_path / "book.pdf"
    book.write(target)
    assert b"/Subtype /Image" not in target.read_bytes()


def test_every_page_says_whose_it_is(book, texts, theatre_outcome):
    header = theatre_outcome.project.header
    for place, text in enumerate(texts, start=1):
        for wanted in (
            header.name, f"revision {header.revision}", digest(theatre_outcome.project), DAY.isoformat(), header.author,
            f"status {header.status}", f"page {place} of {len(book.pages)}", flat(CONVENTION_LINE), flat(CAUTION_LINE),
        ):  # fmt: skip
            assert wanted in text, wanted


def test_level_diagrams_name_their_paths(texts, theatre_outcome):
    stages = theatre_outcome.project.stage
    text = " ".join(texts)
    for path in theatre_outcome.paths():
        assert f"Path: {stages[path[0]].name} to {stages[path[-1]].name}" in text


def test_all_cautions_and_findings_are_printed(texts, theatre_outcome):
    text = " ".join(texts)
    for caution in CAUTIONS:
        assert flat(caution.text) in text
    for finding in theatre_outcome.findings:
        assert flat(finding.message) in text
        assert flat(finding.mend) in text


def ink_outside(page: Page, scale: float = 1.5) -> list[list[int]]:
    """Dark points (row, column) outside the margins of a page, painted at `scale` dots per point."""
    width, height = page.paper.size
    image = QImage(round(width * scale), round(height * scale), QImage.Format.Format_Grayscale8)
    image.fill(255)
    painter = QPainter(image)
    painter.scale(scale, scale)
    paint_page(painter, page)
    painter.end()
    rows = np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), image.bytesPerLine())
    dark = rows[:, : image.width()] < 250
    left, top, wide, high = (edge * scale for edge in page.paper.inside)
    dark[int(top) - 2 : int(top + high) + 3, int(left) - 2 : int(left + wide) + 3] = False
    return np.argwhere(dark)[:5].tolist()


def test_nothing_is_painted_outside_the_margins(book):
    for page in book.pages:
        assert not ink_outside(page), page.about


def test_the_type_scale_is_kept(book):
    sizes = {item.points for page in book.pages for item in page.items if isinstance(item, Text)}
    assert sizes == {8, 10, 14, 20}
    assert min(sizes) == SMALL


@pytest.mark.parametrize("name", SHEETS)
def test_each_sheet_can_be_had_alone(theatre_outcome, qapp, name):
    book = make_book(theatre_outcome, only=[name], day=DAY)
    assert book.pages
    assert len({page.title for page in book.pages}) == 1


def test_sheets_keep_the_books_order():
    assert chosen(["findings", "diagram"]) == ["diagram", "findings"]
    with pytest.raises(ValueError, match="there is no sheet 'menu': take diagram, settings"):
        chosen(["menu"])


def test_a_paper_that_is_not_kept_is_refused():
    with pytest.raises(ValueError, match="paper 'B5' is not kept here: take A4, A3, Letter"):
        Paper("B5")


def test_long_names_stay_on_the_page(theatre_outcome, qapp):
    from engine.outcome import evaluate
    from engine.project import HEADER_KEY

    project = theatre_outcome.project
    header = project.header.with_fields(
        name="The Very Old and Very Long-Named Corn Exchange and Assembly Rooms of the Lower Town",
        author="A. " + "B" * 60,
    )
    amplifier = project.stage["left_amp"]
    renamed = amplifier.with_fields(
        name="Amplifier for the upper left cluster above the proscenium arch, channel one",
        rack="Dimmer room mezzanine, rack 12, unit 34",
    )
    changed = project.with_changes({HEADER_KEY: (project.header, header), amplifier.id: (amplifier, renamed)})
    book = make_book(evaluate(changed), Paper("A4"), day=DAY)
    for page in book.pages:
        assert not ink_outside(page), page.about


def test_an_empty_project_prints_too(qapp, tmp_path):
    from engine.outcome import evaluate
    from engine.project import Project

    book = make_book(evaluate(Project()), day=DAY)
    book.write(tmp_path / "empty.pdf")
    assert book.pages


def test_a_pdf_that_cannot_be_written_says_so(theatre_outcome, qapp, tmp_path):
    book = make_book(theatre_outcome, only=["findings"], day=DAY)
    with pytest.raises(OSError, match="No such file"):
        book.write(tmp_path / "nowhere" / "x.pdf")
