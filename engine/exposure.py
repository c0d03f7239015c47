"""How long a level may be heard under a criterion the user picks. An estimate for planning: local rules govern.

T = T0 / 2^((L - L0) / q): permitted time at level L, for a criterion of T0 at L0 with exchange rate q.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import log2


@dataclass(frozen=True)
class Criterion:
    """A limit: `level_dba` for `time_s`, halved (or doubled) in time for every `exchange_db`."""

    name: str
    level_dba: float
    time_s: float
    exchange_db: float
    source: str


HOUR_S = 3600.0
CRITERIA: tuple[Criterion, ...] = (
    Criterion("NIOSH 1998", 85.0, 8 * HOUR_S, 3.0, "NIOSH publication 98-126"),
    Criterion("OSHA 1910.95", 90.0, 8 * HOUR_S, 5.0, "29 CFR 1910.95 table G-16"),
    Criterion(
        "WHO venues 2022", 100.0, 900.0, 3.0, "WHO global standard for safe listening venues, LAeq 15 min"
    ),
    Criterion("DIN 15905-5", 99.0, 1800.0, 3.0, "DIN 15905-5, LAr 30 min"),
)

CAUTION = (
    "An estimate from planned levels, not a measurement. Local law and the venue's licence set the limit; "
    "measure where people are, and offer hearing protection."
)


def permitted_s(level_dba: float, criterion: Criterion) -> float:
    """Time [s] the criterion permits at a steady level; grows without end below it."""
    return float(criterion.time_s / 2.0 ** ((level_dba - criterion.level_dba) / criterion.exchange_db))


def permitted_level_dba(time_s: float, criterion: Criterion) -> float:
    """The steady level [dB(A)] the criterion permits for a time; ValueError for no time."""
    if not time_s > 0.0:
        raise ValueError(f"time {time_s} s: give a time above nothing, such as 2 h")
    return criterion.level_dba - criterion.exchange_db * log2(time_s / criterion.time_s)
