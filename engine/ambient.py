"""The room's own noise: noise criterion curves, noise rating curves, or a weighted level; and hiss compared with it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

NC_OCTAVE_HZ = (63, 125, 250, 500, 1000, 2000, 4000, 8000)
#: Octave-band levels [dB SPL] of NC-15 ... NC-65 (ANSI/ASA S12.2).
NC_CURVES: dict[int, tuple[float, ...]] = {
    15: (47, 36, 29, 22, 17, 14, 12, 11),
    20: (51, 40, 33, 26, 22, 19, 17, 16),
    25: (54, 44, 37, 31, 27, 24, 22, 21),
    30: (57, 48, 41, 35, 31, 29, 28, 27),
    35: (60, 52, 45, 40, 36, 34, 33, 32),
    40: (64, 56, 50, 45, 41, 39, 38, 37),
    45: (67, 60, 54, 49, 46, 44, 43, 42),
    50: (71, 64, 58, 54, 51, 49, 48, 47),
    55: (74, 67, 62, 58, 56, 54, 53, 52),
    60: (77, 71, 67, 63, 61, 59, 58, 57),
    65: (80, 75, 71, 68, 66, 64, 63, 62),
}
NR_OCTAVE_HZ = (31.5, 63, 125, 250, 500, 1000, 2000, 4000, 8000)
#: L = a + b NR per octave (ISO 1996:1971; from memory).
NR_A = np.array([55.4, 35.5, 22.0, 12.0, 4.8, 0.0, -3.5, -6.1, -8.0])
NR_B = np.array([0.681, 0.790, 0.870, 0.930, 0.974, 1.000, 1.015, 1.025, 1.030])

_FIRST_THIRD = {
    31.5: 1,
    63: 4,
}  # the lowest of the three third-octaves of the first octave, as an index of the 31 bands


@dataclass(frozen=True)
class Ambient:
    """The room's noise. `octave_db` at `octave_hz` for a curve; else one level, `weighting` "A" or "flat"."""

    name: str
    level_db: float
    weighting: str
    octave_hz: tuple[float, ...] = ()
    octave_db: tuple[float, ...] = ()


def make_ambient(amount: float, reference: str) -> Ambient:
    """The ambient noise a figure names: reference "NC", "NR", "A" or "flat".

    NC between and beyond the printed curves is interpolated (extrapolated from the last two).
    """
    if reference == "NC":
        return Ambient(f"NC-{amount:g}", amount, "curve", NC_OCTAVE_HZ, tuple(_nc_levels(amount).tolist()))
    if reference == "NR":
        return Ambient(
            f"NR {amount:g}", amount, "curve", NR_OCTAVE_HZ, tuple((NR_A + NR_B * amount).tolist())
        )
    name = f"{amount:g} dB(A)" if reference == "A" else f"{amount:g} dB"
    return Ambient(name, amount, reference)


def _nc_levels(nc: float) -> Array:
    ratings = np.array(sorted(NC_CURVES), dtype=float)
    table = np.array([NC_CURVES[int(rating)] for rating in ratings])
    place = int(np.clip(np.searchsorted(ratings, nc) - 1, 0, ratings.size - 2))
    share = (nc - ratings[place]) / (ratings[place + 1] - ratings[place])
    return np.asarray(table[place] * (1.0 - share) + table[place + 1] * share)


def octave_power(band_power: Array, octave_hz: tuple[float, ...]) -> Array:
    """Octave powers [..., octave] of one-third-octave powers [..., 31]: three third-octaves each."""
    start = _FIRST_THIRD[octave_hz[0]]
    thirds = band_power[..., start : start + 3 * len(octave_hz)]
    return np.asarray(thirds.reshape(*thirds.shape[:-1], len(octave_hz), 3).sum(axis=-1))


def hiss_margin(
    ambient: Ambient, hiss_bands: Array, hiss_db: float, hiss_a_db: float
) -> tuple[float, float | None]:
    """The smallest of (ambient - hiss) [dB], and the octave it stands in [Hz] where the ambient is a curve.

    `hiss_bands` are the 31 band powers [Pa²].
    """
    if not ambient.octave_hz:
        return ambient.level_db - (hiss_a_db if ambient.weighting == "A" else hiss_db), None
    powers = octave_power(hiss_bands, ambient.octave_hz)
    with np.errstate(divide="ignore"):
        margins = np.array(ambient.octave_db) - 10.0 * np.log10(powers / 4e-10)
    worst = int(np.argmin(margins))
    return float(margins[worst]), float(ambient.octave_hz[worst])
