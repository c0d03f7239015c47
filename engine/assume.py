"""The interval an ambiguous figure leaves every number in: the project solved at both ends of what was left unsaid."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from .compile import Plan, build_plan
from .levels import NUMBERS, Bounds, node_columns
from .margins import find_margins
from .project import Project
from .solve import Solution, solve
from .stages import Values


@dataclass(frozen=True)
class Assumption:
    """One figure that leaves something open."""

    key: str  # the stage or link
    figure: str
    label: str
    text: str
    meaning: str


@dataclass(frozen=True, eq=False)
class Assumptions:
    """What was left unsaid, and the two ends it leads to.

    `node_bounds` are the lowest and highest of each number of each node; `ends` the two solved plans, for whatever
    else is bounded.
    """

    open: tuple[Assumption, ...] = ()
    node_bounds: Bounds | None = None
    ends: tuple[tuple[Plan, Solution], ...] = field(default=(), repr=False)

    @property
    def seat_bounds(self) -> tuple[tuple[Plan, Solution], ...]:
        return self.ends


def find_open(project: Project) -> tuple[Assumption, ...]:
    """Every figure of the project that leaves something open."""
    return tuple(
        Assumption(key, name, spec.label, given.text, meaning)
        for key, item in project.items()
        for name, spec, given, meaning in item.unsaid()
    )


def assume(plan: Plan, sum_kind: int) -> Assumptions:
    """Solve the project at both ends of its open figures; nothing is solved where none is open."""
    found = find_open(plan.project)
    if not found:
        return Assumptions()
    keys = {each.key for each in found} & (plan.project.stage.keys() | plan.project.link.keys())
    ends, columns = [], []
    for side in ("low", "high"):
        overrides: dict[str, Values] = {
            key: item.values(side) for key, item in plan.project.items() if key in keys
        }
        end = build_plan(plan.project, plan.axis, overrides=overrides)
        solution = solve(end.graph, end.rows, end.axis)
        margins = find_margins(end.graph, end.rows, solution, end.axis, sum_kind)
        ends.append((end, solution))
        columns.append(node_columns(end, solution, margins, sum_kind))
    low = {name: np.fmin(columns[0][name][:, 0], columns[1][name][:, 0]) for name in NUMBERS}
    high = {name: np.fmax(columns[0][name][:, 0], columns[1][name][:, 0]) for name in NUMBERS}
    return Assumptions(found, (low, high), tuple(ends))
