"""The room's own noise curves against ANSI/ASA S12.2 and ISO 1996."""

from __future__ import annotations

import numpy as np
import pytest

from engine.ambient import hiss_margin, make_ambient
from tests.published.tables import table

NC = table("nc_curves_octave_db")


@pytest.mark.parametrize("rating", sorted(NC, key=int))
def test_nc_curve_is_the_printed_table(rating):
    """ANSI/ASA S12.2: octave levels of NC-15 to NC-65 [confirmed]."""
    curve = make_ambient(float(rating), "NC")
    assert curve.octave_hz == tuple(table("octave_hz"))
    assert curve.octave_db == pytest.approx(NC[rating])


def test_nc_between_the_printed_curves_lies_between_them():
    """Common practice, no source: a rating between two printed curves is drawn between them."""
    between, below, above = (make_ambient(rating, "NC").octave_db for rating in (22.5, 20.0, 25.0))
    np.testing.assert_allclose(between, (np.array(below) + np.array(above)) / 2.0)


@pytest.mark.parametrize("rating", [0, 20, 35, 60])
def test_nr_curve_is_a_plus_b_nr(rating):
    """ISO 1996 (1971): L = a + b·NR per octave [memory: known, not confirmed against a printed copy]."""
    given = table("noise_rating_nr_coefficients")
    curve = make_ambient(float(rating), "NR")
    assert curve.octave_hz == tuple(given["octave_hz"])
    expected = np.array(given["a"]) + np.array(given["b"]) * rating
    np.testing.assert_allclose(curve.octave_db, expected, rtol=1e-12)


def test_nr_is_named_by_its_1_khz_octave():
    """ISO 1996 (1971): the curve passes through its own number at 1 kHz [memory]."""
    curve = make_ambient(30.0, "NR")
    assert curve.octave_db[curve.octave_hz.index(1000)] == pytest.approx(30.0)


def test_hiss_is_compared_in_octaves_of_three_thirds():
    """IEC 61260-1: an octave holds three third-octaves, so three of 10 dB make 14.77 dB; against NC-20 the
    closest octave is 8 kHz, 16 dB: 1.23 dB are left."""
    bands = np.full(31, 10.0**1.0 * 4e-10)
    margin, band_hz = hiss_margin(make_ambient(20.0, "NC"), bands, 0.0, 0.0)
    assert band_hz == 8000
    assert margin == pytest.approx(16.0 - (10.0 + 10.0 * np.log10(3.0)), abs=1e-9)
