"""Blocks poured into pages: heads repeat, blocks stay whole, what is bound stays together."""

from __future__ import annotations

from app.sheets.flow import Block, columns_in, pour
from app.sheets.page import Text

AREA = (10.0, 20.0, 200.0, 100.0)
HEAD = Block(10.0, (Text(0.0, 8.0, "head"),))


def named(name, height, **more):
    return Block(height, (Text(0.0, height - 2.0, name),), **more)


def texts(pages):
    return [[item.text for item in page] for page in pages]


def test_heads_repeat_and_blocks_stay_whole():
    pages = pour([named(str(n), 40.0) for n in range(5)], HEAD, AREA)
    assert texts(pages) == [["head", "0", "1"], ["head", "2", "3"], ["head", "4"]]


def test_places_are_the_areas():
    (page,) = pour([named("a", 40.0)], HEAD, AREA)
    assert (page[0].x, page[0].y) == (10.0, 28.0)
    assert (page[1].x, page[1].y) == (10.0, 20.0 + 10.0 + 38.0)


def test_a_heading_goes_with_what_follows():
    blocks = [named("a", 60.0), named("title", 20.0, keep=True), named("b", 20.0)]
    assert texts(pour(blocks, HEAD, AREA)) == [["head", "a"], ["head", "title", "b"]]


def test_a_block_taller_than_a_page_breaks_at_its_parts():
    parts = tuple(named(f"part {n}", 30.0) for n in range(5))
    tall = Block(150.0, parts=parts, again=named("again", 10.0))
    assert texts(pour([named("a", 10.0), tall], HEAD, AREA)) == [
        ["head", "a"],
        ["head", "part 0", "part 1", "part 2"],
        ["head", "again", "part 3", "part 4"],
    ]


def test_an_empty_sheet_is_one_page_with_its_head():
    assert texts(pour([], HEAD, AREA)) == [["head"]]


def test_a_wide_page_takes_two_columns():
    pages = pour([named(str(n), 40.0) for n in range(5)], HEAD, AREA, columns=2)
    assert texts(pages) == [["head", "0", "1", "head", "2", "3"], ["head", "4"]]
    lefts = {item.text: item.x for item in pages[0]}
    assert lefts["0"] == AREA[0]
    assert lefts["2"] == AREA[0] + (AREA[2] + 26.0) / 2


def test_how_many_columns_a_paper_takes():
    """A4 and Letter one either way, A3 two when it lies."""
    from app.sheets.page import Paper

    counts = {
        (name, lying): columns_in(Paper(name, lying).inside[2])
        for name in ("A4", "A3", "Letter")
        for lying in (False, True)
    }
    assert counts == {
        ("A4", False): 1, ("A4", True): 1, ("Letter", False): 1, ("Letter", True): 1, ("A3", False): 1, ("A3", True): 2,
    }  # fmt: skip
