"""Brute force: every combination of a small project's free controls, solved exactly in batches. Knows nothing of the search."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product

import numpy as np
from numpy.typing import NDArray

from engine.compile import build_plan, redrawn
from engine.margins import find_margins
from engine.project import Project
from engine.seat import seats_of, target_of
from engine.solve import NOISE, PEAK, PROGRAMME, solve

CHUNK = 512
ZERO_SPL = 4e-10  # (20 µPa)²

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Swept:
    """Numbers of every combination: `hands` [hand], `values` [combination, hand], `margin` [combination], by seat the rest."""

    hands: tuple[tuple[str, str], ...]
    values: Array
    margin: Array
    level: Array  # [seat, combination]
    off: Array  # [seat, combination], level less target
    hiss: Array  # [seat, combination]
    levels: Array  # [row, combination]


def free_controls(project: Project, names: set[str]) -> list[tuple[str, str]]:
    """The adjustable controls of these names that have more than one finite position."""
    return [
        (stage.id, name)
        for stage in project.stages
        for name, _, setting in stage.controls()
        if name in names and setting.state == "adjustable" and np.isfinite(stage.control_range(name).positions).sum() > 1
    ]  # fmt: skip


def sweep(project: Project, names: set[str]) -> Swept:
    """Solve every combination."""
    hands = free_controls(project, names)
    ladders = []
    for stage, control in hands:
        steps = project.stage[stage].control_range(control).positions
        ladders.append(steps[np.isfinite(steps)].tolist())
    values = np.array(list(product(*ladders)))
    plan = build_plan(project)
    seats = list(seats_of(plan))
    margin, at_seat, off, hiss, levels = [], [], [], [], []
    for start in range(0, len(values), CHUNK):
        part = values[start : start + CHUNK]
        overrides = {}
        for stage in dict.fromkeys(stage for stage, _ in hands):
            moved = {control: part[:, [at]] for at, (owner, control) in enumerate(hands) if owner == stage}
            overrides[stage] = project.stage[stage].values().replaced(moved)
        chunk = redrawn(plan, overrides, len(part))
        solution = solve(chunk.graph, chunk.rows, chunk.axis)
        margins = find_margins(chunk.graph, chunk.rows, solution, chunk.axis)
        margin.append(margins.own_db.min(axis=0))
        rows = [plan.input_row(seat.id) for seat in seats]
        level = 10.0 * np.log10(solution.flat[rows, PROGRAMME] / ZERO_SPL)
        at_seat.append(level)
        off.append(level - np.array([[target_of(seat)] for seat in seats]))
        hiss.append(10.0 * np.log10(solution.flat[rows, NOISE] / ZERO_SPL))
        with np.errstate(divide="ignore"):
            levels.append(10.0 * np.log10(solution.flat[:, PROGRAMME]))
    return Swept(
        tuple(hands),
        values,
        np.concatenate(margin),
        *(np.concatenate(each, axis=1) for each in (at_seat, off, hiss, levels)),
    )


__all__ = ["PEAK", "Swept", "free_controls", "sweep"]
