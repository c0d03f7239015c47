"""The card as a whole: what it shows of each selection, when it is built anew, and that nothing of it is cut off."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path
from typing import ClassVar, Literal

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import (
    QAbstractButton,
    QApplication,
    QComboBox,
    QLabel,
    QLineEdit,
    QPushButton,
    QSlider,
)

import app.card
from app import edits
from app.card.pieces import Elided
from app.card.tables import Budget, LevelTable, Lines
from app.inks import DARK, LIGHT, RED
from engine.figures import Figure
from engine.project import Project
from engine.sections.base import Active, ActiveStage, Domain, Input, Output
from engine.stages import KINDS, Port, Setting, Stage
from engine.stages.declare import control, figure, option, switch
from engine.units import power_from_db
from tests.app.diagram.chains import chain

from .conftest import Bench
from .test_controls import type_over

LEFT = Qt.MouseButton.LeftButton


def test_values_follow_the_document_without_new_rows(bench):
    """One drag of many steps: the rows stay the same widgets, their texts move."""
    bench.select("mixer_channel")
    builds, row = bench.card.builds, bench.control("fader_db")
    table = bench.card.pane.findChild(LevelTable)
    before = table.rows
    for _ in range(12):
        QTest.keyClick(row.slider, Qt.Key.Key_Down)
    assert bench.card.builds == builds
    assert bench.control("fader_db") is row
    value = bench.stage("mixer_channel").fader_db.value
    assert row.value.text().startswith(f"−{abs(value):.1f}")
    bench.document.flush()
    assert table.rows != before


def test_an_option_that_changes_what_is_asked_for_brings_other_rows_and_keeps_the_keyboard(bench, qtbot):
    bench.select("power_amplifier")
    row = bench.row("attenuator")
    fitted, _none = row.choice.inner.buttons
    fitted.setFocus()
    QTest.keyClick(fitted, Qt.Key.Key_Right)
    qtbot.waitUntil(lambda: not any(getattr(r, "name", "") == "attenuator_db" for r in bench.card.pane.rows))
    assert bench.stage("power_amplifier").attenuator == "none"
    focused = bench.card.focusWidget()
    assert focused is not None
    assert focused.accessibleName() == "Attenuator: none"
    bench.document.undo()
    qtbot.waitUntil(lambda: any(getattr(r, "name", "") == "attenuator_db" for r in bench.card.pane.rows))


def test_the_name_is_renamed_and_an_empty_one_refused(bench):
    row = bench.select("power_amplifier").row("name")
    type_over(row.field, "Amplifier A")
    assert bench.stage("power_amplifier").name == "Amplifier A"
    row.field.setFocus()
    row.field.selectAll()
    QTest.keyClick(row.field, Qt.Key.Key_Delete)
    QTest.keyClick(row.field, Qt.Key.Key_Return)
    assert row.said.isVisible()
    assert bench.stage("power_amplifier").name == "Amplifier A"


def test_place_and_count_are_set(bench):
    bench.select("loudspeaker")
    type_over(bench.row("rack").field, "Rack 2, unit 14")
    type_over(bench.row("area").field, "hall")
    type_over(bench.row("note").field, "left stack")
    stage = bench.stage("loudspeaker")
    assert (stage.rack, stage.area, stage.note) == ("Rack 2, unit 14", "hall", "left stack")
    type_over(bench.row("count").field, "two")
    assert bench.row("count").said.isVisible()
    assert bench.stage("loudspeaker").count == 1
    assert bench.entries == 3


def test_a_seat_says_what_it_hears_who_owns_the_hiss_and_how_far_its_loudspeakers_are(bench):
    bench.select("seat")
    seat = bench.document.outcome.seats[0]
    lines = {line.label: line.text for line in bench.card.pane.findChild(Lines).lines}
    assert lines["Level"] == f"{seat.level:.1f}\u202fdB SPL"
    assert lines["Hiss"] == f"{seat.hiss_a:.1f}\u202fdB(A)".replace("-", "−")
    bars = [bar for bar in bench.card.pane.findChild(Budget).bars if bar.owner]
    assert [bar.owner.stage for bar in bars] == [part.stage for part in seat.budget[: len(bars)]]
    assert sum(part.share for part in seat.budget) == pytest.approx(1.0, abs=1e-9)
    distance = bench.figure("distance_m")
    assert distance.label.text().startswith("From ")
    type_over(distance.field, "24 m")
    bench.document.flush()
    # Twice the 12 m is 6.02 dB less, and air takes a little more.
    assert bench.document.outcome.seats[0].level == pytest.approx(seat.level - 6.02, abs=0.6)


def test_a_seat_sets_what_each_loudspeaker_loses_off_its_axis(bench):
    """At the edge of the rated angle a loudspeaker is 6 dB down (IEC 60268-5, coverage angle)."""
    bench.select("seat")
    on_axis = bench.document.outcome.seats[0].level
    type_over(bench.figure("off_axis_db").field, "6 dB")
    bench.document.flush()
    assert bench.entries == 1
    assert bench.document.outcome.seats[0].level == pytest.approx(on_axis - 6.0, abs=1e-6)


def test_a_microphone_is_not_asked_for_a_loss_off_axis(bench):
    link = next(each for each in bench.document.project.links if each.target.startswith("microphone"))
    bench.document.select([link.id])
    assert "off_axis_db" not in bench.card.pane.contents.absent


def test_inputs_and_outputs_stand_over_the_table_of_sections(bench):
    bench.select("power_amplifier")
    lines = {line.label: line.text for line in bench.card.pane.findChild(Lines).lines}
    key = bench.key("power_amplifier")
    for label, direction in (("Input", "in"), ("Output", "out")):
        level = bench.document.outcome.node(key, direction).level
        assert lines[label] == f"{level:+.1f}\u202fdBu".replace("-", "−")


def test_pressing_an_owner_of_the_hiss_goes_to_it(bench):
    bench.select("seat")
    bar = bench.card.pane.findChild(Budget).bars[0]
    owner = bar.owner.stage
    QTest.mouseClick(bar, LEFT)
    assert bench.document.selection == {owner}


def test_a_loudspeaker_says_its_watts_and_margins(bench):
    bench.select("loudspeaker")
    load = bench.document.outcome.loudspeakers[0]
    texts = {line.label: line.text for line in bench.card.pane.findChild(Lines).lines}
    assert texts["Under continuous"] == f"{load.continuous_margin_db:.1f}\u202fdB"
    assert "Average power" in texts


def test_the_table_of_levels_holds_the_sections_of_the_outcome(bench):
    bench.select("power_amplifier")
    table = bench.card.pane.findChild(LevelTable)
    sections = bench.document.outcome.sections(bench.key("power_amplifier"))
    assert [row.name for row in table.rows] == [section.name for section in sections]
    assert table.rows[-1].level == f"{sections[-1].level_out:.1f}".replace("-", "−")
    assert table.rows[-1].margin == f"{sections[-1].margin:.1f}".replace("-", "−")


def test_a_wire_has_wiring_and_air_has_a_distance(bench):
    wire, air = (
        next(link for link in bench.document.project.links if link.target.startswith(kind))
        for kind in ("preamplifier", "seat")
    )
    bench.document.select([wire.id])
    choice = bench.row("wiring").choice.inner
    QTest.mouseClick(choice.buttons[1], LEFT)
    assert bench.document.project.link[wire.id].wiring == "one leg"
    assert not any(getattr(row, "name", "") == "distance_m" for row in bench.card.pane.rows)
    bench.document.select([air.id])
    type_over(bench.figure("distance_m").field, "39 ft")
    assert bench.document.project.link[air.id].distance_m.text == "39 ft"


def test_nothing_selected_is_the_project(bench):
    type_over(bench.row("name").field, "Harbour Hall")
    type_over(bench.row("author").field, "A. Person")
    type_over(bench.row("revision").field, "7")
    type_over(bench.figure("temperature_c").field, "25 °C")
    header = bench.document.project.header
    assert (header.name, header.author, header.revision) == ("Harbour Hall", "A. Person", 7)
    assert header.temperature_c.text == "25 °C"
    assert bench.entries == 4


def test_a_stage_taken_away_leaves_the_project(bench, qtbot):
    bench.select("seat")
    bench.document.edit("Delete", edits.delete(bench.document.project, [bench.key("seat")]))
    bench.document.flush()
    QApplication.processEvents()
    assert bench.card.pane.contents.sort == "project"


# -- nothing is cut off, nothing is nameless ------------------------------------------------------------------
def project_of(kind: str):
    return chain((kind,))


@pytest.mark.parametrize("kind", list(KINDS))
def test_every_kind_fits_its_card_and_everything_that_takes_the_keyboard_has_a_name(qtbot, kind):
    bench = Bench(qtbot, project_of(kind)).select(kind)
    bench.card.resize(240, 400)
    QApplication.processEvents()
    pane = bench.card.pane
    assert pane.minimumSizeHint().width() <= bench.card.area.viewport().width()
    assert pane.width() == bench.card.area.viewport().width()
    assert not bench.card.area.horizontalScrollBar().isVisible()
    for widget in (
        pane.findChildren(QAbstractButton) + pane.findChildren(QLineEdit) + pane.findChildren(QSlider)
    ):
        if widget.isVisible() and widget.focusPolicy() & Qt.FocusPolicy.TabFocus:
            assert widget.accessibleName() or widget.text()
    for combo in pane.findChildren(QComboBox):
        assert combo.accessibleName()
    assert cut_off(pane) == []


@pytest.mark.parametrize("kind", list(KINDS))
def test_every_control_figure_and_option_in_use_stands_on_the_card(qtbot, kind):
    bench = Bench(qtbot, project_of(kind)).select(kind)
    stage = bench.stage(kind)
    shown = {getattr(row, "name", "") for row in bench.card.pane.rows}
    assert {name for name, _, _ in stage.controls()} <= shown
    assert {name for name, _, _ in stage.figures()} <= shown
    assert {name for name in stage.option_specs() if stage.in_use(name)} <= shown


def cut_off(pane) -> list[str]:
    """Texts that neither fit nor end in an ellipsis."""
    found = []
    for label in pane.findChildren(QLabel):
        if label.isVisible() and not isinstance(label, Elided) and not label.wordWrap():
            wide = label.fontMetrics().horizontalAdvance(label.text())
            if wide > label.width() + 1 or label.fontMetrics().height() > label.height() + 1:
                found.append(label.text())
    found += [
        button.text()
        for button in pane.findChildren(QPushButton)
        if button.isVisible() and button.fontMetrics().horizontalAdvance(button.text()) > button.width() - 2
    ]
    found += [
        part.text()
        for part in pane.findChildren(Elided) + pane.findChildren(QLineEdit)
        if part.isVisible() and part.fontMetrics().height() > part.height() + 1
    ]
    return found


def test_long_names_end_in_an_ellipsis_and_stand_whole_in_the_tip(bench):
    name = "The very long name of a stage that no card could ever show"
    row = bench.select("power_amplifier").row("name")
    type_over(row.field, name)
    assert row.field.toolTip() == name
    bench.card.grab()


def test_tab_goes_through_the_card_from_top_to_bottom(bench):
    bench.select("preamplifier")
    bench.row("name").field.setFocus()
    seen = []
    for _ in range(14):
        focused = QApplication.focusWidget()
        seen.append(focused.mapTo(bench.card.pane, focused.rect().center()).y())
        QTest.keyClick(focused, Qt.Key.Key_Tab)
    # Within a row a part may stand a line above the one before it: name, then value beside; field, then origin.
    assert all(later > earlier - 60 for earlier, later in pairwise(seen))
    assert seen[-1] > seen[0] + 100


def test_what_has_the_keyboard_is_scrolled_to(bench):
    bench.select("mixer_channel")
    bench.card.resize(300, 300)
    last = bench.row("note").field
    last.setFocus(Qt.FocusReason.TabFocusReason)
    QApplication.processEvents()
    top = last.mapTo(bench.card.area.viewport(), last.rect().topLeft()).y()
    assert 0 <= top <= bench.card.area.viewport().height() - last.height()


def test_other_inks_dress_it_anew(bench):
    bench.select("seat")
    for inks in (DARK, RED, LIGHT):
        bench.card.set_inks(inks)
        picture = bench.card.grab().toImage()
        assert picture.pixelColor(4, 4) == inks.paper


class Novelty(Stage):
    """A kind that only this test knows."""

    title: ClassVar[str] = "Novelty"
    kind: Literal["novelty"] = "novelty"
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="What it loads.")
    ratings_db: tuple[Figure, ...] = figure("Ratings", "gain", "10 dB; 20 dB", many=True, help="Several.")
    knob_db: Setting = control("Knob", "dB", -20.0, 20.0, 0.5, 0.0, help="Turns.", marking="clock")
    mute: Setting = switch("Mute", help="Silence.")
    form: Literal["A", "B"] = option("Form", "A", choices=("A", "B"), help="Either.")

    def inputs(self):
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self):
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values, axis):
        knob = Active("knob", gain=power_from_db(values["knob_db"]))
        return ActiveStage((knob,), {"in": Input("knob", values["z_in_ohm"])}, {"out": Output("knob", 100.0)})


def test_a_kind_nobody_knew_has_a_card(qtbot, monkeypatch):
    """The card is made from declarations alone."""
    monkeypatch.setitem(KINDS, "novelty", Novelty)
    bench = Bench(qtbot, Project(stages=(Novelty(id="n", kind="novelty", name="New"),)))
    bench.document.select(["n"])
    shown = {getattr(row, "name", "") for row in bench.card.pane.rows}
    assert {"knob_db", "mute", "z_in_ohm", "ratings_db.0", "ratings_db.1", "form"} <= shown
    row = bench.control("knob_db")
    assert row.panel.placeholderText() == "twelve o'clock"
    QTest.keyClick(row.slider, Qt.Key.Key_PageUp)
    assert bench.document.project.stage["n"].knob_db.value == 6.0


def test_no_file_of_the_card_names_a_kind():
    text = " ".join(path.read_text() for path in Path(app.card.__file__).parent.glob("*.py"))
    assert [kind for kind in KINDS if f'"{kind}"' in text] == []
