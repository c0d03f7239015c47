"""What the chart by band shows: one node or seat in 31 one-third-octave bands. No Qt here."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from app import words
from engine.ambient import Ambient
from engine.levels import NodeLevels
from engine.outcome import Outcome
from engine.seat import ZERO, SeatLevels

Array = NDArray[np.float64]

#: The nominal mid-frequencies [Hz] of the 31 bands (IEC 61260-1).
BANDS_HZ = (
    20, 25, 31.5, 40, 50, 63, 80, 100, 125, 160, 200, 250, 315, 400, 500, 630, 800, 1000, 1250, 1600, 2000, 2500, 3150,
    4000, 5000, 6300, 8000, 10000, 12500, 16000, 20000,
)  # fmt: skip
THIRD_OF_OCTAVE_DB = 10.0 * math.log10(3.0)  # an octave's level spread evenly over its three thirds
MOST_SPAN_DB = 140.0


@dataclass(frozen=True, eq=False)
class BandData:
    """Levels [dB in `unit`] by band, minus infinity as NaN; `room` only at a seat whose room is given as a curve."""

    name: str
    unit: str
    level: Array
    noise: Array
    room: Array | None = None
    about: str = "By one-third octave"

    @property
    def places(self) -> Array:
        """The bands' places along the chart."""
        return np.arange(float(len(BANDS_HZ)))

    def line(self, name: str) -> Array | None:
        """One of level, noise and room; None where there is nothing to draw."""
        values: Array | None = {"level": self.level, "noise": self.noise, "room": self.room}[name]
        return None if values is None or not np.isfinite(values).any() else values

    @cached_property
    def ends(self) -> tuple[float, float]:
        """Whole tens that hold every line."""
        lines = [line for name in ("level", "noise", "room") if (line := self.line(name)) is not None]
        finite = (
            np.concatenate([line[np.isfinite(line)] for line in lines]) if lines else np.array([-60.0, 0.0])
        )
        high = 10.0 * math.ceil((float(finite.max()) + 5.0) / 10.0)
        low = 10.0 * math.floor((float(finite.min()) - 5.0) / 10.0)
        return max(low, high - MOST_SPAN_DB), high

    def reading(self, band: int) -> str:
        """What stands in one band."""
        parts = [words.hertz(BANDS_HZ[band])]
        for name in ("level", "noise", "room"):
            line = self.line(name)
            if line is not None:
                parts.append(f"{name} {words.number(float(line[band]))}")
        return f"{' · '.join(parts)} {self.unit}"


def band_data(outcome: Outcome, selection: Iterable[str]) -> BandData | None:
    """The first of the selection in signal order; with nothing selected the first seat. None where there is nothing."""
    chosen = set(selection)
    project = outcome.project
    stages = [key for key in project.topology.order if key in chosen]
    links = [link for link in project.links if link.id in chosen]
    if not stages and not links:
        stages = [seat.stage for seat in outcome.seats[:1]]
    if not stages and links:
        stages = [links[0].target]
    if not stages:
        return None
    seat = next((each for each in outcome.seats if each.stage == stages[0]), None)
    if seat is not None:
        return _seat(seat)
    nodes = [node for node in outcome.nodes if node.stage == stages[0]]
    sides = [
        node for node in nodes if node.direction == ("in" if links and not chosen & set(stages) else "out")
    ]
    return None if not nodes else _node(outcome, (sides or nodes)[0], len(sides))


def _node(outcome: Outcome, node: NodeLevels, ports: int) -> BandData:
    bands = outcome.band_levels(node)
    return BandData(
        words.node_name(node, ports=ports), node.unit, _finite(bands.level_db), _finite(bands.noise_db),
        about=f"{node.unit} by one-third octave",
    )  # fmt: skip


def _seat(seat: SeatLevels) -> BandData:
    with np.errstate(divide="ignore"):
        level, hiss = (
            10.0 * np.log10(np.asarray(power) / ZERO) for power in (seat.level_bands, seat.hiss_bands)
        )
    about = "dB SPL by one-third octave"
    room = room_line(seat.ambient)
    if room is not None and seat.ambient is not None:
        about = f"{about} · room {seat.ambient.name}, its octaves shared in three"
    elif seat.ambient is not None:
        about = f"{about} · room {seat.ambient.name}"
    return BandData(seat.name, "dB SPL", _finite(level), _finite(hiss), room, about)


def room_line(ambient: Ambient | None) -> Array | None:
    """An octave curve by one-third octaves: each octave's level less 4.8 dB in its three; None where there is no curve."""
    if ambient is None or not ambient.octave_hz:
        return None
    line = np.full(len(BANDS_HZ), np.nan)
    for mid_hz, level_db in zip(ambient.octave_hz, ambient.octave_db, strict=True):
        place = BANDS_HZ.index(mid_hz)
        line[max(0, place - 1) : place + 2] = level_db - THIRD_OF_OCTAVE_DB
    return line


def _finite(levels: Array) -> Array:
    return np.where(np.isfinite(levels), levels, np.nan)
