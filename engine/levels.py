"""Levels for people: every node and section of a solution in its own unit."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from math import isfinite
from typing import Any

import numpy as np

from .compile import NodeRef, Plan
from .margins import Margins
from .rows import Array
from .sections.base import Domain
from .solve import A_WEIGHTED, FLAT, NOISE, PEAK, PROGRAMME, Solution

#: The power that reads 0 dB: 0 dBu = 0.6 V², 0 dBFS = 1, 0 dB SPL = (20 µPa)².
ZERO_POWER: Mapping[Domain, float] = {
    Domain.ANALOGUE: 0.6, Domain.DIGITAL: 1.0, Domain.ACOUSTIC: 4e-10,
}  # fmt: skip
UNIT: Mapping[Domain, str] = {Domain.ANALOGUE: "dBu", Domain.DIGITAL: "dBFS", Domain.ACOUSTIC: "dB SPL"}

Bounds = tuple[Mapping[str, Array], Mapping[str, Array]]
NUMBERS = ("level", "peak", "clip", "ceiling", "headroom", "peak_margin", "noise", "noise_a", "snr")


@dataclass(frozen=True)
class NodeLevels:
    """One node. Levels are in `unit`, margins in dB, None where there is none; the peak is sine-scaled.

    `full_scale_dbu` is the dBu of 0 dBFS at the converter that leaves or enters a digital node. `low` and `high`
    bound the numbers that rest on an ambiguous figure.
    """

    stage: str
    name: str
    port: str
    direction: str
    index: int
    domain: Domain
    unit: str
    level: float | None
    peak: float | None
    clip: float | None
    ceiling: float | None
    headroom: float | None
    peak_margin: float | None
    noise: float | None
    noise_a: float | None
    snr: float | None
    muted: bool
    full_scale_dbu: float | None = None
    low: Mapping[str, float] = field(default_factory=dict)
    high: Mapping[str, float] = field(default_factory=dict)


@dataclass(frozen=True)
class SectionLevels:
    """One section of a stage, in the unit of its output; `margin` is its smaller peak margin [dB]."""

    name: str
    unit: str
    unit_in: str
    level_in: float | None
    clip_in: float | None
    level_out: float | None
    peak_out: float | None
    clip_out: float | None
    gain_db: float | None
    noise_out: float | None
    margin: float | None


@dataclass(frozen=True)
class BandLevels:
    """A node by one-third-octave bands, in its unit: [31] each, minus infinity where there is nothing."""

    level_db: Array
    peak_db: Array
    noise_db: Array


def node_columns(plan: Plan, solution: Solution, margins: Margins, sum_kind: int = FLAT) -> dict[str, Array]:
    """The nine numbers of every node as arrays [node, batch]; NaN where there is none."""
    refs = plan.nodes
    rows = np.array([ref.row for ref in refs], dtype=np.intp)
    through = np.array(
        [ref.section if ref.direction == "in" and ref.section is not None else ref.row for ref in refs],
        dtype=np.intp,
    )
    own_in = np.array([ref.direction == "in" and ref.has_clip for ref in refs], dtype=bool)
    zero = np.array([ZERO_POWER[ref.domain] for ref in refs])[:, None]
    sums = solution.sums[rows]
    level = _db(sums[:, PROGRAMME, :, sum_kind], zero)
    peak = _db(sums[:, PEAK, :, sum_kind], zero)
    clip_power = np.where(own_in[:, None], plan.rows.clip_in[through], margins.clip_level[rows])
    clip = _db(np.where(np.isfinite(clip_power), clip_power, 0.0), zero)
    usable = margins.usable_db[through]
    noise = _db(sums[:, NOISE, :, FLAT], zero)
    return {
        "level": level,
        "peak": peak,
        "clip": clip,
        "ceiling": level + np.where(np.isfinite(usable), usable, np.nan),
        "headroom": clip - level,
        "peak_margin": clip - peak,
        "noise": noise,
        "noise_a": _db(sums[:, NOISE, :, A_WEIGHTED], zero),
        "snr": level - noise,
    }


def node_levels(plan: Plan, line: Sequence[float], bounds: Bounds | None, place: int) -> NodeLevels:
    """One node by its place among the plan's. `line` are its nine NUMBERS, `bounds` the lowest and highest of each."""
    ref = plan.nodes[place]
    numbers = {name: value if isfinite(value) else None for name, value in zip(NUMBERS, line, strict=True)}
    low, high = _interval(bounds, place) if bounds else ({}, {})
    return NodeLevels(
        ref.stage, plan.project.stage[ref.stage].name, ref.port, ref.direction, ref.index, ref.domain, UNIT[ref.domain],
        muted=numbers["level"] is None, full_scale_dbu=full_scale_dbu(plan, ref), low=low, high=high, **numbers,
    )  # fmt: skip


