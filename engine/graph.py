"""The compiled shape of a project: which row feeds which, in ranks. Integers only; a solve reads it and never changes it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Index = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class Rank:
    """One rank: `singles` have one parent each, `joins` several. Both are slices of the row axis.

    `parents` [singles] is an index, or a slice where the parents stand in a run. `join_parents` lists the joins'
    parents end to end with their `join_weights`; `join_starts` says where each join begins. `coherent` are joins
    whose programme is stated to add as voltage: their own places among the joins, with the counts to add. `dynamic` rows take
    a static curve; `dynamic_pairs` are covariance rows, the dynamic row each follows (solved before it), and the exponent of its gain.
    """

    singles: slice
    parents: Index | slice
    joins: slice
    join_parents: Index
    join_weights: NDArray[np.float64]
    join_starts: Index
    coherent: Index
    coherent_counts: NDArray[np.float64]
    dynamic: tuple[int, ...]
    dynamic_pairs: tuple[tuple[int, int, float], ...]


@dataclass(frozen=True, eq=False)
class Graph:
    """Rows in rank order. Row 0 is silence, the parent of what nothing feeds.

    `first_parent` [row] is the only parent of a single row, and the first of a join. `child_*` is the same web read
    backwards: the rows each row feeds, end to end, with their weights. `emitting` are the source rows.
    `pair_of` [pair] is the row whose gain a covariance row carries, `pair_power` whether it carries the power gain
    (two members alike) or the amplitude gain; `pair_rows` [pair] is where they stand. `beyond_*` list, for each node of a net, the
    nodes of the same net that it feeds.
    """

    size: int
    ranks: tuple[Rank, ...]
    first_parent: Index
    parent_starts: Index
    parent_rows: Index
    parent_weights: NDArray[np.float64]
    child_starts: Index
    child_rows: Index
    child_weights: NDArray[np.float64]
    emitting: Index
    pair_rows: Index
    pair_of: Index
    pair_power: NDArray[np.bool_]
    beyond_of: Index
    beyond_starts: Index
    beyond_rows: Index

    def parents_of(self, row: int) -> Index:
        """The rows that feed this one, covariance rows among them."""
        return self.parent_rows[self.parent_starts[row] : self.parent_starts[row + 1]]
