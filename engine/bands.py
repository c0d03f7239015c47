"""The frequency axis of the whole solve: one-third-octave bands, their sample points, and weightings.

Symbols
-------
f_hz      frequency [Hz]
F         number of points on the axis: 31 bands x points per band, and one test tone, which stands last
width_hz  width of the band a point stands in [Hz]; 1 Hz at the tone
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

BAND_COUNT = 31
BAND_INDEX = np.arange(BAND_COUNT) - 17
#: Exact base-10 mid-frequencies 1000 * 10**(n/10) [Hz], n = -17 ... 13 (IEC 61260-1).
BAND_MID_HZ: Array = 1000.0 * 10.0 ** (BAND_INDEX / 10.0)
#: Band edges [Hz], the first and the last clipped so that the 31 bands span exactly 19 980 Hz.
BAND_EDGE_HZ: Array = np.concatenate(([20.0], 1000.0 * 10.0 ** ((BAND_INDEX[1:] - 0.5) / 10.0), [20_000.0]))
BAND_WIDTH_HZ: Array = np.diff(BAND_EDGE_HZ)
#: The 31 nominal names printed for people (IEC 61260-1).
BAND_NOMINAL_HZ: tuple[float, ...] = (
    20, 25, 31.5, 40, 50, 63, 80, 100, 125, 160, 200, 250, 315, 400, 500, 630, 800,
    1000, 1250, 1600, 2000, 2500, 3150, 4000, 5000, 6300, 8000, 10000, 12500, 16000, 20000,
)  # fmt: skip

USUAL_POINTS_PER_BAND = 5
SHARP_POINTS_PER_BAND = 9
USUAL_TONE_HZ = 1000.0


def a_weighting_db(f_hz: ArrayLike) -> Array:
    """A-weighting [dB] at `f_hz`, any shape (IEC 61672-1, analytic form, 0 dB at 1 kHz)."""
    f2 = np.asarray(f_hz, dtype=float) ** 2
    response = (12194.217**2 * f2**2) / (
        (f2 + 20.598997**2) * np.sqrt((f2 + 107.65265**2) * (f2 + 737.86223**2)) * (f2 + 12194.217**2)
    )
    return np.asarray(20.0 * np.log10(response) + 2.0, dtype=float)


def c_weighting_db(f_hz: ArrayLike) -> Array:
    """C-weighting [dB] at `f_hz`, any shape (IEC 61672-1, analytic form, 0 dB at 1 kHz)."""
    f2 = np.asarray(f_hz, dtype=float) ** 2
    response = (12194.217**2 * f2) / ((f2 + 20.598997**2) * (f2 + 12194.217**2))
    return np.asarray(20.0 * np.log10(response) + 0.062, dtype=float)


@dataclass(frozen=True, eq=False)
class Axis:
    """The points every spectrum of a project is sampled at; `f_hz` has shape [F], the tone last.

    A band's value is the mean of its points, taken once, of the result. So a total over all bands is the
    product with `flat_weight` [F] (one over the points per band; nothing at the tone).
    """

    points_per_band: int
    tone_hz: float
    f_hz: Array
    width_hz: Array
    flat_weight: Array
    a_weight: Array

    @property
    def size(self) -> int:
        return int(self.f_hz.size)

    def white(self, density_v2_per_hz: ArrayLike) -> Array:
        """Power per point of a white density: a density [...] gives [..., F]."""
        density = np.asarray(density_v2_per_hz, dtype=float)
        if density.ndim and density.shape[-1] == 1:
            return np.asarray(density * self.width_hz)
        return np.asarray(density[..., None] * self.width_hz)

    def bands(self, power: ArrayLike) -> Array:
        """Band powers [..., 31] of a spectrum [..., F]; the tone takes no part."""
        points = np.asarray(power, dtype=float)[..., :-1]
        return np.asarray(points.reshape(*points.shape[:-1], BAND_COUNT, self.points_per_band).mean(axis=-1))

    def spread(self, band_power: ArrayLike) -> Array:
        """A spectrum [..., F] whose bands are `band_power` [..., 31]; at the tone stands the whole power."""
        bands = np.asarray(band_power, dtype=float)
        points = np.repeat(bands, self.points_per_band, axis=-1)
        return np.concatenate((points, bands.sum(axis=-1, keepdims=True)), axis=-1)

    @cached_property
    def white_band_hz(self) -> float:
        """The bandwidth all bands span together: 19 980 Hz."""
        return float(self.width_hz @ self.flat_weight)

    @cached_property
    def white_a_hz(self) -> float:
        """The A-weighted bandwidth of white noise [Hz]; 2.05 dB under `white_band_hz`."""
        return float(self.width_hz @ self.a_weight)

    @cached_property
    def weights(self) -> Array:
        """Columns flat, A-weighted, tone: [F, 3]. One product with it gives all the sums of a solve."""
        tone = np.zeros(self.size)
        tone[-1] = 1.0
        return np.stack((self.flat_weight, self.a_weight, tone), axis=1)


@lru_cache(maxsize=16)
def make_axis(points_per_band: int = USUAL_POINTS_PER_BAND, tone_hz: float = USUAL_TONE_HZ) -> Axis:
    """The axis with log-spaced points in each of the 31 bands and `tone_hz` behind them."""
    if not 0.0 < tone_hz < 1e6:
        raise ValueError(f"test tone {tone_hz} Hz: give a frequency above 0 Hz, such as 1000")
    ratio = BAND_EDGE_HZ[1:] / BAND_EDGE_HZ[:-1]
    place = (np.arange(points_per_band) + 0.5) / points_per_band
    points = (BAND_EDGE_HZ[:-1, None] * ratio[:, None] ** place).ravel()
    share = np.full(points.size, 1.0 / points_per_band)
    return Axis(
        points_per_band=points_per_band,
        tone_hz=tone_hz,
        f_hz=_frozen(np.append(points, tone_hz)),
        width_hz=_frozen(np.append(np.repeat(BAND_WIDTH_HZ, points_per_band), 1.0)),
        flat_weight=_frozen(np.append(share, 0.0)),
        a_weight=_frozen(np.append(share * 10.0 ** (a_weighting_db(points) / 10.0), 0.0)),
    )


def _frozen(array: Array) -> Array:
    array.setflags(write=False)
    return array


Weighting = Callable[[ArrayLike], Array]
WEIGHTINGS: dict[str, Weighting] = {"A": a_weighting_db, "C": c_weighting_db}
