"""The path by keyboard alone: everything the hand can do, with key events only."""

from __future__ import annotations

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QMenu

from app import edits
from tests.app.path_bench import Bench
from tests.app.simple_kinds import ends, places

Key, Mod = Qt.Key, Qt.KeyboardModifier
CHAIN = ("line_source", "preamplifier", "mix_bus", "power_amplifier", "loudspeaker", "seat")


@pytest.fixture
def bench(qtbot) -> Bench:
    return Bench(qtbot)


@pytest.fixture
def chain(bench) -> Bench:
    bench.build(*CHAIN)
    bench.document.select({"mix_bus"})
    return bench


def choose(bench: Bench, words: str, *keys: Qt.Key, modifiers: Qt.KeyboardModifier = Mod.NoModifier) -> None:
    """Type to find a kind on the shelf, then press keys in the filter."""
    bench.shelf.filter.clear()
    bench.shelf.setFocus()
    QTest.keyClicks(bench.shelf.list, words[0])
    QTest.keyClicks(bench.shelf.filter, words[1:])
    for key in keys:
        QTest.keyClick(bench.shelf.filter, key, modifiers)


def test_a_chain_is_built_by_finding_and_enter(bench):
    for words in ("line source", "preamp", "mix bus", "power amp", "loudspeaker", "seat"):
        choose(bench, words, Key.Key_Return)
    assert [stage.kind for stage in bench.project.stages] == list(CHAIN)
    assert len(bench.project.links) == 5
    assert list(places(bench.project).values()) == [(at, 0) for at in range(6)]


def test_enter_inserts_shift_branches_control_comes_ahead(chain):
    choose(chain, "equaliser", Key.Key_Return)
    assert {("mix_bus", "equaliser"), ("equaliser", "power_amplifier")} < ends(chain.project)
    chain.document.select({"mix_bus"})
    choose(chain, "power amp", Key.Key_Return, modifiers=Mod.ShiftModifier)
    assert ("mix_bus", "power_amplifier_2") in ends(chain.project)
    chain.document.select({"mix_bus"})
    choose(chain, "mixer channel", Key.Key_Return, modifiers=Mod.ControlModifier)
    assert ("mixer_channel", "mix_bus") in ends(chain.project)


def test_what_does_not_fit_stands_unlinked_and_says_why(chain):
    choose(chain, "seat", Key.Key_Return)
    assert "seat_2" in chain.project.stage
    assert chain.path.note.startswith("Seat stands unlinked. Mix bus sends an analogue signal")


def test_the_shelf_is_walked_with_arrows_and_insert_adds(bench):
    bench.shelf.setFocus()
    first = bench.shelf.list.currentItem().text()
    bench.key(Key.Key_Down, on=bench.shelf.list)
    assert bench.shelf.list.currentItem().text() != first
    bench.key(Key.Key_Insert, on=bench.shelf.list)
    assert len(bench.project.stages) == 1


def test_the_filter_hides_what_does_not_match_and_escape_shows_all(bench):
    choose(bench, "amp")
    shown = [bench.shelf.list.item(at).text() for at in range(bench.shelf.list.count())
             if not bench.shelf.list.item(at).isHidden()]  # fmt: skip
    assert "Power amplifier" in shown
    assert "Seat" not in shown
    assert "Places" not in shown
    QTest.keyClick(bench.shelf.filter, Key.Key_Escape)
    assert not bench.item("Seat").isHidden()


def test_a_double_click_on_the_shelf_adds(bench):
    at = bench.entry("Mix bus")
    view = bench.shelf.list.viewport()
    QTest.mouseClick(view, Qt.MouseButton.LeftButton, Mod.NoModifier, at)
    QTest.mouseDClick(view, Qt.MouseButton.LeftButton, Mod.NoModifier, at)
    assert list(bench.project.stage) == ["mix_bus"]


