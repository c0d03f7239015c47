"""The speech shape against ANSI S3.5."""

from __future__ import annotations

import numpy as np
import pytest

from engine import bands, spectra
from tests.published.tables import table

SPEECH = table("ansi_s3_5_1997_normal_speech")


def test_normal_vocal_effort_adds_up():
    """ANSI S3.5-1997 table 3, normal vocal effort: 18 spectrum levels that sum to 62.35 dB overall [confirmed].

    The standard counts base-2 thirds of an octave, 0.3 % wider than ours: 0.015 dB.
    """
    start = bands.BAND_NOMINAL_HZ.index(SPEECH["third_octave_hz"][0])
    width = bands.BAND_WIDTH_HZ[start : start + 18]
    total = 10.0 * np.log10(np.sum(10.0 ** (spectra.SPEECH_LEVEL_DB_PER_HZ / 10.0) * width))
    assert total == pytest.approx(62.35, abs=0.02)


def test_speech_shares_are_the_table():
    """ANSI S3.5-1997 table 3 [confirmed]: level per hertz of each band against the 1 kHz band."""
    share = spectra.band_shares("speech")
    start = bands.BAND_NOMINAL_HZ.index(SPEECH["third_octave_hz"][0])
    one_khz = bands.BAND_NOMINAL_HZ.index(1000)
    per_hz = share / bands.BAND_WIDTH_HZ
    found = 10.0 * np.log10(per_hz[start : start + 18] / per_hz[one_khz])
    printed = np.array(SPEECH["spectrum_level_db_per_hz"])
    np.testing.assert_allclose(found, printed - printed[SPEECH["third_octave_hz"].index(1000)], atol=1e-9)
    assert not share[:start].any()
    assert not share[start + 18 :].any()
    assert share.sum() == pytest.approx(1.0)
