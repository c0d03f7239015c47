"""What a meter reads: exactly for a steady sine, by a stated statistic for programme.

VU          rms less its lead: a rectifier that averages, calibrated on a sine, reads noise-like programme
            20 log(2/sqrt(pi)) = 1.05 dB under its rms (mean of a rectified Gaussian against a sine's).
quasi-peak  the sine-scaled peak less 2 dB: a 10 ms burst reads 2 dB low on a Type IIa meter
            (IEC 60268-10; from memory).
sample peak the waveform's own peak, on a scale where a full-scale sine reads 0 dBFS (AES17): the sine-scaled peak.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .compile import Plan
from .levels import ZERO_POWER
from .sections.base import Domain
from .solve import FLAT, PEAK, PROGRAMME, TONE, Solution

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


@dataclass(frozen=True)
class MeterReading:
    """What the meter at a stage's output shows [dB re its own zero]: for the test tone exactly, for programme by its statistic.

    None where nothing sounds. `zero` is the level of a sine that reads 0, in `unit`.
    """

    stage: str
    name: str
    sort: str
    zero: float
    unit: str
    tone: float | None
    programme: float | None


def meter_readings(plan: Plan, solution: Solution) -> tuple[MeterReading, ...]:
    """Every meter of the project, in signal order."""
    found = []
    for key in plan.project.topology.order:
        stage = plan.project.stage[key]
        meter = stage.meter(stage.values())
        if meter is None:
            continue
        row = plan.output_row(key, stage.outputs()[0].name)
        zero_power = ZERO_POWER[Domain.DIGITAL if meter.unit == "dBFS" else Domain.ANALOGUE]

        def level(lane: int, kind: int, row: int = row, zero_power: float = zero_power) -> float | None:
            power = solution.sums[row, lane, 0, kind]
            return float(10.0 * np.log10(power / zero_power)) if power > 0.0 else None

        tone, rms, peak = level(PROGRAMME, TONE), level(PROGRAMME, FLAT), level(PEAK, FLAT)
        found.append(
            MeterReading(
                key, stage.name, meter.sort, meter.zero, meter.unit,
                None if tone is None else meter_reading(meter.sort, tone, tone, meter.zero, tone=True),
                None if rms is None or peak is None else meter_reading(meter.sort, rms, peak, meter.zero, tone=False),
            )
        )  # fmt: skip
    return tuple(found)
