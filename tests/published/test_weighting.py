"""Bands and weightings against IEC 61260-1 and IEC 61672-1."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from engine import bands
from tests.published.tables import table


def test_a_weighting_is_the_printed_table():
    """IEC 61672-1 table 3, A column: 31 values printed to 0.1 dB [confirmed].

    160 Hz is −13.3500 by the formula, printed −13.4.
    """
    np.testing.assert_allclose(
        bands.a_weighting_db(bands.BAND_MID_HZ), table("iec_61672_1_a_weighting_db"), atol=0.0505
    )


def test_c_weighting_is_the_printed_table():
    """IEC 61672-1 table 3, C column: 31 values printed to 0.1 dB [confirmed]."""
    np.testing.assert_allclose(
        bands.c_weighting_db(bands.BAND_MID_HZ), table("iec_61672_1_c_weighting_db"), atol=0.05 + 1e-9
    )


def test_weightings_are_nothing_at_1_khz():
    """IEC 61672-1: 0 dB at 1 kHz."""
    assert bands.a_weighting_db(1000.0) == pytest.approx(0.0, abs=0.001)
    assert bands.c_weighting_db(1000.0) == pytest.approx(0.0, abs=0.001)


def test_band_mid_frequencies_and_edges():
    """IEC 61260-1: base-10 mid-frequencies 1000·10^(n/10), edges a twentieth of a decade to either side [confirmed]."""
    nominal = np.array(table("third_octave_nominal_hz"))
    assert tuple(nominal) == bands.BAND_NOMINAL_HZ
    np.testing.assert_allclose(bands.BAND_MID_HZ, 1000.0 * 10.0 ** (np.arange(-17, 14) / 10.0), rtol=1e-12)
    np.testing.assert_allclose(bands.BAND_MID_HZ, nominal, rtol=0.02)
    inner = bands.BAND_EDGE_HZ[1:-1]
    np.testing.assert_allclose(inner, bands.BAND_MID_HZ[:-1] * 10.0 ** (1.0 / 20.0), rtol=1e-12)
    np.testing.assert_allclose(inner, bands.BAND_MID_HZ[1:] * 10.0 ** (-1.0 / 20.0), rtol=1e-12)


@pytest.mark.parametrize("points", [5, 9])
def test_white_noise_spans_19_980_hz(points):
    """The 31 bands clipped to 20 Hz and 20 kHz span 19 980 Hz (definition of the usual noise bandwidth)."""
    assert bands.make_axis(points).white_band_hz == pytest.approx(19_980.0, rel=1e-12)


def _share_db(weighting_db, density) -> float:
    """The weighted against the unweighted power of a density 20 Hz to 20 kHz, by adaptive quadrature over log f."""

    def under(of_log):
        return quad(of_log, np.log(20.0), np.log(20_000.0), limit=200, epsabs=0.0, epsrel=1e-9)[0]

    weighted = under(
        lambda x: density(np.exp(x)) * np.exp(x) * 10.0 ** (float(weighting_db(np.exp(x))) / 10.0)
    )
    return 10.0 * np.log10(weighted / under(lambda x: density(np.exp(x)) * np.exp(x)))


@pytest.mark.parametrize("points", [5, 9])
def test_a_weighted_white_noise_reads_2_05_db_less(points):
    """A-weighted white noise 20 Hz to 20 kHz: −2.05 dB (integral of IEC 61672-1's formula) [confirmed]."""
    axis = bands.make_axis(points)
    found = 10.0 * np.log10(axis.white_a_hz / axis.white_band_hz)
    assert found == pytest.approx(-2.05, abs=0.02)
    assert found == pytest.approx(_share_db(bands.a_weighting_db, lambda f: 1.0), abs=0.02)


@pytest.mark.parametrize(
    ("weighting", "loss_db"), [(bands.a_weighting_db, -2.86), (bands.c_weighting_db, -1.11)], ids=["A", "C"]
)
def test_weighted_pink_noise(weighting, loss_db):
    """Pink noise 20 Hz to 20 kHz: A-weighted −2.86 dB, C-weighted −1.11 dB (integrals of the formulas) [confirmed]."""
    axis = bands.make_axis()
    pink = axis.spread(np.log(bands.BAND_EDGE_HZ[1:] / bands.BAND_EDGE_HZ[:-1]))
    weighted = pink * 10.0 ** (weighting(axis.f_hz) / 10.0)
    found = 10.0 * np.log10((weighted @ axis.flat_weight) / (pink @ axis.flat_weight))
    assert found == pytest.approx(loss_db, abs=0.006)
    assert found == pytest.approx(_share_db(weighting, lambda f: 1.0 / f), abs=0.003)
