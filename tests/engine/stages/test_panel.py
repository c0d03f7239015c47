"""How a control's position reads on its panel."""

from __future__ import annotations

import pytest

from engine.stages import Setting, panel
from engine.stages.declare import ControlRange, ControlSpec


def said(setting, marking, low=-40.0, high=0.0, step=1.0, *, off=False, unit="dB", choices=()) -> str:
    spec = ControlSpec("x", "X", unit, low, high, step, "", 0.0, choices, off, marking)
    return panel.marking(spec, ControlRange(low, high, step, off, choices), setting)


@pytest.mark.parametrize(
    ("turn", "words"),
    [
        (0.0, "fully left"), (0.05, "half past seven"), (0.2, "nine o'clock"), (0.35, "half past ten"),
        (0.5, "twelve o'clock"), (0.575, "quarter to one"), (0.8, "three o'clock"), (0.925, "quarter past four"),
        (1.0, "fully right"),
    ],
)  # fmt: skip
def test_a_knob_turns_from_seven_over_noon_to_five(turn, words):
    """Common practice, no source: 300 degrees of travel are ten hours of a clock, 0.1 of it one hour."""
    assert panel.clock(turn) == words


def test_detents_count_from_the_low_end_with_off_as_the_first():
    """-40 dB ... 0 dB by 1 dB: 41 positions; off in front makes the lowest mark detent 1 and 0 dB detent 41."""
    assert said(Setting(value=-40.0), "detent") == "detent 0"
    assert said(Setting(value=-8.0), "detent") == "detent 32"
    assert said(Setting(value=0.0), "detent", off=True) == "detent 41"
    assert said(Setting(value=None), "detent", off=True) == "off"


def test_decibels_have_a_true_minus_a_thin_space_and_the_steps_own_decimals():
    assert said(Setting(value=-8.0), "db", step=0.5) == "−8.0\u202fdB"
    assert said(Setting(value=3.25), "db", step=0.25, high=10.0) == "+3.25\u202fdB"
    assert said(Setting(value=0.0), "db") == "0.0\u202fdB"


def test_a_switch_is_called_by_its_position():
    ways = (("out", 0.0), ("in", 1.0))
    assert said(Setting(value=1.0), "switch", 0.0, 1.0, unit="", choices=ways) == "in"


def test_the_persons_own_marking_goes_first_until_the_control_moves():
    from engine.stages import template

    stage = template("preamplifier", "p").with_fields(gain_db=Setting(value=40.0, panel="red dot"))
    spec, ranged = stage.control_specs()["gain_db"], stage.control_range("gain_db")
    assert panel.marking(spec, ranged, stage.gain_db) == "red dot"
    assert panel.position(spec, ranged, stage.gain_db) == "+40.0\u202fdB"
    assert stage.with_control("gain_db", 40.0).gain_db.panel == "red dot"
    assert stage.with_control("gain_db", 41.0).gain_db.panel is None
