"""What settings cost a hand: controls touched and how far, faders and meters outside their working range.

Decides only between settings whose margins and hiss count as equal.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np

from engine.meters import meter_readings
from engine.outcome import Outcome
from engine.project import Project
from engine.rows import Array

from .cells import Due
from .levers import Lever

TOUCH = 1.0
PER_DB_MOVED = 0.02
PER_DB_OUTSIDE = 0.3
PER_DB_DARK = 0.2
#: Where a meter's needle or bar is of use to a hand [dB re its zero] (common practice, no source).
METER_RANGE = {"VU": (-10.0, 1.0), "quasi-peak": (-12.0, 4.0), "sample peak": (-30.0, -6.0)}


def lever_cost(project: Project, lever: Lever) -> Array:
    """The cost of each position [position]."""
    found = np.zeros(len(lever.values))
    for place, (stage, control) in enumerate(lever.hands):
        if not control:  # no hand's
            continue
        spec = project.stage[stage].control_specs()[control]
        values = lever.values[:, place]
        moved = np.abs(values - values[0])
        found += np.where(moved > 1e-9, TOUCH, 0.0)
        if spec.unit == "dB":
            found += PER_DB_MOVED * moved
        if spec.work_low is not None and spec.work_high is not None:
            outside = np.maximum(spec.work_low - values, values - spec.work_high)
            found += PER_DB_OUTSIDE * np.maximum(outside, 0.0)
    return found


def meter_dues(outcome: Outcome, place: Mapping[int, int]) -> Iterator[tuple[int, Due]]:
    """For each meter's region, the shifts that keep its reading of programme where it is of use."""
    for meter in meter_readings(outcome.plan, outcome.solution):
        if meter.programme is None:
            continue
        stage = outcome.project.stage[meter.stage]
        row = outcome.plan.output_row(meter.stage, stage.outputs()[0].name)
        low, high = METER_RANGE[meter.sort]
        yield place[row], Due(low - meter.programme, high - meter.programme, PER_DB_DARK)
