"""Constant-voltage lines: load, taps, wrong voltage, cable."""

from __future__ import annotations

import numpy as np
import pytest

from tests.engine.stages.alone import line, make, numbers, solved

SHORT = {"length_m": "1 mm", "area_mm2": "100 mm²", "loss_db": "0 dB"}


def run(**fields):
    return make("constant_voltage_line", **{**SHORT, **fields})


def test_six_more_ceiling_loudspeakers():
    """S18: 12 × 10 W and 8 × 15 W on 70.7 V: 240 W, 20.83 ohm; with 6 × 10 W more 300 W, 16.66 ohm."""
    taps = {
        "taps_w": ["15 W", "10 W"],
        "line_voltage_v": "70.7 V",
        "groups": 3,
        "tap_1": 1.0,
        "tap_2": 0.0,
        "tap_3": 1.0,
    }
    before, after = (run(count_1="12", count_2="8", count_3=n, **taps) for n in ("0", "6"))
    for stage, watts, ohm in ((before, 240.0, 20.83), (after, 300.0, 16.66)):
        assert float(np.asarray(stage.total_w(numbers(stage)))) == pytest.approx(watts, rel=1e-9)
        assert float(np.asarray(stage.meter_ohm(numbers(stage)))) == pytest.approx(ohm, abs=0.005)


@pytest.mark.parametrize(
    ("line_v", "marked", "watts"), [("70.7 V", "100 V", 15.0), ("100 V", "70.7 V", 60.0)]
)
def test_taps_for_another_voltage(line_v, marked, watts):
    """S19: a 30 W tap for 100 V takes 15.0 W on 70.7 V; one for 70.7 V takes 60.0 W on 100 V."""
    stage = run(taps_w=["30 W"], tap_1=0.0, line_voltage_v=line_v, marked_voltage_v=marked)
    assert float(np.asarray(stage.drawn_w(numbers(stage), 1))) == pytest.approx(watts, abs=0.02)


@pytest.mark.parametrize(("tap", "ohm"), [("5 W", 1000.0), ("10 W", 500.0)])
def test_tap_impedances(tap, ohm):
    """Definition: 70.7 V over a 5 W tap is 1000 ohm, over 10 W 500 ohm."""
    stage = run(taps_w=[tap], tap_1=0.0, count_1="1")
    assert float(np.asarray(stage.meter_ohm(numbers(stage)))) == pytest.approx(ohm, rel=1e-3)


def test_a_tap_gives_its_watts_to_the_voice_coil():
    """A 10 W tap at full line voltage: 10 W in 8 ohm; 1 dB of transformer loss leaves 7.94 W; one tap down −3.01 dB."""
    amp = make("power_amplifier", rated_power_w=["250 W @ 20 ohm"], gain_db="30 dB", damping_factor=None)
    level_in = 20.0 * np.log10(70.7 / 0.7745967) - 30.0
    watts = []
    for loss, tap in (("0 dB", 0.0), ("1 dB", 0.0), ("0 dB", 1.0)):
        stage = run(taps_w=["10 W", "5 W"], tap_1=tap, loss_db=loss)
        watts.append(
            solved(line(f"{level_in} dBu"), amp, stage, make("loudspeaker", z_ohm="8 ohm"))
            .loudspeakers[0]
            .average_w
        )
    assert watts == pytest.approx([10.0, 7.94, 5.0], rel=0.005)


def test_cable_costs_less_along_the_line():
    """20 × 10 W on 100 m of 1.5 mm²: at the far end all of it stands behind 2.29 ohm, along the line the first group behind half."""
    fields = {"line_voltage_v": "70.7 V", "taps_w": ["10 W"], "length_m": "100 m", "area_mm2": "1.5 mm²", "loss_db": "0 dB", "groups": 2,
              "tap_1": 0.0, "tap_2": 0.0, "count_1": "10", "count_2": "10"}  # fmt: skip
    lumped = make("constant_voltage_line", **fields)
    spread = make("constant_voltage_line", layout="along the line", **fields)
    z_load = 70.7**2 / 200.0
    share = z_load / (z_load + 2.0 * 0.0172 * 100.0 / 1.5)
    from engine.bands import make_axis

    at_end = lumped.sections(numbers(lumped), make_axis()).sections
    tap_gain = 10.0 * 8.0 / 70.7**2
    assert float(np.asarray(at_end[1].gain)) == pytest.approx(share**2 * tap_gain, rel=1e-9)
    near, far = (
        float(np.asarray(s.gain)) for s in spread.sections(numbers(spread), make_axis()).sections[1:]
    )
    assert share**2 * tap_gain < far < near < tap_gain


def test_transformers_saturate_at_low_frequencies():
    """70.7 V at 50 Hz is 35.35 V at 25 Hz: the same level has 6.02 dB less to spare there."""
    from tests.engine.stages.alone import tone

    stage = run(saturation_v="70.7 V @ 50 Hz")
    at_25, at_50 = (
        tone(f, line("+30 dBu"), stage, make("loudspeaker")).narrowest.margin_db for f in (25.0, 50.0)
    )
    assert at_50 - at_25 == pytest.approx(6.02, abs=0.005)


def test_high_pass_protects():
    from tests.engine.stages.alone import tone

    stage = run(high_pass_hz="70 Hz")
    out = tone(70.0, line("+30 dBu"), stage, make("loudspeaker")).node("constant_voltage_line", "out").level
    flat = tone(70.0, line("+30 dBu"), run(), make("loudspeaker")).node("constant_voltage_line", "out").level
    assert out - flat == pytest.approx(-3.01, abs=0.005)