def test_arrows_follow_the_links(chain):
    chain.document.edit("Branch", edits.branch_from(chain.project, "power_amplifier", "mix_bus"))
    chain.key(Key.Key_Right)
    assert chain.selected == {"power_amplifier"}
    chain.key(Key.Key_Down)
    assert chain.selected == {"power_amplifier_2"}
    chain.key(Key.Key_Left, Key.Key_Left)
    assert chain.selected == {"preamplifier"}
    chain.key(Key.Key_Right, modifiers=Mod.ShiftModifier)
    assert chain.selected == {"preamplifier", "mix_bus"}
    chain.key(Key.Key_End)
    assert chain.selected == {"seat"}
    chain.key(Key.Key_Home)
    assert chain.selected == {"line_source"}
    chain.key(Key.Key_A, modifiers=Mod.ControlModifier)
    assert len(chain.selected) == 7
    chain.key(Key.Key_Escape)
    assert chain.selected == frozenset()
    chain.key(Key.Key_Right)
    assert chain.selected == {"line_source"}


def test_control_and_arrows_select_a_link_and_go_through_its_fan(chain):
    chain.document.edit("Branch", edits.branch_from(chain.project, "power_amplifier", "mix_bus"))
    chain.key(Key.Key_Right, modifiers=Mod.ControlModifier)
    first = next(iter(chain.selected))
    assert chain.project.link[first].target == "power_amplifier"
    chain.key(Key.Key_Down)
    second = next(iter(chain.selected))
    assert chain.project.link[second].target == "power_amplifier_2"
    chain.key(Key.Key_Delete)
    assert ("mix_bus", "power_amplifier_2") not in ends(chain.project)
    chain.key(Key.Key_Right, modifiers=Mod.ControlModifier)
    chain.key(Key.Key_Right)
    assert chain.selected == {"power_amplifier"}


def test_l_starts_a_link_arrows_choose_and_enter_makes_it(chain):
    chain.document.edit("Add", edits.add_stage(chain.project, "mixer_channel", 1, 1))
    chain.document.select({"mixer_channel"})
    chain.key(Key.Key_L)
    chain.path.grab()
    assert chain.path.hand.preview.target.id == "mix_bus"
    chain.key(Key.Key_Right)
    assert "already has Mix bus at this input" in chain.path.hand.preview.refusal
    chain.key(Key.Key_Return)
    assert ("mixer_channel", "power_amplifier") not in ends(chain.project)
    chain.key(Key.Key_Left, Key.Key_Return)
    assert ("mixer_channel", "mix_bus") in ends(chain.project)
    assert chain.path.hand.link_keys is None


def test_escape_leaves_a_link_and_l_goes_through_the_outputs(chain):
    chain.document.edit("Add", edits.add_stage(chain.project, "splitter", 1, 1))
    chain.document.select({"splitter"})
    before = chain.project
    chain.key(Key.Key_L)
    first = chain.path.hand.link_keys.output
    chain.key(Key.Key_L)
    assert chain.path.hand.link_keys.output != first
    chain.key(Key.Key_Escape)
    assert chain.path.hand.link_keys is None
    assert chain.project is before
    assert chain.selected == {"splitter"}


def test_a_link_from_the_end_of_a_path_says_why_not(chain):
    chain.document.select({"seat"})
    chain.key(Key.Key_L)
    assert chain.path.note == "Seat has no output: a path ends at it, so nothing can follow"


def test_delete_joins_the_neighbours_and_selects_one(chain):
    choose(chain, "equaliser", Key.Key_Return)
    chain.document.select({"equaliser"})
    chain.key(Key.Key_Delete)
    assert ("mix_bus", "power_amplifier") in ends(chain.project)
    assert chain.selected == {"mix_bus"}


def test_copy_cut_paste_duplicate(chain):
    chain.document.select({"loudspeaker", "seat"})
    chain.key(Key.Key_C, Key.Key_V, modifiers=Mod.ControlModifier)
    assert ("loudspeaker_2", "seat_2") in ends(chain.project)
    assert chain.selected == {"loudspeaker_2", "seat_2"}
    chain.key(Key.Key_X, modifiers=Mod.ControlModifier)
    assert "seat_2" not in chain.project.stage
    chain.key(Key.Key_V, modifiers=Mod.ControlModifier)
    assert "seat_2" in chain.project.stage
    chain.document.select({"power_amplifier"})
    chain.key(Key.Key_D, modifiers=Mod.ControlModifier)
    assert ("mix_bus", "power_amplifier_2") in ends(chain.project)


