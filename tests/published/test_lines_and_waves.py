"""Constant-voltage taps, bridging loss and the crest factors of plain waveforms, by definition, through the shelf's stages."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import signal

from tests.scenarios.build import bare, line, solved, stage


@pytest.mark.parametrize(
    ("line_v", "tap", "ohm"),
    [("70.7 V", "5 W", 1000.0), ("70.7 V", "10 W", 500.0), ("100 V", "10 W", 1000.0)],
)
def test_impedance_of_a_tap(line_v, tap, ohm):
    """Z = V²/P: 70.7 V 5 W is 1 kohm, 10 W 500 ohm; 100 V 10 W 1 kohm (definition of constant-voltage lines) [confirmed]."""
    made = stage(
        "constant_voltage_line", "line", line_voltage_v=line_v, taps_w=[tap], tap_1=0.0, count_1="1", length_m="1 mm", area_mm2="16 mm²"
    )  # fmt: skip
    assert made.meter_ohm(made.values()) == pytest.approx(ohm, rel=0.001)


@pytest.mark.parametrize(
    ("z_out", "z_in", "loss_db"),
    [("600 ohm", "600 ohm", 6.02), ("150 ohm", "10 k", 0.13), ("75 ohm", "2.5 k", 0.26)],
)
def test_bridging_loss(z_out, z_in, loss_db):
    """20 log(Z_L/(Z_L + Z_S)): 600 into 600 −6.02, 150 into 10 k −0.13, 75 into 2.5 k −0.26 dB (definition) [confirmed]."""
    outcome = solved(line("out", "0 dBu", z_out_ohm=z_out), bare("feed", "in", z_in_ohm=z_in))
    assert outcome.node("in", "in").level == pytest.approx(-loss_db, abs=0.005)


PHASE = 2.0 * np.pi * (np.arange(4800) + 0.5) / 480.0
WAVES = {
    "sine": (np.sin(PHASE), 3.0103),
    "square": (signal.square(PHASE), 0.0),
    "triangle": (signal.sawtooth(PHASE, 0.5), 4.7712),
}


@pytest.mark.parametrize("name", WAVES)
def test_crest_factors(name):
    """Waveform peak over rms: sine 3.01, square 0, triangle 4.77 dB (definition) [confirmed].

    The sine-scaled peak the engine draws is level + crest − 3.01: at a clip point it is where the waveform clips.
    """
    wave, crest_db = WAVES[name]
    measured = 20.0 * np.log10(np.max(np.abs(wave)) / np.sqrt(np.mean(wave**2)))
    assert measured == pytest.approx(crest_db, abs=0.05)
    outcome = solved(line("out", "+4 dBu", crest=f"{crest_db:.4f} dB"), bare("feed", "in"))
    assert outcome.node("out", "out").peak == pytest.approx(4.0 + crest_db - 3.0103, abs=1e-3)
