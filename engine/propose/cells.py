"""Cells: the plan's rows gathered into regions of one common shift, joined by levers.

The shift of a region is the programme's level there against now. What no lever moves keeps its gain, so its rows share
a shift; the inputs of a join shift alike (the mix keeps its balance), and so do the branches of a split. What a region
holds is one smallest margin and one noise: after a shift s they are margin - s and noise / 10**(s/10).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

import numpy as np

from engine.outcome import Outcome
from engine.rows import Array

from .levers import Lever

STEP_DB = 0.05


@dataclass(frozen=True)
class Due:
    """A cost that grows by `per_db` for every dB a region's shift lies outside `low_db` ... `high_db`."""

    low_db: float
    high_db: float
    per_db: float


@dataclass(eq=False)
class Region:
    """Rows of one common shift. `low` and `high` bound it [STEP_DB]; `wish` is the shift its end needs [dB], None without one."""

    margin: float = np.inf
    noise: float = 0.0
    low: int = -2400
    high: int = 2400
    wish: float | None = None
    dues: list[Due] = field(default_factory=list)


@dataclass(eq=False)
class Move:
    """A lever between regions: `offsets` [region, position] in STEP_DB against the first of `regions`.

    `margin` and `noise` [position] are its own, counted with the shift of the first region; `cost` [position] what a hand
    has to do for it.
    """

    levers: tuple[int, ...]
    picks: tuple[tuple[int, ...], ...]  # per position: the place in each lever's own list
    regions: tuple[int, ...]
    offsets: np.ndarray[tuple[int, ...], np.dtype[np.int64]]
    margin: Array
    noise: Array
    cost: Array


@dataclass(eq=False)
class Web:
    """Regions and the moves between them; `region_of` [row] is where a row's output stands."""

    regions: list[Region]
    moves: list[Move]
    region_of: Mapping[int, int]


class Unions:
    """Sets of rows that grow together."""

    def __init__(self, size: int) -> None:
        self.parent = list(range(size))

    def find(self, at: int) -> int:
        while self.parent[at] != at:
            self.parent[at] = self.parent[self.parent[at]]
            at = self.parent[at]
        return at

    def join(self, one: int, other: int) -> None:
        self.parent[self.find(one)] = self.find(other)


def gather_rows(outcome: Outcome, moved: Iterable[int]) -> list[int]:
    """The set each row's output belongs to [row], by a row that stands for it; covariance rows stand alone."""
    graph = outcome.plan.graph
    moved_rows, pairs = set(moved), set(graph.pair_rows.tolist())
    unions = Unions(graph.size)
    for row in range(1, graph.size):
        if row in moved_rows or row in pairs:
            continue
        for parent in graph.parents_of(row).tolist():
            if parent and parent not in pairs:
                unions.join(row, parent)
    return [unions.find(row) for row in range(graph.size)]


def build_moves(lever_index: int, lever: Lever, parents: Mapping[int, int], region_of: Mapping[int, int],
                offsets: Array, cost: Array) -> list[Move]:  # fmt: skip
    """A lever as moves between regions: one for each strand of rows that hang together.

    A control that works on several branches at once makes several moves, which the walk has to choose alike.
    """
    links = [(region_of[parents[row.row]], region_of[row.row], row) for row in lever.rows]
    left = list(range(len(links)))
    found: list[Move] = []
    while left:
        first = links[left[0]][0]
        shift: dict[int, Array] = {first: np.zeros(len(lever.values))}
        agrees = np.ones(len(lever.values), dtype=bool)
        used: list[int] = []
        grown = True
        while grown:
            grown = False
            for at in [each for each in left if each not in used]:
                before, behind, row = links[at]
                if before in shift:
                    there = shift[before] + row.gain_db
                    if behind in shift:
                        agrees &= np.abs(shift[behind] - there) < 2 * STEP_DB
                    shift[behind] = shift.get(behind, there)
                elif behind in shift:
                    shift[before] = shift[behind] - row.gain_db
                else:
                    continue
                used.append(at)
                grown = True
        left = [each for each in left if each not in used]
        margin = np.full(len(lever.values), np.inf)
        noise = np.zeros(len(lever.values))
        for at in used:
            before, behind, row = links[at]
            held = offsets[row.row]
            margin = np.minimum(margin, row.margin_in - held - shift[before])
            margin = np.minimum(margin, row.margin_out - held - shift[behind])
            noise = noise + row.noise_in * 10.0 ** (-shift[before] / 10.0)
            noise = noise + row.noise_out * 10.0 ** (-shift[behind] / 10.0)
        kept = np.flatnonzero(agrees)
        regions = tuple(shift)
        steps = np.array([np.rint(shift[region][kept] / STEP_DB) for region in regions]).astype(np.int64)
        found.append(
            Move((lever_index,), tuple((int(each),) for each in kept), regions, steps, margin[kept], noise[kept],
                 cost[kept] if not found else np.zeros(kept.size))
        )  # fmt: skip
    return found
