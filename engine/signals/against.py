"""A recording held against a project: where, how often and for how long it would clip, and how long limiters would work.

The recording's level stands at its source; all sources are taken to rise together. A clip point with a peak margin of
m dB is reached when the recording's sine-scaled peak passes its own highest peak by m: as a ceiling in dBFS, the sample
peak plus m.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.outcome import Outcome

from .programme import Programme


@dataclass(frozen=True)
class Moment:
    """One clip point or limiter behind the source: `runs` times over it, `seconds` together; `ceiling_dbfs` in the recording."""

    stage: str
    name: str
    section: str
    sort: str  # "clip" or "limiter"
    ceiling_dbfs: float
    runs: int
    seconds: float


def moments(outcome: Outcome, source: str, programme: Programme) -> tuple[Moment, ...]:
    """Every clip point and limiter the source feeds, the first to be reached first; only what the recording reaches."""
    behind = {source, *outcome.project.topology.fed_by(source)}
    found = []
    for stage in outcome.plan.answers:
        if stage not in behind:
            continue
        name = outcome.project.stage[stage].name
        for section, row in outcome.plan.section_list(stage):
            margin = float(outcome.margins.own_db[row, 0])
            if np.isfinite(margin):
                found.append(
                    _moment(programme, stage, name, section.name, "clip", programme.sample_peak_dbfs + margin)
                )
            if (over := _limiter_margin(outcome, row)) is not None:
                found.append(
                    _moment(
                        programme, stage, name, section.name, "limiter", programme.sample_peak_dbfs + over
                    )
                )
    return tuple(sorted((each for each in found if each.runs), key=lambda each: each.ceiling_dbfs))


def _limiter_margin(outcome: Outcome, row: int) -> float | None:
    """How far the peak ahead of a limiter lies under its threshold [dB]; None where it is no limiter."""
    curve = outcome.plan.rows.dynamics.get(row)
    if curve is None or not curve.limiter:
        return None
    parent = int(outcome.plan.graph.first_parent[row])
    before = float(outcome.solution.flat[parent, 1, 0] * np.mean(outcome.plan.rows.gain[row, 0]))
    threshold = float(np.asarray(curve.threshold).ravel()[0])
    return float(10.0 * np.log10(threshold / before)) if before > 0.0 and np.isfinite(threshold) else None


def _moment(
    programme: Programme, stage: str, name: str, section: str, sort: str, ceiling_dbfs: float
) -> Moment:
    runs, seconds = programme.over(ceiling_dbfs)
    return Moment(stage, name, section, sort, ceiling_dbfs, runs, seconds)