def _interval(bounds: Bounds, place: int) -> tuple[dict[str, float], dict[str, float]]:
    low, high = {}, {}
    for name in NUMBERS:
        bottom, top = float(bounds[0][name][place]), float(bounds[1][name][place])
        if top - bottom > 5e-4:
            low[name], high[name] = bottom, top
    return low, high


def full_scale_dbu(plan: Plan, ref: NodeRef) -> float | None:
    """The dBu of 0 dBFS at the converter a digital node hangs on: upstream first, else downstream."""
    if ref.domain is not Domain.DIGITAL:
        return None
    scales = _full_scales(plan)
    row = ref.row
    while row:
        if row in scales:
            return float(10.0 * np.log10(scales[row] ** 2 / ZERO_POWER[Domain.ANALOGUE]))
        row = int(plan.graph.first_parent[row])
    ahead, seen = [ref.row], set()
    while ahead:
        at = ahead.pop(0)
        if at in scales:
            return float(10.0 * np.log10(scales[at] ** 2 / ZERO_POWER[Domain.ANALOGUE]))
        if at not in seen:
            seen.add(at)
            start, stop = plan.graph.child_starts[at], plan.graph.child_starts[at + 1]
            ahead.extend(plan.graph.child_rows[start:stop].tolist())
    return None


def _full_scales(plan: Plan) -> dict[int, float]:
    return {
        row: float(np.asarray(section.full_scale_v).ravel()[0])
        for stage in plan.answers
        for section, row in plan.section_list(stage)
        if section.full_scale_v is not None
    }


def section_levels(plan: Plan, solution: Solution, margins: Margins, stage: str) -> tuple[SectionLevels, ...]:
    """The sections of an active stage in signal order; none for a passive one."""
    found = []
    domain_of: dict[int, Domain] = {}
    for section, row in plan.section_list(stage):
        parent = int(plan.graph.first_parent[row])
        inside = plan.project.stage[stage].inputs()
        before = domain_of.get(parent, inside[0].domain if inside else plan.project.stage[stage].domain)
        after = section.domain or before
        domain_of[row] = after
        in_zero, out_zero = ZERO_POWER[before], ZERO_POWER[after]
        sums = solution.sums
        level_in, level_out = sums[parent, PROGRAMME, 0, FLAT], sums[row, PROGRAMME, 0, FLAT]
        margin = float(min(margins.at_in_db[row, 0], margins.at_out_db[row, 0]))
        gain = _db(plan.rows.gain[row, 0, -1] * in_zero, out_zero)
        found.append(
            SectionLevels(
                section.name, UNIT[after], UNIT[before], _number(_db(level_in, in_zero)),
                _number(_db(_finite(plan.rows.clip_in[row, 0]), in_zero)), _number(_db(level_out, out_zero)),
                _number(_db(sums[row, PEAK, 0, FLAT], out_zero)), _number(_db(_finite(plan.rows.clip_out[row, 0]), out_zero)),
                _number(gain), _number(_db(sums[row, NOISE, 0, FLAT], out_zero)), margin if np.isfinite(margin) else None,
            )
        )  # fmt: skip
    return tuple(found)


def band_levels(plan: Plan, solution: Solution, ref: NodeRef) -> BandLevels:
    """One node by bands."""
    zero = ZERO_POWER[ref.domain]
    spectra = plan.axis.bands(solution.spectra[ref.row, :, 0])
    with np.errstate(divide="ignore"):
        in_db = 10.0 * np.log10(spectra / zero)
    return BandLevels(in_db[PROGRAMME], in_db[PEAK], in_db[NOISE])


def _finite(power: Any) -> Any:
    return power if np.isfinite(power) else 0.0


def _db(power: Any, zero: Any) -> Array:
    """10 log10(power / zero); NaN where there is no power."""
    power = np.asarray(power, dtype=float)
    live = power > 0.0
    return np.where(live, 10.0 * np.log10(np.where(live, power, 1.0) / zero), np.nan)


def _number(value: Any) -> float | None:
    value = float(value)
    return value if np.isfinite(value) else None
