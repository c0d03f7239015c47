"""Filter magnitudes |H|² at given frequencies: analogue prototypes, normalised to their own corner.

All functions broadcast: a frequency [F] against a corner, gain or Q that is a float or [batch, 1] gives [batch, F].
Second-order sections are the analogue prototypes of the audio equaliser cookbook (R. Bristow-Johnson): with
A = 10**(gain/40), s = j f / f0. No sampling rate enters: a digital filter follows them but for the cramping of its top
octave, which makers place differently.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .base import Number

Array = NDArray[np.float64]


def bell(f_hz: Array, centre_hz: Number, gain_db: Number, q: Number) -> Array:
    """Peaking equaliser: H = (s² + s A/Q + 1) / (s² + s/(A Q) + 1)."""
    w2, w = _squares(f_hz, centre_hz)
    a = 10.0 ** (np.asarray(gain_db) / 40.0)
    real = (1.0 - w2) ** 2
    return np.asarray((real + (w * a / q) ** 2) / (real + (w / (a * q)) ** 2))


def low_shelf(f_hz: Array, corner_hz: Number, gain_db: Number, q: Number = 0.5**0.5) -> Array:
    """Low shelf: H = A (s² + s √A/Q + A) / (A s² + s √A/Q + 1); half its dB at the corner."""
    w2, w = _squares(f_hz, corner_hz)
    a = 10.0 ** (np.asarray(gain_db) / 40.0)
    middle = a * (w / q) ** 2
    return np.asarray(a**2 * ((a - w2) ** 2 + middle) / ((1.0 - a * w2) ** 2 + middle))


def high_shelf(f_hz: Array, corner_hz: Number, gain_db: Number, q: Number = 0.5**0.5) -> Array:
    """High shelf: H = A (A s² + s √A/Q + 1) / (s² + s √A/Q + A); half its dB at the corner."""
    w2, w = _squares(f_hz, corner_hz)
    a = 10.0 ** (np.asarray(gain_db) / 40.0)
    middle = a * (w / q) ** 2
    return np.asarray(a**2 * ((1.0 - a * w2) ** 2 + middle) / ((a - w2) ** 2 + middle))


def butterworth_low_pass(f_hz: Array, corner_hz: Number, order: int) -> Array:
    """|H|² = 1 / (1 + (f/f0)^2n): −3.01 dB at the corner, 6n dB per octave above it (Butterworth 1930)."""
    return np.asarray(1.0 / (1.0 + (f_hz / np.asarray(corner_hz)) ** (2 * order)))


def butterworth_high_pass(f_hz: Array, corner_hz: Number, order: int) -> Array:
    """The mirror of the low-pass about its corner."""
    return np.asarray(1.0 / (1.0 + (np.asarray(corner_hz) / f_hz) ** (2 * order)))


#: Slopes as panels name them: whether Linkwitz–Riley, and the order.
SLOPES: dict[str, tuple[bool, int]] = {
    "6 dB/oct": (False, 1),
    "12 dB/oct Butterworth": (False, 2),
    "18 dB/oct Butterworth": (False, 3),
    "24 dB/oct Butterworth": (False, 4),
    "48 dB/oct Butterworth": (False, 8),
    "12 dB/oct Linkwitz–Riley": (True, 2),
    "24 dB/oct Linkwitz–Riley": (True, 4),
    "48 dB/oct Linkwitz–Riley": (True, 8),
}


def low_pass(f_hz: Array, corner_hz: Number, slope: str) -> Array:
    """A low-pass by the name of its slope. Linkwitz–Riley of order 2n is Butterworth of order n, twice: −6.02 dB at the corner
    (Linkwitz 1976)."""
    squared, order = SLOPES[slope]
    return (
        butterworth_low_pass(f_hz, corner_hz, order // 2) ** 2
        if squared
        else butterworth_low_pass(f_hz, corner_hz, order)
    )


def high_pass(f_hz: Array, corner_hz: Number, slope: str) -> Array:
    """A high-pass by the name of its slope, as `low_pass`."""
    squared, order = SLOPES[slope]
    return (
        butterworth_high_pass(f_hz, corner_hz, order // 2) ** 2
        if squared
        else butterworth_high_pass(f_hz, corner_hz, order)
    )


def _squares(f_hz: Array, corner_hz: Number) -> tuple[Array, Array]:
    w = f_hz / np.asarray(corner_hz)
    return np.asarray(w * w), np.asarray(w)
