"""The numbers of a compiled project: gain, noise and clip points of every row, with a batch axis throughout."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.sections.base import Dynamics

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Origin:
    """One generator of noise: the stage that owns it, and what in the stage it is."""

    stage: str
    name: str


@dataclass(frozen=True)
class NoisePart:
    """One origin's share of the noise a row adds: power [batch, F] at the row's output."""

    origin: Origin
    power: Array


@dataclass(frozen=True, eq=False)
class Rows:
    """Row axis first. `gain` and `noise` are [row, batch, F] (loading included; noise at the row's output);
    `clip_in` and `clip_out` [row, batch]; `emitted` [source, lane, batch, F], programme and peak.

    `parts` tells each row's noise apart by origin; `dynamics` and `clip_weight` stand only at the rows that have them.
    """

    gain: Array
    noise: Array
    clip_in: Array
    clip_out: Array
    emitted: Array
    parts: tuple[tuple[NoisePart, ...], ...]
    dynamics: Mapping[int, Dynamics]
    clip_weight: Mapping[int, Array]

    @property
    def batch(self) -> int:
        return int(self.gain.shape[1])
