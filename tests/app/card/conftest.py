"""A card beside a document, and where its rows are."""

from __future__ import annotations

from typing import Any

import pytest
from PySide6.QtWidgets import QApplication

from app import style
from app.card import StageCard
from app.card.control_row import ControlRow
from app.card.figure_row import FigureRow
from app.document import Document
from app.inks import LIGHT
from tests.app.diagram.chains import chain


class Bench:
    """A shown card, 300 px wide as in the window, on the whole chain."""

    def __init__(self, qtbot, project=None) -> None:
        style.apply(QApplication.instance(), LIGHT)
        self.document = Document(project or chain())
        self.card = StageCard(self.document, LIGHT)
        self.card.resize(300, 640)
        qtbot.addWidget(self.card)
        self.card.show()
        qtbot.waitExposed(self.card)
        self.card.activateWindow()

    def select(self, *kinds: str) -> Bench:
        self.document.select([self.key(kind) for kind in kinds])
        return self

    def key(self, kind: str) -> str:
        return next(stage.id for stage in self.document.project.stages if stage.kind == kind)

    def stage(self, kind: str):
        return self.document.project.stage[self.key(kind)]

    def row(self, name: str) -> Any:
        return next(row for row in self.card.pane.rows if getattr(row, "name", None) == name)

    def control(self, name: str) -> ControlRow:
        return self.row(name)

    def figure(self, name: str) -> FigureRow:
        return self.row(name)

    @property
    def entries(self) -> int:
        return self.document.undo_stack.count()


@pytest.fixture
def bench(qtbot):
    made = Bench(qtbot)
    yield made
    QApplication.instance().setStyleSheet("")
