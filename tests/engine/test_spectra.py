"""Programme spectra: shares of power by band."""

from __future__ import annotations

import numpy as np
import pytest

from engine.bands import BAND_INDEX, make_axis
from engine.spectra import SPECTRA, band_shares


@pytest.mark.parametrize("name", [n for n in SPECTRA if n != "own bands"])
def test_shares_add_up_to_one(name):
    shares = band_shares(name)
    assert shares.shape == (31,)
    assert shares.sum() == pytest.approx(1.0, rel=1e-12)


def test_pink_reads_2_86_db_less_a_weighted():
    """Pink noise of 20 Hz to 20 kHz: −2.86 dB A-weighted (integral of the formula of IEC 61672-1)."""
    axis = make_axis()
    assert 10.0 * np.log10(axis.spread(band_shares("pink")) @ axis.a_weight) == pytest.approx(-2.86, abs=0.03)


def test_speech_follows_ansi_s3_5():
    """Normal vocal effort sums to 62.35 dB (ANSI S3.5-1997 table 3); its bands run from 160 Hz to 8 kHz.

    Its widths come from nominal frequencies, ours from exact ones: 0.05 dB.
    """
    shares = band_shares("speech")
    assert np.flatnonzero(shares)[[0, -1]].tolist() == [9, 26]
    level_500 = 62.35 + 10.0 * np.log10(shares[np.flatnonzero(BAND_INDEX == -3)[0]])
    assert level_500 == pytest.approx(34.27 + 10.0 * np.log10(500.0 * (10**0.05 - 10**-0.05)), abs=0.05)


def test_a_test_tone_stands_in_its_band():
    assert np.flatnonzero(band_shares("test tone", 400.0)).tolist() == [13]


def test_own_octaves_are_shared_by_their_thirds():
    """Ten octave levels from 31.5 Hz: three equal thirds each."""
    shares = band_shares("own bands", own_levels_db=[70.0] * 5 + [60.0] * 5)
    assert shares[1] == pytest.approx(10.0 * shares[30])
    assert shares[0] == 0.0
    assert shares[1:4] == pytest.approx(shares[1])


def test_own_levels_of_a_batch_broadcast():
    column = np.array([[60.0], [70.0]])
    shares = band_shares("own bands", own_levels_db=[column, *[60.0] * 30])
    assert shares.shape == (2, 31)
    assert shares[1, 0] == pytest.approx(10.0 * shares[1, 1])


def test_a_wrong_number_of_own_levels_is_refused():
    with pytest.raises(ValueError, match="hold 7 levels: give 31"):
        band_shares("own bands", own_levels_db=[60.0] * 7)
