"""The path by hand: every gesture driven with real mouse events, and what comes of it in the project."""

from __future__ import annotations

import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QAction, QContextMenuEvent, QGuiApplication, QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QMenu

from app import edits
from app.path_view.keys import described
from engine.project import Project
from tests.app.path_bench import LEFT, NONE, Bench
from tests.app.simple_kinds import ends, places

Key, Mod = Qt.Key, Qt.KeyboardModifier
CHAIN = ("line_source", "preamplifier", "mix_bus", "power_amplifier", "loudspeaker", "seat")


@pytest.fixture
def bench(qtbot) -> Bench:
    return Bench(qtbot)


@pytest.fixture
def chain(bench) -> Bench:
    return bench.build(*CHAIN)


def undone(bench: Bench, before: Project) -> None:
    """One undo brings everything back."""
    assert bench.document.undo_stack.count() == 1
    bench.document.undo()
    assert bench.project.same_as(before)


# -- from the shelf ------------------------------------------------------------------------------------------


def test_a_kind_is_dropped_on_empty_ground(bench):
    bench.drag_from_shelf("Mix bus", bench.cell(2, 1))
    assert places(bench.project) == {"mix_bus": (2, 1)}
    assert bench.selected == {"mix_bus"}
    undone(bench, Project())


def test_a_kind_is_dropped_on_a_link_and_opens_a_column(chain):
    before = chain.project
    chain.drag_from_shelf("Equaliser", chain.on_link("preamplifier", "mix_bus"))
    assert {("preamplifier", "equaliser"), ("equaliser", "mix_bus")} < ends(chain.project)
    assert places(chain.project)["equaliser"] == (2, 0)
    assert places(chain.project)["seat"] == (6, 0)
    undone(chain, before)


def test_a_kind_is_dropped_on_an_output_and_branches(chain):
    before = chain.project
    chain.drag_from_shelf("Power amplifier", chain.right_half("mix_bus"))
    assert ("mix_bus", "power_amplifier_2") in ends(chain.project)
    assert ("mix_bus", "power_amplifier") in ends(chain.project)
    assert places(chain.project)["power_amplifier_2"] == (3, 1)
    undone(chain, before)


def test_a_kind_is_dropped_ahead_of_a_bus(chain):
    chain.drag_from_shelf("Mixer channel", chain.middle("mix_bus") - QPoint(20, 8))
    assert ("mixer_channel", "mix_bus") in ends(chain.project)
    assert places(chain.project)["mixer_channel"] == (1, 1)


def test_what_is_carried_shows_where_it_would_go_and_escape_drops_it(chain):
    before = chain.project
    chain.take("Equaliser", chain.on_link("preamplifier", "mix_bus"))
    assert chain.path.hand.preview.hint == "Between Preamplifier and Mix bus"
    chain.path.grab()
    chain.key(Key.Key_Escape, on=chain.shelf.list)
    assert chain.path.hand.gesture is None
    chain.let_go(chain.on_link("preamplifier", "mix_bus"))
    assert chain.project is before


def test_a_drop_outside_the_path_does_nothing(chain):
    before = chain.project
    chain.drag_from_shelf("Equaliser", QPoint(-60, 100))
    assert chain.project is before
    assert chain.path.hand.gesture is None


def test_a_refused_drop_is_explained_in_the_engines_words(chain):
    before = chain.project
    chain.take("Seat", chain.right_half("preamplifier"))
    refusal = (
        "Preamplifier sends an analogue signal and Seat takes an acoustic one: put a loudspeaker between them"
    )
    assert chain.path.hand.preview.refusal == refusal
    chain.let_go(chain.right_half("preamplifier"))
    assert chain.path.note == refusal
    assert chain.project is before


# -- links ---------------------------------------------------------------------------------------------------


def test_a_link_is_drawn_from_port_to_port(chain):
    chain.document.edit("Add", edits.add_stage(chain.project, "mixer_channel", 1, 2))
    chain.document.undo_stack.clear()
    before = chain.project
    chain.drag(chain.output("mixer_channel"), chain.input("mix_bus"))
    assert ("mixer_channel", "mix_bus") in ends(chain.project)
    undone(chain, before)


def test_a_link_to_the_left_pushes_its_target_on(chain):
    chain.document.edit("Add", edits.add_stage(chain.project, "mixer_channel", 4, 2))
    chain.drag(chain.output("mixer_channel"), chain.middle("mix_bus"))
    assert places(chain.project)["mix_bus"] == (5, 0)
    assert places(chain.project)["seat"] == (8, 0)


