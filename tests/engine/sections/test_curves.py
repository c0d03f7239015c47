"""Figures at several points, cables with loads along them, noise figures as spectra."""

from __future__ import annotations

import numpy as np
import pytest

from engine.bands import make_axis
from engine.sections.curves import clip_at_load, noise_over_gain, straight
from engine.sections.ladder import Ladder
from engine.sections.noise import noise_total, white_total

AXIS = make_axis()


def test_straight_lines_agree_with_numpy():
    """numpy.interp, for one setting and for a batch."""
    points = [(0.0, 1.0), (10.0, 5.0), (40.0, -2.0)]
    x = np.linspace(-10.0, 60.0, 141)
    np.testing.assert_allclose(straight(x, points), np.interp(x, [0, 10, 40], [1, 5, -2]), atol=1e-12)


def test_noise_over_gain_is_straight_in_db():
    """Halfway between −110 and −120 dB in gain the noise is −115 dB; beyond the ends it stays."""
    points = [(20.0, np.full(3, 1e-11)), (60.0, np.full(3, 1e-12))]
    assert 10.0 * np.log10(noise_over_gain(40.0, points)) == pytest.approx(-115.0)
    assert noise_over_gain(70.0, points) == pytest.approx(1e-12)
    assert noise_over_gain(0.0, points) == pytest.approx(1e-11)


def test_clip_voltage_by_load():
    """500 W at 8 ohm and 800 W at 4 ohm: 63.2 and 56.6 V, and the middle of both at their geometric mean."""
    ratings = [(4.0, 3200.0), (8.0, 4000.0)]
    volts = [float(np.sqrt(clip_at_load(1.0 / z, ratings))) for z in (2.0, 4.0, 32.0**0.5, 8.0, 1e6)]
    assert volts == pytest.approx([56.569, 56.569, 59.907, 63.246, 63.246], abs=1e-3)


def test_ladder_agrees_with_its_node_equations():
    """Three loads along a cable against the solution of the conductance matrix."""
    cable, loads = 3.0, [0.01, 0.05, 0.02]
    g = 1.0 / (cable / 3.0)
    matrix = np.array([[2 * g + loads[0], -g, 0], [-g, 2 * g + loads[1], -g], [0, -g, g + loads[2]]])
    volts = np.linalg.solve(matrix, np.array([g, 0.0, 0.0]))
    ladder = Ladder.along(cable, loads)
    assert [float(share) for share in ladder.voltage_shares] == pytest.approx(volts.tolist(), rel=1e-12)
    assert float(ladder.input_ohm) == pytest.approx(1.0 / (g * (1.0 - volts[0])), rel=1e-12)
    lumped = Ladder.at_end(cable, loads)
    assert float(lumped.input_ohm) == pytest.approx(3.0 + 1.0 / 0.08)
    assert float(lumped.voltage_shares[0]) == pytest.approx(12.5 / 15.5)


@pytest.mark.parametrize(("weighting", "read"), [("flat", "flat_weight"), ("A", "a_weight")])
def test_a_total_read_with_a_weighting_comes_back(weighting, read):
    """White noise made from a weighted total sums to it again through that weighting."""
    assert white_total(AXIS, 2.5e-9, weighting) @ getattr(AXIS, read) == pytest.approx(2.5e-9, rel=1e-12)


def test_a_weighted_figure_is_2_05_db_more_unweighted():
    """White noise of 20 Hz to 20 kHz reads −2.05 dB A-weighted (integral of the formula of IEC 61672-1)."""
    more = white_total(AXIS, 1.0, "A") @ AXIS.flat_weight
    assert 10.0 * np.log10(more) == pytest.approx(2.05, abs=0.02)


def test_which_amplifier_is_quietest():
    """S32: 102 dB(A) re 800 W/8 ohm, −72 dBu, 88 dB re 1 W/8 ohm: 0.635 mV(A) or 0.80 mV, 0.195 mV, 0.113 mV."""
    references = {"rated": 6400.0, "1 W": 8.0}
    a, b, c = (
        float(np.sqrt(noise_total(amount, reference, references)))
        for amount, reference in ((102.0, "rated"), (0.774597 * 10 ** (-72 / 20), "level"), (88.0, "1 W"))
    )
    assert [a, b, c] == pytest.approx([0.635e-3, 0.195e-3, 0.113e-3], rel=0.01)
    unweighted = float(np.sqrt(white_total(AXIS, a**2, "A") @ AXIS.flat_weight))
    assert unweighted == pytest.approx(0.80e-3, rel=0.01)
    assert 20.0 * np.log10(unweighted / c) == pytest.approx(17.1, abs=0.1)


def test_a_reference_the_stage_lacks_is_named():
    with pytest.raises(
        ValueError, match="refers to 'rated', which this stage does not state: refer it to max"
    ):
        noise_total(100.0, "rated", {"max": 1.0})
