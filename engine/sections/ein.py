"""Equivalent input noise over gain: one to three points, interpolated."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from .base import Number

Array = NDArray[np.float64]
_LEAST = 1e-30  # keeps the logarithm of a noiseless point finite [V² per point]


def over_gain(gain_db: Number, points: Sequence[tuple[Number, Number]]) -> Array:
    """Input noise at `gain_db`, of (gain [dB], noise [batch, F]) points from the highest gain down.

    Between two points the noise goes straight in dB over dB of gain; beyond the ends it stays. With one point it is
    the same at every gain, which flatters an amplifier at low gain: its residual output noise makes up for it.
    """
    gain = np.asarray(gain_db, dtype=float)
    found = np.asarray(points[0][1], dtype=float)
    for (upper, high), (lower, low) in zip(points[:-1], points[1:], strict=True):
        span = np.maximum(np.asarray(upper) - np.asarray(lower), 1e-9)
        share = np.clip((gain - np.asarray(lower)) / span, 0.0, 1.0)
        mixed = np.exp(share * np.log(np.maximum(high, _LEAST)) + (1.0 - share) * np.log(np.maximum(low, _LEAST)))
        found = np.where(gain < np.asarray(upper), mixed, found)
    return found
