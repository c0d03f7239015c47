"""The window as a hand finds it: a chain is built, slid, undone, saved and opened again with real events."""

from __future__ import annotations

import gc

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QSlider

from app import places
from app.document import Document
from app.inks import SCHEMES
from app.memory import Memory
from app.window import MainWindow
from engine import store
from engine.project import Project
from engine.stages import template
from tests.app.window_hand import Key, Mod, add, chain, focused, keys


# -- the main job --------------------------------------------------------------------------------------------
def test_build_slide_undo_save_and_open_again(window, answers, tmp_path, qtbot):
    window.centre.path.setFocus()
    for title in ("Sound source", "Microphone", "Preamplifier"):
        add(window, title)
    document = window.document
    assert [stage.kind for stage in document.project.stages] == ["sound_source", "microphone", "preamplifier"]
    assert len(document.project.links) == 2

    pre = document.project.stages[2].id
    before = document.project
    document.flush()
    level = document.outcome.node(pre, "out").level
    document.select([pre])
    sliders = [slider for slider in window.side.card.findChildren(QSlider) if slider.isVisible()]
    assert sliders, "the card shows the preamplifier's gain as a slider"
    gain = next(slider for slider in sliders if "ain" in slider.accessibleName())
    gain.setFocus()
    for _ in range(6):
        keys(gain, Key.Key_Right)
    document.end_gesture()
    moved = document.project.stage[pre].gain_db.value - before.stage[pre].gain_db.value
    assert moved == pytest.approx(6.0)
    assert document.outcome.node(pre, "out").level == pytest.approx(level + 6.0, abs=1e-6)

    keys(window, Key.Key_Z, modifiers=Mod.ControlModifier)
    while document.project.stage[pre].gain_db != before.stage[pre].gain_db:
        assert document.undo_stack.canUndo()
        keys(window, Key.Key_Z, modifiers=Mod.ControlModifier)
    assert document.project.same_as(before)

    answers.path = tmp_path / "hall.gainwright"
    keys(window, Key.Key_S, modifiers=Mod.ControlModifier)
    assert not document.modified
    assert store.read(answers.path)[0].same_as(document.project)

    keys(window, Key.Key_N, modifiers=Mod.ControlModifier)
    assert document.project.stages == ()
    keys(window, Key.Key_O, modifiers=Mod.ControlModifier)
    assert document.project.same_as(before)
    assert document.path == answers.path


