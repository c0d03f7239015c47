"""The diagram in the window, driven as by a hand."""

from __future__ import annotations

import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtTest import QTest

from app.columns import Columns
from app.diagram.widget import DiagramView
from app.document import Document
from app.inks import LIGHT
from tests.app.diagram.chains import chain


@pytest.fixture
def view(qtbot):
    document, columns = Document(chain()), Columns()
    columns.set_extent(10, 1200.0)
    shown = DiagramView(document, columns, LIGHT)
    shown.document_ = document  # keep both alive with the view
    qtbot.addWidget(shown)
    shown.resize(1200, 500)
    shown.show()
    qtbot.waitExposed(shown)
    return shown


def spot(view: DiagramView, stage: str, direction: str) -> QPoint:
    place = next(p for p in view.geometry_.places if (p.node.stage, p.node.direction) == (stage, direction))
    return QPointF(place.x, view.geometry_.y_of(place, "level")).toPoint()


def test_dragging_a_level_moves_the_nearest_control_in_one_undo_entry(view):
    """The preamplifier's output is taken and lifted by about 6 dB on the gain's own steps."""
    document = view.document
    before = document.project.stage["preamplifier-2"].gain_db.value
    level = document.outcome.node("preamplifier-2", "out").level
    at = spot(view, "preamplifier-2", "out")
    pixels = round(6.0 * view.geometry_.scale.db_px)
    QTest.mousePress(view, Qt.MouseButton.LeftButton, pos=at)
    for step in range(1, pixels + 1):
        QTest.mouseMove(view, at - QPoint(0, step))
    QTest.mouseRelease(view, Qt.MouseButton.LeftButton, pos=at - QPoint(0, pixels))
    after = document.project.stage["preamplifier-2"].gain_db.value
    assert after == pytest.approx(before + 6.0, abs=0.6)
    assert document.outcome.node("preamplifier-2", "out").level == pytest.approx(
        level + after - before, abs=0.05
    )
    assert document.undo_stack.count() == 1
    document.undo()
    assert document.project.stage["preamplifier-2"].gain_db.value == before


def test_scales_keep_still_while_the_hand_moves(view):
    at = spot(view, "power_amplifier-6", "out")
    before = view.geometry_.scale.range
    QTest.mousePress(view, Qt.MouseButton.LeftButton, pos=at)
    for step in range(1, 60):
        QTest.mouseMove(view, at + QPoint(0, step))
    view.document.flush()
    assert view.geometry_.scale.range == before
    QTest.mouseRelease(view, Qt.MouseButton.LeftButton, pos=at + QPoint(0, 60))


def test_a_level_with_nothing_free_ahead_says_so(view, qtbot):
    document = view.document
    locked = {}
    for stage in document.project.stages:
        fields = {n: s.model_copy(update={"state": "locked"}) for n, _, s in stage.controls()}
        if fields:
            locked[stage.id] = (stage, stage.with_fields(**fields))
    document.edit("Lock all", locked)
    document.flush()
    with qtbot.waitSignal(view.said) as said:
        QTest.mousePress(view, Qt.MouseButton.LeftButton, pos=spot(view, "mix_bus-4", "out"))
    assert "free to move" in said.args[0]
    QTest.mouseRelease(view, Qt.MouseButton.LeftButton, pos=spot(view, "mix_bus-4", "out"))


def test_arrow_keys_walk_the_nodes_and_move_levels(view):
    document = view.document
    view.setFocus()
    QTest.keyClick(view, Qt.Key.Key_End)
    assert document.selection == {"seat-9"}
    assert "Seat" in view.accessibleDescription()
    level = document.outcome.seats[0].level
    QTest.keyClick(view, Qt.Key.Key_Down)
    assert document.outcome.seats[0].level == pytest.approx(level - 1.0, abs=0.51)
    QTest.keyClick(view, Qt.Key.Key_Home)
    assert document.selection == {"sound_source-0"}


def test_clicking_beside_a_level_selects_its_stage(view):
    at = spot(view, "processor-5", "out")
    QTest.mouseClick(view, Qt.MouseButton.LeftButton, pos=QPoint(at.x(), 30))
    assert view.document.selection == {"processor-5"}


def test_hovering_shows_everything_at_a_node_and_paints_in_every_unit_and_view(view, qtbot):
    QTest.mouseMove(view, spot(view, "processor-5", "out"))
    assert view._hover is not None
    for unit in ("dBV", "V", "dBu"):
        view.set_unit(unit)
        view.grab()
    view.set_view("to clip")
    view.hold(True)
    view.grab()
    assert view.geometry_.left_title == "dB re clip point"
    view.set_view("levels")
    view.hold(False)


def test_one_control_move_paints_once(view, qtbot):
    document = view.document
    view.grab()
    qtbot.wait(50)
    before = view.paints
    stage = document.project.stage["preamplifier-2"]
    document.edit("Gain", {stage.id: (stage, stage.with_control("gain_db", 31.0))}, gesture="test")
    qtbot.waitUntil(lambda: view.paints > before, timeout=2000)
    qtbot.wait(60)
    assert view.paints == before + 1
