"""Controls on the card, moved as a hand would: one gesture is one undo entry, on the control's own steps."""

from __future__ import annotations

import pytest
from PySide6.QtCore import QEvent, QPoint, QPointF, Qt
from PySide6.QtGui import QAction, QKeyEvent, QKeySequence, QMouseEvent, QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

LEFT = Qt.MouseButton.LeftButton
SHIFT = Qt.KeyboardModifier.ShiftModifier


def handle(slider) -> QPoint:
    return QPointF(slider._x(slider.value()), slider.height() / 2).toPoint()


def drag(slider, pixels: int, *, release: bool = True) -> None:
    start = handle(slider)
    QTest.mousePress(slider, LEFT, pos=start)
    way = 1 if pixels > 0 else -1
    for step in range(way, pixels + way, way):
        QTest.mouseMove(slider, start + QPoint(step, 0))
    if release:
        QTest.mouseRelease(slider, LEFT, pos=start + QPoint(pixels, 0))


def wheel(slider, notches: int) -> None:
    middle = QPointF(slider.rect().center())
    for _ in range(abs(notches)):
        turn = QPoint(0, 120 if notches > 0 else -120)
        event = QWheelEvent(
            middle, slider.mapToGlobal(middle), QPoint(), turn, Qt.MouseButton.NoButton,
            Qt.KeyboardModifier.NoModifier, Qt.ScrollPhase.NoScrollPhase, False,
        )  # fmt: skip
        QApplication.sendEvent(slider, event)


def type_over(entry, text: str) -> None:
    entry.setFocus()
    entry.selectAll()
    for letter in text:  # QTest itself types Latin letters only
        QApplication.sendEvent(
            entry, QKeyEvent(QEvent.Type.KeyPress, 0, Qt.KeyboardModifier.NoModifier, letter)
        )
    QTest.keyClick(entry, Qt.Key.Key_Return)


def test_a_drag_is_one_undo_entry_on_real_steps_and_solves_at_its_end(bench):
    row = bench.select("mixer_channel").control("fader_db")
    before = bench.stage("mixer_channel").fader_db.value
    drag(row.slider, -60)
    after = bench.stage("mixer_channel").fader_db.value
    ends = bench.stage("mixer_channel").control_range("fader_db")
    assert after < before
    assert after == pytest.approx(ends.nearest(after), abs=1e-9)
    assert bench.entries == 1
    assert not bench.document.gesture_open
    assert bench.document.outcome.project.same_as(bench.document.project)
    bench.document.undo()
    assert bench.stage("mixer_channel").fader_db.value == before


def test_a_drag_with_shift_is_ten_times_finer(bench):
    row = bench.select("mixer_channel").control("fader_db")
    before = bench.stage("mixer_channel").fader_db.value
    start = handle(row.slider)
    QTest.mousePress(row.slider, LEFT, SHIFT, start)
    # QTest moves without modifiers, so the event is sent by hand.
    place = QPointF(start + QPoint(-50, 0))
    move = QMouseEvent(QEvent.Type.MouseMove, place, row.slider.mapToGlobal(place), LEFT, LEFT, SHIFT)
    QApplication.sendEvent(row.slider, move)
    QTest.mouseRelease(row.slider, LEFT, SHIFT, place.toPoint())
    coarse = 50 / row.slider._place_px() * 0.1
    step = bench.stage("mixer_channel").control_range("fader_db").step
    assert before - bench.stage("mixer_channel").fader_db.value == pytest.approx(coarse * step, abs=step)


def test_escape_while_dragging_puts_the_control_back_and_leaves_nothing_to_undo(bench):
    row = bench.select("mixer_channel").control("fader_db")
    before = bench.stage("mixer_channel").fader_db.value
    drag(row.slider, -40, release=False)
    assert bench.stage("mixer_channel").fader_db.value != before
    QTest.keyClick(row.slider, Qt.Key.Key_Escape)
    assert bench.stage("mixer_channel").fader_db.value == before
    assert bench.entries == 0


@pytest.mark.parametrize(
    ("key", "modifier", "by"),
    [
        (Qt.Key.Key_Up, Qt.KeyboardModifier.NoModifier, 1.0),
        (Qt.Key.Key_Down, Qt.KeyboardModifier.NoModifier, -1.0),
        (Qt.Key.Key_Down, SHIFT, -0.5),
        (Qt.Key.Key_PageDown, Qt.KeyboardModifier.NoModifier, -6.0),
    ],
)
def test_keys_step_one_db_finely_the_own_step_and_by_page_six(bench, key, modifier, by):
    """FIELD R20: up and down 1 dB, shift 0.1 dB (here the fader's own 0.5 dB step), page 6 dB."""
    row = bench.select("mixer_channel").control("fader_db")
    assert bench.stage("mixer_channel").control_range("fader_db").step == pytest.approx(0.5)
    before = bench.stage("mixer_channel").fader_db.value
    QTest.keyClick(row.slider, key, modifier)
    assert bench.stage("mixer_channel").fader_db.value == pytest.approx(before + by, abs=1e-9)
    assert bench.entries == 1


def test_a_turn_of_the_wheel_is_one_undo_entry(bench, qtbot):
    row = bench.select("mixer_channel").control("fader_db")
    before = bench.stage("mixer_channel").fader_db.value
    qtbot.wait(450)  # the card was put there just now: a wheel would have meant scrolling it
    wheel(row.slider, -3)
    assert bench.stage("mixer_channel").fader_db.value == pytest.approx(before - 3.0, abs=1e-9)
    assert bench.entries == 1
    qtbot.waitUntil(lambda: not bench.document.gesture_open, timeout=2000)
    wheel(row.slider, -1)
    assert bench.entries == 2
    qtbot.waitUntil(lambda: not bench.document.gesture_open, timeout=2000)