def test_a_refused_link_is_explained_at_the_pointer(chain):
    before = chain.project
    chain.press_and_carry(chain.output("preamplifier"), chain.middle("seat"))
    assert "put a loudspeaker between them" in chain.path.hand.preview.refusal
    chain.path.grab()
    QTest.mouseRelease(chain.path, LEFT, NONE, chain.middle("seat"))
    assert "put a loudspeaker between them" in chain.path.note
    assert chain.project is before


def test_a_link_is_lifted_off_an_input_and_dropped(chain):
    before = chain.project
    chain.drag(chain.input("power_amplifier"), chain.cell(3, 3))
    assert ends(chain.project) == ends(before) - {("mix_bus", "power_amplifier")}
    undone(chain, before)


def test_a_link_is_selected_and_deleted(chain):
    chain.click(chain.on_link("mix_bus", "power_amplifier"))
    (key,) = chain.selected
    assert chain.project.link[key].source == "mix_bus"
    chain.key(Key.Key_Delete)
    assert ("mix_bus", "power_amplifier") not in ends(chain.project)
    assert chain.selected == {"mix_bus"}


# -- blocks --------------------------------------------------------------------------------------------------


def test_a_click_selects_a_click_with_control_adds_and_empty_ground_clears(chain):
    chain.click(chain.middle("mix_bus"))
    assert chain.selected == {"mix_bus"}
    chain.click(chain.middle("seat"), Mod.ControlModifier)
    assert chain.selected == {"mix_bus", "seat"}
    chain.click(chain.middle("mix_bus"), Mod.ShiftModifier)
    assert chain.selected == {"seat"}
    chain.click(chain.cell(2, 3))
    assert chain.selected == frozenset()


def test_a_rubber_band_selects_what_it_touches(chain):
    chain.drag(chain.cell(1, 2), chain.middle("power_amplifier"))
    assert chain.selected == {"preamplifier", "mix_bus", "power_amplifier"}
    assert chain.document.undo_stack.count() == 0


def test_a_block_is_moved_and_what_it_feeds_is_pushed_on(chain):
    before = chain.project
    chain.drag(chain.middle("mix_bus"), chain.cell(4, 1))
    assert places(chain.project)["mix_bus"] == (4, 1)
    assert places(chain.project)["power_amplifier"] == (5, 0)
    undone(chain, before)


def test_several_selected_blocks_move_together(chain):
    chain.document.select({"loudspeaker", "seat"})
    chain.drag(chain.middle("seat"), chain.middle("seat") + QPoint(0, 145))
    assert places(chain.project)["loudspeaker"] == (4, 2)
    assert places(chain.project)["seat"] == (5, 2)


def test_a_block_is_moved_into_another_link(chain):
    chain.document.edit("Add", edits.insert_on_link(chain.project, "equaliser", chain.project.links[0].id))
    target = chain.on_link("mix_bus", "power_amplifier")
    chain.drag(chain.middle("equaliser"), target)
    assert {("line_source", "preamplifier"), ("mix_bus", "equaliser")} < ends(chain.project)


def test_escape_puts_everything_back(chain):
    before = chain.project
    for start, to in (
        (chain.middle("mix_bus"), chain.cell(4, 2)),
        (chain.output("preamplifier"), chain.cell(4, 2)),
        (chain.cell(1, 3), chain.middle("seat")),
    ):
        chain.press_and_carry(start, to)
        assert chain.path.hand.gesture is not None
        chain.key(Key.Key_Escape)
        assert chain.path.hand.gesture is None
        QTest.mouseRelease(chain.path, LEFT, NONE, to)
    assert chain.project is before
    assert chain.selected == frozenset()


def test_a_name_is_typed_where_the_block_stands(chain):
    before = chain.project
    chain.click(chain.middle("mix_bus"))
    chain.key(Key.Key_F2)
    field = chain.path.findChild(QLineEdit)
    assert field.isVisible()
    assert field.accessibleName() == "Name of Mix bus"
    QTest.keyClicks(field, "Main mix")
    QTest.keyClick(field, Key.Key_Return)
    assert chain.project.stage["mix_bus"].name == "Main mix"
    assert not field.isVisible()
    undone(chain, before)


def test_a_name_may_be_dropped_and_an_empty_one_is_refused(chain):
    chain.click(chain.middle("mix_bus"))
    chain.key(Key.Key_F2)
    field = chain.path.findChild(QLineEdit)
    field.clear()
    QTest.keyClick(field, Key.Key_Return)
    assert field.isVisible()
    assert "needs a name" in chain.path.note
    QTest.keyClick(field, Key.Key_Escape)
    assert not field.isVisible()
    assert chain.project.stage["mix_bus"].name == "Mix bus"


# -- moving about --------------------------------------------------------------------------------------------


