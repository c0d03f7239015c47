"""Figures on the card: what was typed stays, what was understood stands beside it, what cannot be says why."""

from __future__ import annotations

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

from engine.figures import parse

from .test_controls import type_over

LEFT = Qt.MouseButton.LeftButton

# A menu asks the window system for what the offscreen one has not.
pytestmark = pytest.mark.qt_log_ignore("does not support (raise|grabbing)", extend=True)


@pytest.mark.parametrize(
    ("text", "ohm"),
    [("15 k", 15e3), ("1,5 k", 1500.0), ("47 kohm", 47e3), ("600 Ω", 600.0)],
)
def test_any_unit_is_taken_and_the_text_kept(bench, text, ohm):
    row = bench.select("power_amplifier").figure("z_in_ohm")
    type_over(row.field, text)
    given = bench.stage("power_amplifier").z_in_ohm
    assert given.text == text
    assert parse(given.text, "impedance").amount == pytest.approx(ohm, rel=1e-12)
    assert row.field.text() == text
    assert bench.entries == 1


def test_a_guess_typed_anew_comes_from_the_sheet(bench):
    row = bench.select("power_amplifier").figure("z_in_ohm")
    assert row.origin.text() == "guess"
    type_over(row.field, "15 k")
    assert row.origin.text() == "sheet"


def test_the_echo_converts_while_typing(bench):
    """x40 is 20 log10 40 = 32.04 dB."""
    row = bench.select("power_amplifier").figure("gain_db")
    row.field.setFocus()
    row.field.selectAll()
    QTest.keyClicks(row.field, "x40")
    assert row.field._echo == "32.04\u202fdB"
    QTest.keyClicks(row.field, "?")
    assert row.field._echo == ""


@pytest.mark.parametrize("text", ["-3 ohm", "many", "nan", "", "20 V"])
def test_a_wrong_figure_says_why_and_leaves_the_project_untouched(bench, text):
    row = bench.select("power_amplifier").figure("z_in_ohm")
    before = bench.document.project
    row.field.setFocus()
    row.field.selectAll()
    QTest.keyClick(row.field, Qt.Key.Key_Delete)
    QTest.keyClicks(row.field, text)
    QTest.keyClick(row.field, Qt.Key.Key_Return)
    assert bench.document.project is before
    assert bench.entries == 0
    assert row.field.text() == text
    assert row.said.isVisible()
    assert row.said.text().endswith((".", "?"))


def test_a_wrong_text_is_kept_until_it_is_mended_even_while_another_stage_is_looked_at(bench):
    row = bench.select("power_amplifier").figure("z_in_ohm")
    type_over(row.field, "wide")
    bench.select("seat")
    row = bench.select("power_amplifier").figure("z_in_ohm")
    assert row.field.text() == "wide"
    assert row.said.isVisible()
    type_over(row.field, "10 k")
    assert not row.said.isVisible()
    assert bench.stage("power_amplifier").z_in_ohm.text == "10 k"


def test_contradicting_figures_are_refused_in_words(bench):
    """Rated 500 W into 8 ohm is 63.2 V; at 1 V sensitivity that is 36.0 dB, not the 32 dB given: 4 dB apart."""
    bench.select("power_amplifier")
    add(bench, "Input sensitivity")
    row = bench.figure("sensitivity_v")
    type_over(row.field, "1 V")
    assert "36.0" in row.said.text()
    assert bench.stage("power_amplifier").sensitivity_v is None


def test_leaving_a_field_takes_what_was_typed(bench):
    row = bench.select("power_amplifier").figure("z_in_ohm")
    row.field.setFocus()
    row.field.selectAll()
    QTest.keyClicks(row.field, "12 k")
    QTest.keyClick(row.field, Qt.Key.Key_Tab)
    assert bench.stage("power_amplifier").z_in_ohm.text == "12 k"


def test_origin_and_tolerance_are_set_and_keep_the_text(bench):
    row = bench.select("power_amplifier").figure("gain_db")
    text = bench.stage("power_amplifier").gain_db.text
    for origin in ("sheet", "measured"):
        QTest.mouseClick(row.origin, LEFT)
        assert bench.stage("power_amplifier").gain_db.origin == origin
    row.field.setFocus()
    assert row.tolerance.isVisible()
    type_over(row.tolerance, "±0,5 dB")
    given = bench.stage("power_amplifier").gain_db
    assert (given.text, given.origin, given.tolerance) == (text, "measured", "±0,5 dB")
    type_over(row.tolerance, "a lot")
    assert row.said.isVisible()
    assert bench.stage("power_amplifier").gain_db.tolerance == "±0,5 dB"


def add(bench, label: str) -> None:
    """Open the list of further figures and take one, by keys."""
    from app.card.pane import _Add

    button = bench.card.pane.findChild(_Add)
    QTest.keyClick(button, Qt.Key.Key_Space)
    menu = button.menu_
    action = next(each for each in menu.actions() if each.text() == label)
    menu.setActiveAction(action)
    QTest.keyClick(menu, Qt.Key.Key_Return)
    QApplication.processEvents()


def test_an_optional_figure_is_asked_for_given_and_taken_away(bench, qtbot):
    bench.select("power_amplifier")
    builds = bench.card.builds
    add(bench, "Input sensitivity")
    assert bench.card.builds == builds + 1
    row = bench.figure("sensitivity_v")
    assert bench.card.focusWidget() is row.field
    assert bench.entries == 0
    type_over(row.field, "1.59 V")  # 63.2 V / 1.59 V is 32 dB
    assert bench.stage("power_amplifier").sensitivity_v.text == "1.59 V"
    type_over(row.field, "0")
    assert row.said.isVisible()
    row.field.selectAll()
    QTest.keyClick(row.field, Qt.Key.Key_Delete)
    QTest.keyClick(row.field, Qt.Key.Key_Return)
    QApplication.processEvents()
    assert bench.stage("power_amplifier").sensitivity_v is None


def test_a_figure_given_many_times_grows_and_shrinks(bench):
    bench.select("power_amplifier")
    add(bench, "Rated power")
    row = bench.figure("rated_power_w.2")
    assert row.label.text() == "Rated power 3"
    type_over(row.field, "1200 W @ 2 ohm")
    QApplication.processEvents()
    assert len(bench.stage("power_amplifier").rated_power_w) == 3
    row = bench.figure("rated_power_w.2")
    row.field.setFocus()
    row.field.selectAll()
    QTest.keyClick(row.field, Qt.Key.Key_Delete)
    QTest.keyClick(row.field, Qt.Key.Key_Return)
    QApplication.processEvents()
    assert len(bench.stage("power_amplifier").rated_power_w) == 2
    assert bench.entries == 2


def test_a_figure_of_several_is_typed_for_all(bench):
    bench.document.select([bench.key("mixer_channel"), bench.key("mix_bus")])
    row = bench.figure("nominal_v")
    type_over(row.field, "+6 dBu")
    assert bench.stage("mixer_channel").nominal_v.text == "+6 dBu"
    assert bench.stage("mix_bus").nominal_v.text == "+6 dBu"
    assert bench.entries == 1


def test_a_long_echo_stands_under_its_field(bench):
    row = bench.select("preamplifier").figure("ein_v.0")
    assert row.field.has_room
    assert not row.under.isVisible()
    type_over(row.field, "-128 dBu, 150 ohm source resistance, A-weighted")
    if not row.field.is_wrong:
        assert not row.field.has_room
        assert row.under.isVisible()
        assert row.under.text() == row.field._echo
