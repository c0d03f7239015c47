"""Air absorption of pure tones by ISO 9613-1."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .base import Number

Array = NDArray[np.float64]

REFERENCE_TEMPERATURE_K = 293.15
TRIPLE_POINT_K = 273.16
REFERENCE_PRESSURE_PA = 101_325.0


def absorption_db_per_m(
    f_hz: Array, temperature_k: Number, humidity_percent: Number, pressure_pa: float = REFERENCE_PRESSURE_PA
) -> Array:
    """Attenuation coefficient [dB/m] at `f_hz` (ISO 9613-1, equations 3 to 5, humidity by its annex B)."""
    temperature = np.asarray(temperature_k, dtype=float)
    relative = temperature / REFERENCE_TEMPERATURE_K
    pressure = pressure_pa / REFERENCE_PRESSURE_PA
    saturation = 10.0 ** (-6.8346 * (TRIPLE_POINT_K / temperature) ** 1.261 + 4.6151)
    h = np.asarray(humidity_percent) * saturation / pressure  # molar concentration of water vapour [%]
    oxygen_hz = pressure * (24.0 + 4.04e4 * h * (0.02 + h) / (0.391 + h))
    nitrogen_hz = (
        pressure * relative**-0.5 * (9.0 + 280.0 * h * np.exp(-4.170 * (relative ** (-1.0 / 3.0) - 1.0)))
    )
    f2 = f_hz**2
    classical = 1.84e-11 / pressure * relative**0.5
    oxygen = 0.01275 * np.exp(-2239.1 / temperature) / (oxygen_hz + f2 / oxygen_hz)
    nitrogen = 0.1068 * np.exp(-3352.0 / temperature) / (nitrogen_hz + f2 / nitrogen_hz)
    return np.asarray(8.686 * f2 * (classical + relative**-2.5 * (oxygen + nitrogen)))