def test_a_kind_dragged_from_the_shelf_lands_on_the_path(window, qtbot):
    kinds = window.shelf.list
    item = kinds.item(1)
    start = kinds.visualItemRect(item).center()
    path = window.centre.path
    end = path.mapToGlobal(QPoint(path.width() // 3, path.height() // 3))
    viewport = kinds.viewport()
    QTest.mousePress(viewport, Qt.MouseButton.LeftButton, Mod.NoModifier, start)
    for step in (0.3, 0.6, 1.0):
        at = viewport.mapFromGlobal(end)
        QTest.mouseMove(
            viewport, start + QPoint(round((at.x() - start.x()) * step), round((at.y() - start.y()) * step))
        )
    QTest.mouseRelease(viewport, Qt.MouseButton.LeftButton, Mod.NoModifier, viewport.mapFromGlobal(end))
    assert len(window.document.project.stages) == 1


# -- looking -------------------------------------------------------------------------------------------------
def test_path_and_diagram_share_columns_scroll_and_zoom(window, qtbot):
    stages = tuple(template("pad", f"pad-{n}", column=n) for n in range(30))
    window.document.load(Project(stages=stages), None)
    centre = window.centre
    centre.zoom(3.0)
    qtbot.waitUntil(centre.bar.isVisible)
    centre.bar.setValue(centre.bar.maximum())
    assert centre.columns.scroll_px == pytest.approx(centre.columns.most_scroll_px, abs=1.0)
    centre.fit()
    assert centre.columns.x_out(29) <= centre.path.width()
    left = centre.path.mapTo(window, QPoint(0, 0)).x()
    assert left == centre.diagram.mapTo(window, QPoint(0, 0)).x()
    assert centre.path.width() == centre.diagram.width()


def test_the_whole_path_stays_in_view_until_a_hand_zooms(window, qtbot):
    window.document.load(
        Project(stages=tuple(template("pad", f"pad-{n}", column=n) for n in range(14))), None
    )
    centre = window.centre
    centre.fit()
    for width in (1900, 1100, 1500):
        window.resize(width, 800)
        qtbot.waitUntil(lambda: abs(centre.columns.x_out(13) + 100 - centre.path.width()) < 40)
    centre.zoom(1.3)
    pitch = centre.columns.pitch_px
    window.resize(1300, 800)
    QApplication.processEvents()
    assert centre.columns.pitch_px == pitch


@pytest.mark.parametrize("scheme", list(SCHEMES))
def test_every_scheme_dresses_the_whole_window(window, scheme):
    window.actions_[f"scheme {scheme}"].trigger()
    inks = SCHEMES[scheme]
    shown = window.grab().toImage()
    ratio = shown.devicePixelRatio()
    for widget in (window.top, window.shelf, window.side, window.bottom):
        at = widget.mapTo(window, QPoint(2, widget.height() - 6))
        found = shown.pixelColor(round(at.x() * ratio), round(at.y() * ratio))
        assert found in (inks.paper, inks.raised), (
            f"{widget.objectName() or type(widget).__name__}: {found.name()}"
        )
    assert Memory().text("scheme") == scheme


def test_units_views_and_held_trace_reach_the_diagram(window):
    window.document.load(chain(), None)
    keys(window, Key.Key_3, modifiers=Mod.ControlModifier)
    assert window.centre.diagram.look.unit == "V"
    keys(window, Key.Key_5, modifiers=Mod.ControlModifier)
    assert window.centre.diagram.look.view == "to clip"
    keys(window, Key.Key_H, modifiers=Mod.ControlModifier)
    assert window.centre.diagram.held is window.document.outcome
    window.files.new()
    assert window.centre.diagram.held is None


def test_f6_goes_round_the_parts_of_the_window(window):
    window.document.load(chain(), None)
    window.document.select(["pre"])
    window.centre.path.setFocus()
    seen = []
    for _ in range(5):
        keys(focused(), Key.Key_F6)
        seen.append(
            next(pane for pane in window.panes() if pane is focused() or pane.isAncestorOf(focused()))
        )
    assert len(set(map(id, seen))) >= 4
    keys(focused(), Key.Key_F6, modifiers=Mod.ShiftModifier)
    assert focused() is not window


def test_the_chart_comes_after_the_first_frame(window, qtbot):
    qtbot.waitUntil(lambda: window.side.chart is not None, timeout=10_000)


def test_the_windows_place_is_remembered(qtbot, answers):
    first = MainWindow(Document(), answers)
    qtbot.addWidget(first)
    first.resize(1200, 700)  # the offscreen screen is narrower than any window of ours: the height tells
    first.show()
    first.close()
    second = MainWindow(Document(), answers)
    qtbot.addWidget(second)
    assert second.height() == 700


def test_a_damaged_memory_is_forgotten(qtbot, answers):
    places.data().mkdir(parents=True)
    (places.data() / "window.json").write_text(
        '{"recent": 5, "geometry": "%%%", "scheme": ["x"]}', encoding="utf-8"
    )
    window = MainWindow(Document(), answers)
    qtbot.addWidget(window)
    window.show()
    assert Memory().recent == ()
    (places.data() / "window.json").write_text("{", encoding="utf-8")
    assert Memory().text("scheme") == ""


def test_the_first_start_says_what_to_heed_once(window):
    window.greet()
    assert "start 20" in window.notice.text
    window.notice.hide()
    window.greet()
    assert window.notice.text == ""


def test_the_venue_is_edited_in_the_card(window):
    window.document.load(chain(), None)
    window.document.select(["pre"])
    keys(window, Key.Key_F4)
    assert window.document.selection == frozenset()
    name = next(
        field for field in window.side.card.findChildren(QLineEdit) if field.text() == "Untitled venue"
    )
    name.setFocus()
    name.selectAll()
    QTest.keyClicks(name, "Harbour Hall")
    keys(name, Key.Key_Return)
    assert window.document.project.header.name == "Harbour Hall"
    assert "Harbour Hall" in window.top.venue.accessibleName()


@pytest.mark.parametrize("name", ["about", "keys"])
def test_help_opens_beside_the_work(window, name, qtbot):
    window.actions_[name].trigger()
    from PySide6.QtWidgets import QDialog

    dialog = next(widget for widget in window.findChildren(QDialog) if widget.isVisible())
    dialog.close()


# -- paper ---------------------------------------------------------------------------------------------------
def test_sheets_and_diagram_are_written_where_the_person_says(window, answers, tmp_path):
    window.files.open_copy(places.sample_projects()[0])
    answers.path = tmp_path / "sheets.pdf"
    keys(window, Key.Key_E, modifiers=Mod.ControlModifier | Mod.ShiftModifier)
    assert answers.path.read_bytes().startswith(b"%PDF")
    assert str(answers.path) in window.notice.text
    answers.path = tmp_path / "levels.png"
    keys(window, Key.Key_E, modifiers=Mod.ControlModifier)
    assert answers.path.read_bytes().startswith(b"\x89PNG")
    answers.path = tmp_path / "gone" / "levels.png"
    window.actions_["diagram"].trigger()
    assert answers.asked[-1].startswith("tell: levels.png was not written")


def test_preview_and_print_dialog_stay_as_long_as_they_are_open(window, qtbot, monkeypatch):
    from PySide6.QtPrintSupport import QPrintDialog, QPrintPreviewDialog

    window.files.open_copy(places.sample_projects()[0])
    for name, kind in (("preview", QPrintPreviewDialog), ("print", QPrintDialog)):
        window.actions_[name].trigger()
        gc.collect()  # a printer that nobody keeps would be gone now, and the dialog crash
        dialog = window.findChild(kind)
        qtbot.waitUntil(dialog.isVisible)
        QApplication.processEvents()
        dialog.close()


def test_shortcuts_are_unique(window):
    taken: dict[str, str] = {}
    for name, action in window.actions_.items():
        for key in action.shortcuts():
            text = key.toString()
            assert text not in taken, f"{text}: {name} and {taken[text]}"
            taken[text] = name
