"""Word lengths against Bennett's formula."""

from __future__ import annotations

import numpy as np
import pytest

from engine.bands import make_axis
from engine.sections.converters import word_noise

AXIS = make_axis()


@pytest.mark.parametrize("bits", [8, 16, 20, 24])
def test_signal_to_quantisation_noise(bits):
    """A full-scale sine stands 6.02 N + 1.76 dB over the quantisation noise of N bits (Bennett 1948) [confirmed]."""
    noise = word_noise(AXIS, float(bits), dithered=False) @ AXIS.flat_weight
    assert -10.0 * np.log10(noise) == pytest.approx(6.0206 * bits + 1.7609, abs=0.001)


def test_dither_costs_4_77_db():
    """Triangular dither of two steps' width triples the noise (Lipshitz, Wannamaker and Vanderkooy 1992) [memory]."""
    plain, dithered = (word_noise(AXIS, 16.0, dithered=each) @ AXIS.flat_weight for each in (False, True))
    assert 10.0 * np.log10(dithered / plain) == pytest.approx(4.77, abs=0.005)


@pytest.mark.parametrize("bits", [8, 12])
def test_a_quantised_sine_agrees(bits):
    """The same, counted: a full-scale sine rounded to N bits, one million samples (Bennett 1948)."""
    steps = 2.0 ** (bits - 1)
    sine = np.sin(2.0 * np.pi * 997.0 / 48_000.0 * np.arange(1_000_000))
    error = np.round(sine * steps) / steps - sine
    measured = 10.0 * np.log10(np.mean(sine**2) / np.mean(error**2))
    noise = word_noise(AXIS, float(bits), dithered=False) @ AXIS.flat_weight
    assert measured == pytest.approx(-10.0 * np.log10(noise), abs=0.1)
