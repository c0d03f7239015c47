"""Units of the trade: constants with their sources, and conversions that broadcast over arrays.

Powers are squares of rms values (V², Pa²); levels are decibels of powers.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

#: Boltzmann's constant [J/K], exact (SI 2019).
BOLTZMANN_J_PER_K = 1.380649e-23
#: 0 dBu: 1 mW in 600 ohm [V] (IEC 60268-2).
V_0DBU = float(np.sqrt(0.6))
#: 0 dBV [V].
V_0DBV = 1.0
#: 0 dB SPL [Pa] (ISO 1683).
PA_0DB_SPL = 20e-6
#: 20 °C [K].
T_20C_K = 293.15
#: Crest factor of a sine [dB]: 10 log10(2).
SINE_CREST_DB = float(10.0 * np.log10(2.0))


def db_from_power(power: ArrayLike) -> Any:
    """10 log10(power); minus infinity for nothing."""
    with np.errstate(divide="ignore"):
        return 10.0 * np.log10(np.asarray(power, dtype=float))


def power_from_db(level_db: ArrayLike) -> Any:
    """10^(level/10)."""
    return 10.0 ** (np.asarray(level_db, dtype=float) / 10.0)


def db_from_ratio(ratio: ArrayLike) -> Any:
    """20 log10(ratio) of amplitudes; minus infinity for nothing."""
    with np.errstate(divide="ignore"):
        return 20.0 * np.log10(np.asarray(ratio, dtype=float))


def ratio_from_db(level_db: ArrayLike) -> Any:
    """10^(level/20)."""
    return 10.0 ** (np.asarray(level_db, dtype=float) / 20.0)


def dbu_from_v(voltage_v: ArrayLike) -> Any:
    """dBu of an rms voltage."""
    return db_from_ratio(np.asarray(voltage_v, dtype=float) / V_0DBU)


def v_from_dbu(level_dbu: ArrayLike) -> Any:
    """Rms voltage of a level in dBu."""
    return V_0DBU * ratio_from_db(level_dbu)


def dbv_from_v(voltage_v: ArrayLike) -> Any:
    """dBV of an rms voltage."""
    return db_from_ratio(voltage_v)


def v_from_dbv(level_dbv: ArrayLike) -> Any:
    """Rms voltage of a level in dBV."""
    return ratio_from_db(level_dbv)


def dbu_from_v2(power_v2: ArrayLike) -> Any:
    """dBu of a squared rms voltage [V²]."""
    return db_from_power(np.asarray(power_v2, dtype=float) / 0.6)


def v2_from_dbu(level_dbu: ArrayLike) -> Any:
    """Squared rms voltage [V²] of a level in dBu."""
    return 0.6 * power_from_db(level_dbu)


def spl_from_pa2(power_pa2: ArrayLike) -> Any:
    """dB SPL of a squared rms pressure [Pa²]."""
    return db_from_power(np.asarray(power_pa2, dtype=float) / PA_0DB_SPL**2)


def pa2_from_spl(level_spl: ArrayLike) -> Any:
    """Squared rms pressure [Pa²] of a level in dB SPL."""
    return PA_0DB_SPL**2 * power_from_db(level_spl)


def thermal_noise_v2_per_hz(r_ohm: ArrayLike, t_k: ArrayLike = T_20C_K) -> Any:
    """Thermal noise density 4kTR [V²/Hz] (Johnson 1928, Nyquist 1928)."""
    return 4.0 * BOLTZMANN_J_PER_K * np.asarray(t_k, dtype=float) * np.asarray(r_ohm, dtype=float)
