"""Line cables: capacitance against the source impedance."""

from __future__ import annotations

import math

import pytest

from tests.engine.stages.alone import end, line, make, tone


def test_600_ohm_into_300_m_of_cable():
    """30 nF behind 600 ohm: −3.01 dB at 8842 Hz, the RC low-pass, when its resistance is next to nothing."""
    cable = make(
        "line_cable",
        length_m="300 m",
        capacitance_f_per_m="100 pF/m",
        resistance_ohm_per_m="0.001 ohm/km loop",
    )
    corner = 1.0 / (2.0 * math.pi * 600.0 * 30e-9)
    node = tone(corner, line("0 dBu", z_out_ohm="600 ohm"), cable, end()).node("line_cable", "out")
    assert node.level == pytest.approx(-3.0103, abs=1e-3)


def test_resistance_counts_both_conductors():
    """80 ohm/km one-way is 160 ohm/km loop: 100 m in series with 1 kohm costs 20 log(1000 / 1016)."""
    for text in ("160 ohm/km loop", "80 ohm/km one-way"):
        cable = make("line_cable", length_m="100 m", capacitance_f_per_m="1 pF/m", resistance_ohm_per_m=text)
        load = make("feed", z_in_ohm="1 k", ein_v=None)
        level = tone(100.0, line("0 dBu"), cable, load).node("feed", "in").level
        assert level == pytest.approx(20.0 * math.log10(1000.0 / 1016.0), abs=1e-4)
