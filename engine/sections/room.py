"""The reverberant field of a room (Hopkins and Stryker 1948, Sabine's absorption).

L = Lw + 10 log10(Q / 4 pi r² + 4 / R). A loudspeaker's level is stated on its axis at a distance r0 in free field, so its
reverberant field is that level times 16 pi r0² / (Q R).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .base import Number

Array = NDArray[np.float64]


def absorption_m2(volume_m3: Number, rt60_s: Number) -> Array:
    """Sabine's absorption area 0.161 V / T [m²], taken as the room constant where no other is given."""
    return np.asarray(0.161 * np.asarray(volume_m3) / np.asarray(rt60_s))


def direct_gain(distance_m: Number, reference_m: Number, off_axis_db: Number = 0.0) -> Array:
    """Power gain of the direct sound from `reference_m` on axis to a place: inverse square and what the angle loses."""
    return np.asarray((np.asarray(reference_m) / distance_m) ** 2 * 10.0 ** (-np.asarray(off_axis_db) / 10.0))


def reverberant_gain(room_constant_m2: Number, directivity_q: Number, reference_m: Number) -> Array:
    """Power gain from the level at `reference_m` on axis to the room's diffuse field."""
    return np.asarray(
        16.0 * np.pi * np.asarray(reference_m) ** 2 / (np.asarray(directivity_q) * room_constant_m2)
    )


def critical_distance_m(room_constant_m2: Number, directivity_q: Number) -> Array:
    """Where direct and reverberant fields are equal: sqrt(Q R / 16 pi) = 0.141 sqrt(Q R)."""
    return np.asarray(np.sqrt(np.asarray(directivity_q) * room_constant_m2 / (16.0 * np.pi)))
