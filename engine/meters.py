"""What a meter reads: exactly for a steady sine, by a stated statistic for programme.

VU          rms less its lead: a rectifier that averages, calibrated on a sine, reads noise-like programme
            20 log(2/sqrt(pi)) = 1.05 dB under its rms (mean of a rectified Gaussian against a sine's).
quasi-peak  the sine-scaled peak less 2 dB: a 10 ms burst reads 2 dB low on a Type IIa meter
            (IEC 60268-10; from memory).
sample peak the waveform's own peak, on a scale where a full-scale sine reads 0 dBFS (AES17): the sine-scaled peak.
"""

from __future__ import annotations

import numpy as np

VU_LEAD_DB = float(20.0 * np.log10(2.0 / np.sqrt(np.pi)))
QUASI_PEAK_LOSS_DB = 2.0

KINDS = ("VU", "quasi-peak", "sample peak")


def meter_reading(kind: str, level_db: float, peak_db: float, reference_db: float, *, tone: bool) -> float:
    """What a meter shows [dB re its own zero] for a level and a sine-scaled peak at its place.

    `reference_db` is the level of a sine that reads 0. Raises ValueError for a kind that is not one of KINDS.
    """
    if kind not in KINDS:
        raise ValueError(f"meter {kind!r} is unknown: it is one of {', '.join(KINDS)}")
    if tone:
        return level_db - reference_db
    if kind == "VU":
        return level_db - VU_LEAD_DB - reference_db
    if kind == "quasi-peak":
        return peak_db - QUASI_PEAK_LOSS_DB - reference_db
    return peak_db - reference_db
