"""What is typed where a control stands."""

from __future__ import annotations

import pytest

from app.card.typed import read
from engine.stages import KINDS, template
from engine.stages.declare import ControlRange, ControlSpec


def dial(unit: str = "dB", low: float = -40.0, high: float = 10.0, step: float = 0.5, *, off: bool = True):
    spec = ControlSpec("x", "Level", unit, low, high, step, "", 0.0)
    return spec, ControlRange(low, high, step, off, ())


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("-8", -8.0), ("−8,0", -8.0), ("-8.2 dB", -8.0), ("+3.5\u202fdB", 3.5), (".5", 0.5), ("0", 0.0),
        ("off", None), ("-inf", None), ("−∞", None), ("  -12db ", -12.0),
    ],
)  # fmt: skip
def test_numbers_are_read_and_put_on_the_nearest_step(text, value):
    assert read(text, *dial()) == value


@pytest.mark.parametrize("text", ["", "loud", "11", "-41", "3 V", "1e3", "--3", "3..2", "nan", "∞ dB"])
def test_what_cannot_be_is_refused_with_what_would_be_right(text):
    with pytest.raises(ValueError, match=r"type|set in") as refused:
        read(text, *dial())
    assert "nan" not in str(refused.value) or text == "nan"


def test_a_control_without_off_says_so():
    with pytest.raises(ValueError, match="no off"):
        read("off", *dial(off=False))


@pytest.mark.parametrize(
    ("text", "dbu"),
    [("+4 dBu", 4.0), ("4", 4.0), ("1.228 V", 4.0), ("0 dBV", 2.0), ("775 mV", 0.0)],
)
def test_a_threshold_in_dbu_takes_volts_and_dbv(text, dbu):
    """1.228 V is +4 dBu and 0 dBV is 2.22 dBu (definitions: 0 dBu is the root of 0.6 V)."""
    assert read(text, *dial("dBu", -50.0, 24.0, 0.5)) == dbu


def test_a_switch_is_typed_by_name_or_its_beginning():
    stage = template("mixer_channel", "m")
    spec, ranged = stage.control_specs()["mute"], stage.control_range("mute")
    assert read("muted", spec, ranged) == 1.0
    assert read("on", spec, ranged) == 0.0
    with pytest.raises(ValueError, match="on air, muted"):
        read("half", spec, ranged)


def test_every_control_reads_back_what_it_shows():
    """Whatever position a control of any kind stands on, its own text leads back to it."""
    from engine.stages import Setting, panel

    for kind in KINDS:
        stage = template(kind, kind)
        for name, spec, _ in stage.controls():
            ranged = stage.control_range(name)
            for value in ranged.positions[:: max(1, len(ranged.positions) // 9)]:
                setting = Setting(value=None if value == float("-inf") else float(value))
                assert read(panel.position(spec, ranged, setting), spec, ranged) == pytest.approx(
                    setting.value
                )
