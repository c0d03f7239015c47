"""The first venue is built and printed with key events only."""

from __future__ import annotations

import pytest
from pypdf import PdfReader
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from app import places
from app.document import Document
from app.window import MainWindow
from engine import store
from engine.outcome import evaluate
from engine.project import Project
from tests.app.keyboard_hand import Keyboard
from tests.app.window_hand import Answers

# The offscreen platform cannot raise a menu, nor take the keyboard for it.
pytestmark = pytest.mark.qt_log_ignore("does not support (raise|grabbing)", extend=True)


def levels(project: Project) -> dict[tuple[str, str, str], tuple[float | None, ...]]:
    """Every node's numbers, by the stage's name."""
    return {
        (node.name, node.direction, node.port): (node.level, node.peak, node.clip, node.noise)
        for node in evaluate(project).nodes
    }


def wires(project: Project) -> set[tuple[str, ...]]:
    """Every link by the names of its ends, its ports, its wiring and its distance."""
    return {
        (
            project.stage[link.source].name, link.output, project.stage[link.target].name, link.input, link.wiring,
            link.distance_m.text if link.distance_m else "",
        )
        for link in project.links
    }  # fmt: skip


@pytest.mark.slow
def test_the_first_venue_is_built_and_printed_with_keys_only(qtbot, tmp_path):
    wanted, _ = store.read(places.sample_projects()[0])
    answers = Answers()
    window = MainWindow(Document(), answers)
    qtbot.addWidget(window)
    window.show()
    qtbot.waitExposed(window)
    window.activateWindow()
    qtbot.waitUntil(window.isActiveWindow)
    window.centre.path.setFocus()
    hand = Keyboard(window)
    hand.build(wanted)

    built = window.document.project
    assert wires(built) == wires(wanted)
    for stage in wanted.stages:
        made = next(each for each in built.stages if each.name == stage.name)
        assert (made.kind, made.column, made.row, made.count) == (
            stage.kind,
            stage.column,
            stage.row,
            stage.count,
        )
        for name, _, setting in stage.controls():
            assert getattr(made, name).value == setting.value, f"{stage.name}, {name}"
        typed = {name: figure.text for name, _, figure in stage.figures()}
        assert {name: figure.text for name, _, figure in made.figures()} == typed, stage.name
        for name in stage.option_specs():
            assert getattr(made, name) == getattr(stage, name), f"{stage.name}, {name}"
    found = levels(built)
    for node, numbers in levels(wanted).items():
        assert found[node] == pytest.approx(numbers, abs=1e-6), node

    answers.path = tmp_path / "sheets.pdf"
    QTest.keyClick(
        hand.focused, Qt.Key.Key_E, Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier
    )
    assert len(PdfReader(answers.path).pages) > 3
    assert hand.pressed > 1000
