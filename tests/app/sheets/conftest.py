"""The sample theatre solved once, and its book on several papers."""

from __future__ import annotations

from datetime import date
from pathlib import Path

import pytest

from app.sheets.book import Book, make_book
from app.sheets.page import Paper
from engine.outcome import Outcome, evaluate
from engine.store import read

SAMPLES = Path(__file__).parents[3] / "sample_projects"
DAY = date(2026, 3, 14)
PAPERS = [Paper("A4"), Paper("A4", True), Paper("A3", True), Paper("Letter")]


@pytest.fixture(scope="session")
def theatre_outcome() -> Outcome:
    return evaluate(read(SAMPLES / "theatre.gainwright")[0])


@pytest.fixture(
    scope="session", params=PAPERS, ids=lambda paper: f"{paper.name}{' landscape' * paper.landscape}"
)
def book(request, theatre_outcome, qapp) -> Book:
    return make_book(theatre_outcome, request.param, day=DAY)
