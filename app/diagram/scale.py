"""The diagram's scales: decibels to y, ticks in dBu, dBV or volts, and the sound-level axis beside it. No Qt here."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from typing import Literal

from app import words

Unit = Literal["dBu", "dBV", "V"]
UNITS: tuple[Unit, ...] = ("dBu", "dBV", "V")
DBV_OVER_DBU = 10.0 * math.log10(0.6)  # a level in dBV is this much more than in dBu: -2.22 dB

LEAST_SPAN_DB = 40.0
TICK_PX = 44.0  # ticks stand at least so far apart
STEPS_DB = (5.0, 10.0, 20.0, 30.0, 50.0)


@dataclass(frozen=True)
class Range:
    """The levels at the top and the bottom of the plot, on the left axis [dBu, or dB re clip]."""

    low: float
    high: float

    def holds(self, other: Range) -> bool:
        return self.low <= other.low and other.high <= self.high


@dataclass(frozen=True)
class Scale:
    """A range spread over the plot's height."""

    range: Range
    top: float
    bottom: float

    def y(self, level: float) -> float:
        """Where a level stands [px]; beyond the ends it stands at them."""
        level = min(max(level, self.range.low), self.range.high)
        return self.bottom - (level - self.range.low) * self.db_px

    def level(self, y: float) -> float:
        """The level at a height."""
        return self.range.low + (self.bottom - y) / self.db_px

    @property
    def db_px(self) -> float:
        """Pixels per decibel."""
        return (self.bottom - self.top) / (self.range.high - self.range.low)

    def step_db(self) -> float:
        """The distance of ticks that keeps them readable."""
        return next((step for step in STEPS_DB if step * self.db_px >= TICK_PX), STEPS_DB[-1])


def fit_range(levels: Iterable[float], *, margin_db: float = 4.0) -> Range:
    """A range of whole tens that holds all levels with a margin."""
    known = [level for level in levels if math.isfinite(level)]
    if not known:
        return Range(-130.0, 40.0)
    low = math.floor((min(known) - margin_db) / 10.0) * 10.0
    high = math.ceil((max(known) + margin_db) / 10.0) * 10.0
    if high - low < LEAST_SPAN_DB:
        low = high - LEAST_SPAN_DB
    return Range(low, high)


def ticks(scale: Scale, unit: Unit | None) -> Iterator[tuple[float, str]]:
    """The left axis: (level on the axis, its label). `unit` None is decibels re the clip point."""
    low, high = scale.range.low, scale.range.high
    if unit == "V":
        yield from _volt_ticks(low, high)
        return
    shift = -DBV_OVER_DBU if unit == "dBV" else 0.0
    step = scale.step_db()
    first = math.ceil((low - shift) / step - 1e-9)
    last = math.floor((high - shift) / step + 1e-9)
    for place in range(first, last + 1):
        yield place * step + shift, words.number(place * step, 0, signed=unit is not None)


def _volt_ticks(low: float, high: float) -> Iterator[tuple[float, str]]:
    zero = -20.0 * math.log10(math.sqrt(0.6))  # 1 V in dBu
    first, last = math.ceil((low - zero) / 20.0), math.floor((high - zero) / 20.0)
    for decade in range(first, last + 1):
        yield zero + 20.0 * decade, words.volts(10.0**decade, 1)


def spl_ticks(scale: Scale, shift_db: float) -> Iterator[tuple[float, str]]:
    """The right axis: the left one shifted by whole tens. (level on the left axis, label)."""
    step = max(10.0, scale.step_db())
    first = math.ceil((scale.range.low + shift_db) / step)
    last = math.floor((scale.range.high + shift_db) / step)
    for place in range(first, last + 1):
        yield place * step - shift_db, words.number(place * step, 0)


def spl_shift(acoustic_db: float | None, electrical_dbu: float | None) -> float:
    """The whole tens between the axes that bring the sound at the end of a path near the level that makes it."""
    if acoustic_db is None or electrical_dbu is None:
        return 90.0
    return 10.0 * round((acoustic_db - electrical_dbu) / 10.0)
