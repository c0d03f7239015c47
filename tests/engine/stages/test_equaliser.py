"""Equalisers: true magnitude, boost and headroom, graphic gains."""

from __future__ import annotations

import pytest

from engine.bands import BAND_MID_HZ
from tests.engine.stages.alone import NO_LOAD, NO_OHM, SILENT, end, line, make, row, solved, tone

FLAT = {"z_in_ohm": NO_LOAD, "z_out_ohm": NO_OHM, "noise": SILENT, "max_v": "+24 dBu"}


def test_shelf_and_bell_at_80_hz():
    """S25: +6 dB shelf and +4 dB bell at 80 Hz make +10 dB there: with a maximum of +24 dBu the input takes +14 dBu."""
    stage = make(
        "equaliser",
        low_shelf_hz="2 kHz",
        low_shelf_db=6.0,
        bell_1_hz="80 Hz",
        bell_1_q="1.4",
        bell_1_db=4.0,
        **FLAT,
    )
    out = tone(80.0, line("0 dBu"), stage, end())
    assert out.node("equaliser", "out").level == pytest.approx(10.0, abs=0.02)
    assert out.node("equaliser", "in").ceiling == pytest.approx(14.0, abs=0.02)


def test_boost_raises_the_noise_ahead_of_it():
    """A shelf far above the audio band lifts everything 12 dB, the equaliser's own noise too (C13)."""
    stage = make(
        "equaliser", low_shelf_hz="900 kHz", low_shelf_db=12.0, **{**FLAT, "noise": "-90 dBu unweighted"}
    )
    assert solved(line("0 dBu"), stage, end()).node("equaliser", "out").noise == pytest.approx(
        -78.0, abs=0.02
    )


def test_bypass_takes_the_filters_out():
    stage = make("equaliser", low_shelf_db=12.0, high_pass=1.0, bypass=1.0, level_db=-3.0, **FLAT)
    assert solved(line("0 dBu"), stage, end()).node("equaliser", "out").level == pytest.approx(-3.0, abs=1e-6)


def test_one_graphic_slider_gives_its_gain_at_its_band():
    gains = ["0 dB"] * 31
    gains[17] = "6 dB"
    stage = make("equaliser", graphic_db=gains, **FLAT)
    for band, expected in ((17, 6.0), (20, 0.15), (4, 0.0)):
        level = tone(float(BAND_MID_HZ[band]), line("0 dBu"), stage, end()).node("equaliser", "out").level
        assert level == pytest.approx(expected, abs=0.01)


def test_a_sharp_bell_asks_for_more_points():
    assert make("equaliser", bell_2_q="12", bell_2_db=-6.0).sharpest_q() == pytest.approx(12.0)
    assert row(make("equaliser", bell_2_q="12", bell_2_db=-6.0)).axis().points_per_band == 9
    assert make("equaliser", bell_2_q="12").sharpest_q() == 0.0  # flat bells do not count


def test_graphic_gains_must_fit():
    stage = make("equaliser", graphic_db=["1 dB"] * 12)
    assert "are 12: give 31 or 10" in next(stage.check(stage.values(), row(stage).axis()))
