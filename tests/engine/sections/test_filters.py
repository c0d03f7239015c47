"""Filter magnitudes against scipy.signal, an independent implementation."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import signal

from engine.sections import filters

F_HZ = np.geomspace(20.0, 20_000.0, 97)
W = 2.0 * np.pi * F_HZ


def judged(b: list[float], a: list[float], f0: float) -> np.ndarray:
    """|H|² by scipy.signal.freqs of a prototype normalised to its corner."""
    _, h = signal.freqs(b, a, F_HZ / f0)
    return np.abs(h) ** 2


@pytest.mark.parametrize("gain_db", [-12.0, -3.0, 0.0, 6.0, 15.0])
@pytest.mark.parametrize(("f0", "q"), [(60.0, 0.7), (1000.0, 1.4), (9000.0, 6.0)])
def test_bell(gain_db, f0, q):
    """The cookbook's peaking prototype; exactly the gain at the centre."""
    a = 10.0 ** (gain_db / 40.0)
    np.testing.assert_allclose(
        filters.bell(F_HZ, f0, gain_db, q), judged([1, a / q, 1], [1, 1 / (a * q), 1], f0), rtol=1e-12
    )
    assert 10.0 * np.log10(filters.bell(np.array([f0]), f0, gain_db, q)) == pytest.approx(gain_db, abs=1e-9)


@pytest.mark.parametrize("gain_db", [-15.0, -4.0, 3.0, 12.0])
@pytest.mark.parametrize("q", [0.5, 0.5**0.5, 1.0])
def test_shelves(gain_db, q):
    """The cookbook's shelving prototypes; half the dB at the corner, all of it far away."""
    a = 10.0 ** (gain_db / 40.0)
    root = np.sqrt(a) / q
    low = judged([a, a * root, a * a], [a, root, 1], 400.0)
    high = judged([a * a, a * root, a], [1, root, a], 400.0)
    np.testing.assert_allclose(filters.low_shelf(F_HZ, 400.0, gain_db, q), low, rtol=1e-12)
    np.testing.assert_allclose(filters.high_shelf(F_HZ, 400.0, gain_db, q), high, rtol=1e-12)
    for shelf, far in ((filters.low_shelf, 0.01), (filters.high_shelf, 1e7)):
        ends = 10.0 * np.log10(shelf(np.array([400.0, far]), 400.0, gain_db, q))
        assert ends == pytest.approx([gain_db / 2.0, gain_db], abs=1e-6)


@pytest.mark.parametrize("order", [1, 2, 3, 4, 8])
@pytest.mark.parametrize("sort", ["low", "high"])
def test_butterworth(order, sort):
    """scipy.signal.butter, analogue."""
    b, a = signal.butter(order, 2.0 * np.pi * 250.0, sort, analog=True)
    ours = {"low": filters.butterworth_low_pass, "high": filters.butterworth_high_pass}[sort](
        F_HZ, 250.0, order
    )
    np.testing.assert_allclose(ours, np.abs(signal.freqs(b, a, W)[1]) ** 2, rtol=1e-6)


@pytest.mark.parametrize("slope", [name for name, (squared, _) in filters.SLOPES.items() if squared])
def test_linkwitz_riley_halves_add_up_flat(slope):
    """−6.02 dB at the corner; low- and high-pass amplitudes sum to one in the orders whose halves are in phase (24, 48 dB/oct)."""
    low, high = (np.sqrt(make(F_HZ, 500.0, slope)) for make in (filters.low_pass, filters.high_pass))
    assert 20.0 * np.log10(np.sqrt(filters.low_pass(np.array([500.0]), 500.0, slope))) == pytest.approx(
        -6.0206, abs=1e-4
    )
    np.testing.assert_allclose(low + high, 1.0, rtol=1e-12)


def test_sub_at_minus_5_db_moves_the_equal_level_point():
    """S30: 24 dB/oct Linkwitz–Riley at 90 Hz: at −5 dB the halves are level at 77.9 Hz, at +6 dB at 107.0 Hz."""
    f_hz = np.linspace(50.0, 150.0, 200_001)
    low, high = (
        make(f_hz, 90.0, "24 dB/oct Linkwitz–Riley") for make in (filters.low_pass, filters.high_pass)
    )
    for gain_db, expected in ((-5.0, 77.9), (6.0, 107.0)):
        apart = np.abs(10.0 * np.log10(low / high) + gain_db)
        assert f_hz[np.argmin(apart)] == pytest.approx(expected, abs=0.05)


def test_a_batch_of_corners_is_one_call():
    corners = np.array([[100.0], [1000.0]])
    together = filters.bell(F_HZ, corners, np.array([[3.0], [-6.0]]), 2.0)
    assert together.shape == (2, F_HZ.size)
    np.testing.assert_array_equal(together[1], filters.bell(F_HZ, 1000.0, -6.0, 2.0))
