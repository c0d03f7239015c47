"""Copper conductors: resistance by cross-section."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .base import Number

Array = NDArray[np.float64]

COPPER_OHM_MM2_PER_M = 0.0172  # at 20 °C, handbook value
#: Largest resistance of plain copper at 20 °C [ohm/km] by nominal cross-section [mm²] (IEC 60228).
IEC_60228_OHM_PER_KM: dict[str, dict[float, float]] = {
    "IEC 60228 class 1/2": {
        0.5: 36.0, 0.75: 24.5, 1.0: 18.1, 1.5: 12.1, 2.5: 7.41, 4.0: 4.61, 6.0: 3.08, 10.0: 1.83, 16.0: 1.15,
    },
    "IEC 60228 class 5/6": {
        0.5: 39.0, 0.75: 26.0, 1.0: 19.5, 1.5: 13.3, 2.5: 7.98, 4.0: 4.95, 6.0: 3.30, 10.0: 1.91, 16.0: 1.21,
    },
}  # fmt: skip
COPPERS = ("0.0172 ohm mm²/m", *IEC_60228_OHM_PER_KM)


def ohm_per_m(area_mm2: Number, copper: str) -> Array:
    """One conductor's resistance per metre.

    By IEC 60228 a cross-section between the nominal ones takes resistance × area interpolated between its neighbours.
    """
    area = np.asarray(area_mm2, dtype=float)
    table = IEC_60228_OHM_PER_KM.get(copper)
    if table is None:
        return np.asarray(COPPER_OHM_MM2_PER_M / area)
    nominal = np.array(list(table))
    product = nominal * np.array(list(table.values())) / 1000.0
    return np.asarray(np.interp(area, nominal, product) / area)


def loop_ohm(length_m: Number, area_mm2: Number, copper: str = COPPERS[0]) -> Array:
    """Both conductors of a line, there and back."""
    return np.asarray(2.0 * np.asarray(length_m) * ohm_per_m(area_mm2, copper))