def test_foreign_text_on_the_clipboard_is_refused_in_words(chain):
    QApplication.clipboard().setText("a shopping list")
    before = chain.project
    chain.key(Key.Key_V, modifiers=Mod.ControlModifier)
    assert chain.path.note == "The clipboard holds no stages: select some and copy them first."
    assert chain.project is before


def test_alt_and_arrows_move_a_block(chain):
    chain.key(Key.Key_Down, modifiers=Mod.AltModifier)
    assert places(chain.project)["mix_bus"] == (2, 1)
    chain.key(Key.Key_Right, modifiers=Mod.AltModifier)
    assert places(chain.project)["mix_bus"] == (3, 1)
    assert places(chain.project)["power_amplifier"] == (4, 0)
    chain.key(Key.Key_Up, Key.Key_Up, modifiers=Mod.AltModifier)
    assert places(chain.project)["mix_bus"] == (3, 0)


def test_rename_and_count_by_keyboard(chain):
    chain.key(Key.Key_F2)
    field = chain.path.findChild(QLineEdit)
    QTest.keyClicks(field, "Main mix")
    QTest.keyClick(field, Key.Key_Return)
    assert chain.project.stage["mix_bus"].name == "Main mix"
    assert chain.path.hasFocus()
    chain.document.select({"line_source", "preamplifier"})
    chain.key(Key.Key_N)
    QTest.keyClicks(field, "8")
    QTest.keyClick(field, Key.Key_Return)
    assert [chain.project.stage[key].count for key in ("line_source", "preamplifier")] == [8, 8]
    chain.document.select({"power_amplifier"})
    chain.key(Key.Key_N)
    QTest.keyClicks(field, "some")
    QTest.keyClick(field, Key.Key_Return)
    assert "is no number" in chain.path.note
    QTest.keyClick(field, Key.Key_Escape)


def test_enter_asks_for_the_card_insert_for_the_shelf(chain, qtbot):
    with qtbot.waitSignal(chain.path.card_wanted) as asked:
        chain.key(Key.Key_Return)
    assert asked.args == ["mix_bus"]
    with qtbot.waitSignal(chain.path.shelf_wanted):
        chain.key(Key.Key_Insert)


def test_plus_and_minus_zoom(chain):
    before = chain.columns.pitch_px
    chain.key(Key.Key_Minus)
    assert chain.columns.pitch_px < before
    chain.key(Key.Key_Plus)
    assert chain.columns.pitch_px == pytest.approx(before)


def test_the_menu_key_opens_the_menu_of_the_selection(chain, monkeypatch):
    opened: list[list[str]] = []
    monkeypatch.setattr(
        QMenu, "popup", lambda menu, _at: opened.append([action.text() for action in menu.actions()])
    )
    chain.key(Key.Key_Menu)
    chain.key(Key.Key_F10, modifiers=Mod.ShiftModifier)
    chain.key(Key.Key_Right, modifiers=Mod.ControlModifier)
    chain.key(Key.Key_Menu)
    assert [texts[0] for texts in opened] == ["Rename", "Rename", "Insert"]


def test_a_screen_reader_hears_where_the_keyboard_is(chain):
    assert chain.path.accessibleName() == "Signal path"
    text = chain.path.accessibleDescription()
    assert text.startswith("Mix bus, Mix bus,")
    assert text.endswith("fed by Preamplifier; feeds Power amplifier")
    chain.key(Key.Key_Right, modifiers=Mod.ControlModifier)
    assert chain.path.accessibleDescription() == "Link from Mix bus to Power amplifier"


def test_focus_is_visible(chain):
    chain.path.setFocus()
    focused = chain.path.grab().toImage()
    chain.shelf.setFocus()
    assert chain.path.grab().toImage() != focused
