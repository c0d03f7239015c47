"""Figures given at one to several points, and what lies between them. All broadcast over [batch, ...]."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .base import Number

Array = NDArray[np.float64]
_LEAST = 1e-30  # keeps the logarithm of a noiseless point finite [V² per point]


def straight(x: ArrayLike, points: Sequence[tuple[ArrayLike, ArrayLike]]) -> Array:
    """Straight lines between points (x, y) of ascending x; beyond the ends the end values stay."""
    at = np.asarray(x, dtype=float)
    found = np.asarray(points[0][1], dtype=float)
    for (left, below), (right, above) in pairwise(points):
        span = np.maximum(np.asarray(right) - np.asarray(left), 1e-12)
        share = np.clip((at - np.asarray(left)) / span, 0.0, 1.0)
        mixed = np.asarray(below) * (1.0 - share) + np.asarray(above) * share
        found = np.where(at > np.asarray(left), mixed, found)
    return found


def noise_over_gain(gain_db: Number, points: Sequence[tuple[Number, Number]]) -> Array:
    """Input noise at `gain_db`, of points (gain [dB], noise [batch, F]) of ascending gain; straight in dB over dB.

    With one point it is the same at every gain, which flatters an amplifier at low gain: its residual output noise
    makes up for it.
    """
    if len(points) == 1:
        return np.asarray(points[0][1], dtype=float)
    return np.exp(straight(gain_db, [(gain, np.log(np.maximum(noise, _LEAST))) for gain, noise in points]))


def clip_at_load(admittance_s: ArrayLike, ratings: Sequence[tuple[Number, Number]]) -> Array:
    """Clip point [V²] into a load, of an amplifier's ratings (load [ohm], clip [V²]), ascending by load.

    Between two rated loads the voltage goes straight over the logarithm of the load; above the highest and below the
    lowest it stays (voltage is constant up to the current limit; common practice, no source).
    """
    z_ohm = 1.0 / np.maximum(np.abs(np.asarray(admittance_s)), 1e-9)
    points = [(np.log(load), np.sqrt(clip)) for load, clip in ratings]
    return straight(np.log(z_ohm), points) ** 2
