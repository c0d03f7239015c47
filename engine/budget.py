"""Who owns the noise at a place: every origin's own contribution, by the reverse sweep from there.

A solve is linear in the noises it adds, so the noise at one row is the sum over all rows of what each adds times its
weight there. The weights are found by sweeping backward once: a parent's weight is the sum of its children's, each times
the child's gain. The total is the sum of the budget, by construction.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from heapq import heappop, heappush

import numpy as np

from .bands import Axis
from .graph import Graph
from .rows import Array, Origin, Rows
from .solve import NOISE, Solution


@dataclass(frozen=True, eq=False)
class Contribution:
    """One origin's noise at the place asked for: power per point [F] in the square of that place's unit."""

    origin: Origin
    power: Array


def contributions(
    graph: Graph, rows: Rows, solution: Solution, row: int, setting: int = 0
) -> list[Contribution]:
    """Every origin's noise at `row`, in one setting of the batch; unsorted."""
    totals: dict[Origin, Array] = defaultdict(lambda: np.zeros(rows.gain.shape[-1]))
    weight: dict[int, Array] = {row: np.ones(rows.gain.shape[-1])}
    followed = dict(zip(graph.pair_rows.tolist(), graph.pair_of.tolist(), strict=True))
    exponent = dict(zip(graph.pair_rows.tolist(), np.where(graph.pair_power, 1.0, 0.5).tolist(), strict=True))
    # Rows stand parents first, so going down the indices meets every child before its parents.
    waiting = [-row]
    while waiting:
        at = -heappop(waiting)
        reach = weight.pop(at)
        if at in solution.factors:
            reach = reach * solution.factors[at][NOISE, setting]
        elif (of := followed.get(at)) in solution.factors:
            reach = reach * solution.factors[of][NOISE, setting] ** exponent[at]  # type: ignore[index]
        for part in rows.parts[at]:
            totals[part.origin] += part.power[setting] * reach
        start, stop = graph.parent_starts[at], graph.parent_starts[at + 1]
        through = reach * rows.gain[at, setting]
        for parent, factor in zip(
            graph.parent_rows[start:stop].tolist(), graph.parent_weights[start:stop].tolist(), strict=True
        ):
            if parent:
                if parent in weight:
                    weight[parent] = weight[parent] + factor * through
                else:
                    weight[parent] = factor * through
                    heappush(waiting, -parent)
    return [Contribution(origin, power) for origin, power in totals.items()]


@dataclass(frozen=True)
class Share:
    """One line of a seat's noise budget: levels in dB SPL, the share of the unweighted total 0 ... 1."""

    stage: str
    name: str
    origin: str
    hiss: float | None
    hiss_a: float | None
    share: float


def shares(
    found: list[Contribution], names: dict[str, str], axis: Axis, zero_power: float
) -> tuple[Share, ...]:
    """The budget sorted by share, levels referred to `zero_power`."""
    flat = np.array([c.power @ axis.flat_weight for c in found])
    weighted = np.array([c.power @ axis.a_weight for c in found])
    total = flat.sum()
    lines = [
        Share(
            c.origin.stage,
            names[c.origin.stage],
            c.origin.name,
            _db(f, zero_power),
            _db(a, zero_power),
            f / total,
        )
        for c, f, a in zip(found, flat.tolist(), weighted.tolist(), strict=True)
        if f > 0.0
    ]
    return tuple(sorted(lines, key=lambda line: -line.share))


def _db(power: float, zero: float) -> float | None:
    return float(10.0 * np.log10(power / zero)) if power > 0.0 else None