def wheel(bench: Bench, y: int, modifiers: Qt.KeyboardModifier = NONE) -> None:
    at = QPointF(300, 100)
    event = QWheelEvent(
        at, bench.path.mapToGlobal(at), QPoint(), QPoint(0, y), Qt.MouseButton.NoButton, modifiers,
        Qt.ScrollPhase.NoScrollPhase, False,
    )  # fmt: skip
    QApplication.sendEvent(bench.path, event)


def test_the_wheel_scrolls_rows_columns_and_zooms_without_scaling_type(bench):
    bench.build(*CHAIN)
    bench.document.edit("Add", edits.add_stage(bench.project, "mix_bus", 30, 20))
    wheel(bench, -240)
    assert bench.path.grid.top_px == 144.0
    wheel(bench, -120, Mod.ShiftModifier)
    assert bench.columns.scroll_px == bench.columns.pitch_px
    before = bench.path.place(300, 100)[0]
    wheel(bench, -360, Mod.ControlModifier)
    assert bench.columns.pitch_px < 112
    assert bench.path.place(300, 100)[0] == before
    assert bench.path.grid.scale.detail == "full"
    wheel(bench, -1800, Mod.ControlModifier)
    assert bench.path.grid.scale.detail == "bare"
    bench.path.grab()


def test_a_new_selection_is_scrolled_into_view(bench):
    bench.build(*CHAIN)
    bench.document.edit("Add", edits.add_stage(bench.project, "mix_bus", 30, 20))
    bench.document.select({"mix_bus_2"})
    assert bench.path.rect().contains(bench.middle("mix_bus_2"))
    bench.document.select({"line_source"})
    assert bench.path.rect().contains(bench.middle("line_source"))


def test_carrying_to_the_edge_brings_more_into_view(bench, qtbot):
    bench.build(*CHAIN)
    bench.document.edit("Add", edits.add_stage(bench.project, "mix_bus", 30, 1))
    bench.press_and_carry(bench.middle("line_source"), QPoint(bench.path.width() - 5, 100))
    qtbot.waitUntil(lambda: bench.columns.scroll_px > 50)
    bench.key(Key.Key_Escape)


def menu_at(bench: Bench, at: QPoint) -> QMenu:
    """The menu that a right click opens there."""
    event = QContextMenuEvent(QContextMenuEvent.Reason.Mouse, at, bench.path.mapToGlobal(at))
    QApplication.sendEvent(bench.path, event)
    return bench.path.findChildren(QMenu, options=Qt.FindChildOption.FindDirectChildrenOnly)[-1]


def submenu(menu: QMenu, text: str) -> dict[str, QAction]:
    """The lines of a submenu, as if it had just been opened."""
    below = next(action for action in menu.actions() if action.text() == text).menu()
    assert isinstance(below, QMenu)
    below.aboutToShow.emit()
    return {action.text(): action for action in below.actions()}


@pytest.fixture
def no_popup(monkeypatch):
    """The offscreen platform cannot raise a menu: leave it unshown."""
    monkeypatch.setattr(QMenu, "popup", lambda _menu, _at: None)


@pytest.mark.usefixtures("no_popup")
def test_the_context_menu_offers_only_kinds_that_fit(chain):
    menu = menu_at(chain, chain.on_link("loudspeaker", "seat"))
    names = [action.text() for action in menu.actions()]
    assert names[0] == "Insert"
    assert "Wiring" in names
    assert "Delete link" in names
    menu = menu_at(chain, chain.middle("preamplifier"))
    assert chain.selected == {"preamplifier"}
    offered = submenu(menu, "Add behind")
    assert "Seat" not in offered
    offered["Equaliser"].trigger()
    assert ("preamplifier", "equaliser") in ends(chain.project)


@pytest.mark.usefixtures("no_popup")
def test_the_menu_of_a_link_changes_its_wiring_and_the_menu_of_the_ground_adds(chain):
    wiring = submenu(menu_at(chain, chain.on_link("mix_bus", "power_amplifier")), "Wiring")
    wiring["One leg"].trigger()
    assert [link.wiring for link in chain.project.links].count("one leg") == 1
    submenu(menu_at(chain, chain.cell(3, 2)), "Add here")["Mixer channel"].trigger()
    assert places(chain.project)["mixer_channel"] == (3, 2)


def test_copy_leaves_text_on_the_clipboard(chain):
    chain.document.select({"mix_bus"})
    chain.path.commands.copy()
    assert '"mix_bus"' in QGuiApplication.clipboard().text()


