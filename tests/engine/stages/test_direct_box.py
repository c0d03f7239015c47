"""Direct boxes and transformers: loss, and a ceiling that falls with frequency."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import NO_LOAD, NO_OHM, end, line, make, tone

IRON = {"loss_db": "0 dB", "max_level_v": "+20 dBu @ 40 Hz", "z_in_ohm": NO_LOAD, "z_out_ohm": NO_OHM}


@pytest.mark.parametrize(
    ("frequency", "limit"),
    [(20.0, 13.98), (25.0, 15.92), (31.5, 17.93), (40.0, 20.0), (50.0, 21.94), (1000.0, 47.96)],
)
def test_the_ceiling_falls_6_db_per_octave(frequency, limit):
    """S26: +20 dBu at 40 Hz is +13.98 at 20, +15.92 at 25, +17.93 at 31.5 Hz (C07), +21.94 at 50."""
    out = tone(frequency, line("+18 dBu"), make("direct_box", **IRON), end())
    assert 18.0 + out.narrowest.margin_db == pytest.approx(limit, abs=0.005)


def test_peaks_at_25_hz_saturate_it():
    """S26: +18 dBu of peak at 25 Hz: −2.08 dB; an active box does not mind."""
    passive = tone(25.0, line("+18 dBu"), make("direct_box", **IRON), end())
    active = tone(25.0, line("+18 dBu"), make("direct_box", build="active", **IRON), end())
    assert passive.narrowest.margin_db == pytest.approx(-2.08, abs=0.005)
    assert active.narrowest.margin_db == pytest.approx(2.0, abs=1e-6)


def test_twelve_to_one():
    """20 log 12 = 21.58 dB into an open output (C06), then 150 ohm into 1.5 kohm −0.83 dB."""
    box = make("direct_box", loss_db="21.58 dB", z_in_ohm=NO_LOAD, z_out_ohm="150 ohm")
    load = make("feed", z_in_ohm="1.5 k", ein_v=None)
    assert tone(1000.0, line("0 dBu"), box, load).node("direct_box", "out").level == pytest.approx(
        -21.58 - 0.828, abs=0.005
    )


def test_the_pad_raises_what_it_takes():
    out = tone(1000.0, line("+30 dBu"), make("direct_box", pad=1.0, pad_db="20 dB", **IRON), end())
    assert out.node("direct_box", "in").headroom == pytest.approx(10.0, abs=1e-6)
    assert out.node("direct_box", "out").level == pytest.approx(10.0, abs=1e-6)
