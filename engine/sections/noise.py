"""What sheets say of noise, as white spectra: a weighted or unweighted total to power per point of the axis."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from engine.bands import Axis
from engine.units import power_from_db, thermal_noise_v2_per_hz

from .base import Number

Array = NDArray[np.float64]

#: An ITU-R 468 filter with an rms meter reads white noise of 20 Hz ... 20 kHz this much higher (integral of the
#: filter; own arithmetic).
RMS_468_OVER_FLAT_DB = 7.26


def white_total(axis: Axis, total: Number, weighting: str | None) -> Array:
    """White noise whose total over the bands, as a meter of that weighting reads it, is `total` (a power).

    `weighting` is "A", "468" (rms), or "flat" (None too): 20 Hz ... 20 kHz.
    """
    if weighting == "A":
        return axis.white(np.asarray(total) / axis.white_a_hz)
    scale = power_from_db(RMS_468_OVER_FLAT_DB) if weighting == "468" else 1.0
    return axis.white(np.asarray(total) / (axis.white_band_hz * scale))


def thermal(axis: Axis, r_ohm: Number, temperature_k: Number) -> Array:
    """Open-circuit thermal noise of a resistance [V² per point]."""
    return axis.white(thermal_noise_v2_per_hz(r_ohm, temperature_k))


def ein_without_source(
    axis: Axis, ein_v: Number, weighting: str | None, source_ohm: Number, temperature_k: Number
) -> Array:
    """A device's own equivalent input noise: EIN² − 4kTR_S B, so that the real source's thermal noise is not counted twice.

    `ein_v` was measured with `source_ohm` across the input. Never negative: a figure below the thermal noise of
    its own source is impossible, and refused where it is typed.
    """
    total = white_total(axis, np.asarray(ein_v, dtype=float) ** 2, weighting)
    return np.maximum(total - thermal(axis, source_ohm, temperature_k), 0.0)


def noise_total(
    amount: Number,
    reference: str | None,
    reference_v2: Mapping[str, Number],
    *,
    stated_v: Number | None = None,
) -> Array:
    """Total noise power of a figure: a level in volts as it stands, or a ratio in dB under what it refers to.

    `reference` None or "level" means `amount` is a voltage; else it is a ratio re one of `reference_v2`, or re a level
    that was stated with it, `stated_v`. Raises ValueError for a reference the stage does not have.
    """
    if reference in (None, "level"):
        return np.asarray(amount, dtype=float) ** 2
    if reference in reference_v2:
        base: Number = reference_v2[reference]
    elif stated_v is not None:
        base = np.asarray(stated_v) ** 2
    else:
        have = ", ".join(reference_v2)
        raise ValueError(
            f"noise refers to {reference!r}, which this stage does not state: refer it to {have}, or give a level"
        )
    return np.asarray(base * power_from_db(-np.asarray(amount)))