def test_a_slider_repaints_one_block_only(chain, monkeypatch):
    asked: list[tuple[int, ...]] = []
    monkeypatch.setattr(chain.path, "update", lambda *area: asked.append(area))
    name = next(iter(chain.project.stage["mix_bus"].control_specs()))
    chain.document.edit("Fader", edits.set_control(chain.project, "mix_bus", name, -10.0))
    assert len(asked) == 1
    assert len(asked[0]) == 4


def test_a_new_user_is_told_in_one_sentence_what_to_do(bench):
    from app.path_view.paint import EMPTY

    assert EMPTY.count(".") == 1
    assert bench.path.accessibleDescription() == "Empty: add a first stage from the shelf"
    empty = bench.path.grab().toImage()
    bench.build("mix_bus")
    assert bench.path.grab().toImage() != empty


def test_the_path_that_the_diagram_follows_is_drawn_stronger(chain):
    plain = chain.path.grab().toImage()
    chain.path.show_path(CHAIN[:3])
    assert chain.path.shown == {("line_source", "preamplifier"), ("preamplifier", "mix_bus")}
    assert chain.path.grab().toImage() != plain


def test_many_alike_are_marked_on_the_block(chain):
    one = chain.path.grab().toImage()
    chain.document.edit("Count", edits.set_count(chain.project, ["line_source", "preamplifier"], 8))
    assert chain.path.grab().toImage() != one
    assert "8 alike" in described(chain.project, "preamplifier", ())


def test_in_every_gap_the_link_can_be_hit_and_both_ports_beside_it(chain):
    for pitch_factor in (1.0, 0.6):
        chain.columns.zoom_by(pitch_factor, 0.0)
        assert chain.path.hit(*chain.on_link("preamplifier", "mix_bus").toTuple()).what == "link"
        assert chain.path.hit(*chain.output("preamplifier").toTuple()).what == "output"
        assert chain.path.hit(*chain.input("mix_bus").toTuple()).what == "input"
        assert chain.path.hit(*chain.middle("mix_bus").toTuple()).what == "stage"


def test_lines_of_the_shelf_are_44_px_for_fingers(bench):
    bench.shelf.set_touch(True)
    QApplication.processEvents()
    heights = {bench.shelf.list.visualItemRect(bench.item(title)).height() for title in ("Mix bus", "Seat")}
    assert heights == {44 + 4}


# -- fingers -------------------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def finger(qapp):
    return QTest.createTouchDevice()


def stroke(bench: Bench, finger, *points: QPoint) -> None:
    """One finger comes down, goes along and is lifted."""
    QTest.touchEvent(bench.path, finger).press(0, points[0], bench.path).commit()
    for at in points[1:]:
        QTest.touchEvent(bench.path, finger).move(0, at, bench.path).commit()
    QTest.touchEvent(bench.path, finger).release(0, points[-1], bench.path).commit()


def test_a_finger_selects_and_moves_a_block_and_pans_the_ground(chain, finger):
    stroke(chain, finger, chain.middle("mix_bus"))
    assert chain.selected == {"mix_bus"}
    stroke(chain, finger, chain.middle("mix_bus"), chain.middle("mix_bus") + QPoint(0, 30), chain.cell(2, 1))
    assert places(chain.project)["mix_bus"] == (2, 1)
    chain.document.edit("Add", edits.add_stage(chain.project, "mix_bus", 30, 1))
    ground = chain.cell(3, 4)
    stroke(chain, finger, ground, ground - QPoint(20, 0), ground - QPoint(90, 0))
    assert chain.columns.scroll_px == 90
    assert chain.selected == {"mix_bus"}


def test_two_fingers_pinch_to_zoom(chain, finger):
    before = chain.columns.pitch_px
    a, b = QPoint(200, 200), QPoint(300, 200)
    QTest.touchEvent(chain.path, finger).press(0, a, chain.path).press(1, b, chain.path).commit()
    for spread in (60, 50):
        pair = QTest.touchEvent(chain.path, finger)
        pair.move(0, a, chain.path).move(1, a + QPoint(spread, 0), chain.path).commit()
    QTest.touchEvent(chain.path, finger).release(0, a, chain.path).release(1, b, chain.path).commit()
    assert chain.columns.pitch_px == pytest.approx(before * 50 / 60)


@pytest.mark.usefixtures("no_popup")
def test_a_finger_that_rests_opens_the_menu(chain, finger, qtbot):
    QTest.touchEvent(chain.path, finger).press(0, chain.middle("mix_bus"), chain.path).commit()
    qtbot.waitUntil(lambda: bool(chain.path.findChildren(QMenu)))
    QTest.touchEvent(chain.path, finger).release(0, chain.middle("mix_bus"), chain.path).commit()
    assert chain.selected == {"mix_bus"}