def test_a_wheel_that_scrolls_the_card_moves_no_control_it_passes(bench):
    row = bench.select("mixer_channel").control("fader_db")
    before = bench.stage("mixer_channel").fader_db.value
    bench.card.area.verticalScrollBar().setValue(60)
    wheel(row.slider, -2)
    assert bench.stage("mixer_channel").fader_db.value == before


@pytest.mark.parametrize("text", ["-7.5", "−7,5 dB", "-7,5", "-7.6"])
def test_a_typed_number_overwrites_with_comma_or_true_minus_on_the_nearest_step(bench, text):
    row = bench.select("mixer_channel").control("fader_db")
    type_over(row.value, text)
    assert bench.stage("mixer_channel").fader_db.value == pytest.approx(-7.5, abs=1e-9)
    assert row.value.text() == "−7.5\u202fdB"
    assert bench.entries == 1


def test_off_can_be_typed(bench):
    row = bench.select("mixer_channel").control("fader_db")
    type_over(row.value, "off")
    assert bench.stage("mixer_channel").fader_db.value is None
    assert row.value.text() == "off"


@pytest.mark.parametrize("text", ["40", "loud", "3 V", "1e999", "nan"])
def test_a_number_that_cannot_be_says_why_and_stays(bench, text):
    row = bench.select("mixer_channel").control("fader_db")
    before = bench.document.project
    type_over(row.value, text)
    assert bench.document.project is before
    assert row.value.text() == text
    assert row.said.isVisible()
    assert row.said.text()
    QTest.keyClick(row.value, Qt.Key.Key_Escape)
    assert not row.said.isVisible()
    assert row.value.text() != text


def test_a_number_begun_on_the_slider_is_typed_and_enter_leads_back(bench):
    row = bench.select("mixer_channel").control("fader_db")
    row.slider.setFocus()
    QTest.keyClicks(row.slider, "-")
    assert QApplication.focusWidget() is row.value
    QTest.keyClicks(row.value, "12")
    QTest.keyClick(row.value, Qt.Key.Key_Return)
    assert bench.stage("mixer_channel").fader_db.value == -12.0
    assert QApplication.focusWidget() is row.slider


def test_a_locked_control_is_moved_by_no_hand(bench, qtbot):
    row = bench.select("mixer_channel").control("fader_db")
    before = bench.stage("mixer_channel").fader_db.value
    QTest.mouseClick(row.state, LEFT)
    assert bench.stage("mixer_channel").fader_db.state == "locked"
    assert row.state.text() == "locked"
    qtbot.wait(450)
    drag(row.slider, -40)
    wheel(row.slider, -2)
    QTest.keyClick(row.slider, Qt.Key.Key_Down)
    QTest.keyClicks(row.value, "-20")
    assert bench.stage("mixer_channel").fader_db.value == before
    QTest.mouseClick(row.state, LEFT)
    assert bench.stage("mixer_channel").fader_db.state == "operator"
    QTest.keyClick(row.state, Qt.Key.Key_Space)
    assert bench.stage("mixer_channel").fader_db.state == "adjustable"
    assert bench.entries == 3


def test_a_switch_is_chosen_by_click_and_by_arrow_key(bench):
    row = bench.select("preamplifier").control("pad")
    out, pressed = row.switch.inner.buttons
    QTest.mouseClick(pressed, LEFT)
    assert bench.stage("preamplifier").pad.value == 1.0
    assert pressed.isChecked()
    QTest.keyClick(pressed, Qt.Key.Key_Left)
    assert bench.stage("preamplifier").pad.value == 0.0
    assert out.isChecked()
    assert bench.entries == 2


def test_the_own_marking_stands_in_place_of_ours_until_the_control_moves(bench):
    row = bench.select("preamplifier").control("gain_db")
    ours = row.panel.placeholderText()
    assert "o'clock" in ours or "past" in ours or "quarter" in ours
    type_over(row.panel, "red dot")
    assert bench.stage("preamplifier").gain_db.panel == "red dot"
    QTest.keyClick(row.slider, Qt.Key.Key_Up)
    assert bench.stage("preamplifier").gain_db.panel is None
    assert row.panel.text() == ""


def test_undo_belongs_to_the_project_while_nothing_is_typed(bench):
    undo = QAction("Undo", bench.card)
    undo.setShortcut(QKeySequence.StandardKey.Undo)
    undo.triggered.connect(bench.document.undo)
    bench.card.addAction(undo)
    row = bench.select("mixer_channel").control("fader_db")
    before = bench.stage("mixer_channel").fader_db.value
    type_over(row.value, "-20")
    row.value.setFocus()
    QTest.keyClick(row.value, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert bench.stage("mixer_channel").fader_db.value == before


def test_several_are_moved_together_in_one_undo_entry(bench):
    bench.document.select([bench.key("mixer_channel"), bench.key("mix_bus")])
    row = bench.control("fader_db")
    type_over(row.value, "-9")
    assert bench.stage("mixer_channel").fader_db.value == -9.0
    assert bench.stage("mix_bus").fader_db.value == -9.0
    assert bench.entries == 1


def test_several_that_differ_say_so(bench):
    bench.document.select([bench.key("mixer_channel"), bench.key("mix_bus")])
    row = bench.control("fader_db")
    key = bench.key("mix_bus")
    stage = bench.document.project.stage[key]
    bench.document.edit("Move", {key: (stage, stage.with_control("fader_db", -30.0))})
    assert row.value.text() == "several"
