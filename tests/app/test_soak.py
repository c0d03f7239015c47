"""A long evening: many moves of a control, and nothing is lost or gathered."""

from __future__ import annotations

import gc
import sys

from PySide6.QtWidgets import QApplication

from app.columns import Columns
from app.diagram.widget import DiagramView
from app.document import Document
from app.inks import LIGHT
from tests.app.diagram.chains import chain

MOVES = 20_000
PAINT_EVERY = 100


def test_20_000_control_moves_lose_no_reference_to_none(qtbot):
    """PySide6 6.12 on Python 3.11 releases None once too often per slot call: the interpreter would abort on the way.

    From Python 3.12 on None is immortal and its count a constant; there the run itself is the guard.
    """
    document, columns = (
        Document(chain(("line_source", "mixer_channel", "power_amplifier", "loudspeaker", "seat"))),
        Columns(),
    )
    view = DiagramView(document, columns, LIGHT)
    qtbot.addWidget(view)
    view.resize(600, 300)
    view.show()
    key = document.project.topology.order[1]

    def move(times: int) -> None:
        for step in range(times):
            stage = document.project.stage[key]
            document.edit(
                "Fader", {key: (stage, stage.with_control("fader_db", -20.0 + step % 20))}, gesture="soak"
            )
            if step % PAINT_EVERY == 0:
                document.flush()
                QApplication.processEvents()
        document.end_gesture()

    move(500)
    gc.collect()
    before = sys.getrefcount(None)
    move(MOVES)
    gc.collect()
    after = sys.getrefcount(None)
    assert abs(after - before) < 200
    assert document.undo_stack.count() <= 2
