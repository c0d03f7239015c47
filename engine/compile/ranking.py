"""Put drafted rows in ranks, so that a rank is a slice, and write down the web as integer arrays."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from engine.graph import Graph, Index, Rank

from .draft import SILENCE, Draft, DraftRow, Sort

PAIRS = (Sort.PAIR, Sort.PAIR_JOIN)
JOINS = (Sort.JOIN, Sort.PAIR_JOIN)


def rank_rows(draft: Draft, emitting: Sequence[int], dynamic: frozenset[int]) -> tuple[Graph, Index]:
    """The graph of a draft, and where each drafted row now stands."""
    rows = draft.rows
    weighted = [_weighted(row) for row in rows]
    depth = _depths([_waits_for(row, heard, dynamic) for row, heard in zip(rows, weighted, strict=True)])
    order = sorted(range(len(rows)), key=lambda i: (depth[i], rows[i].sort in JOINS, i))
    place = np.empty(len(rows), dtype=np.intp)
    place[order] = np.arange(len(rows))
    parents = [[(int(place[p]), w) for p, w in weighted[i]] for i in order]
    ordered = [rows[i] for i in order]
    moved = {int(place[i]) for i in dynamic}
    starts = np.concatenate(([0], np.cumsum([len(p) for p in parents]))).astype(np.intp)
    flat = [pair for each in parents for pair in each]
    child_starts, child_rows, child_weights = _children(parents)
    pairs = [i for i, row in enumerate(ordered) if row.sort is Sort.PAIR]
    depths = [depth[i] for i in order]
    graph = Graph(
        size=len(rows),
        ranks=tuple(_ranks(ordered, parents, depths, place, moved)),
        first_parent=np.array([p[0][0] if p else 0 for p in parents], dtype=np.intp),
        parent_starts=starts,
        parent_rows=np.array([p for p, _ in flat], dtype=np.intp),
        parent_weights=np.array([w for _, w in flat], dtype=float),
        child_starts=child_starts,
        child_rows=child_rows,
        child_weights=child_weights,
        emitting=place[np.array(emitting, dtype=np.intp)],
        pair_rows=np.array(pairs, dtype=np.intp),
        pair_of=place[np.array([ordered[i].pair_of for i in pairs], dtype=np.intp)],
        pair_power=np.array([ordered[i].twin for i in pairs], dtype=bool),
        **dict.fromkeys(("beyond_of", "beyond_starts", "beyond_rows"), np.empty(0, dtype=np.intp)),
    )
    return graph, place


def _weighted(row: DraftRow) -> list[tuple[int, float]]:
    """A row's parents with the weights their powers add by."""
    return [(parent, float(members)) for parent, members in row.heard] + row.extra


def _waits_for(row: DraftRow, heard: list[tuple[int, float]], dynamic: frozenset[int]) -> list[int]:
    """The rows that must be solved before this one."""
    own = [row.pair_of] if row.pair_of in dynamic else []
    return [parent for parent, _ in heard] + own


def _depths(waits: list[list[int]]) -> list[int]:
    """The longest way to each row from silence."""
    depth = [-1] * len(waits)
    for start in range(len(waits)):
        trail = [start]
        while trail:
            at = trail[-1]
            open_parents = [parent for parent in waits[at] if depth[parent] < 0]
            if depth[at] >= 0 or not open_parents:
                trail.pop()
                depth[at] = 1 + max(
                    (depth[parent] for parent in waits[at]), default=-1 if at == SILENCE else 0
                )
            else:
                trail.extend(open_parents)
    return depth


def _children(
    parents: list[list[tuple[int, float]]],
) -> tuple[Index, Index, np.ndarray[tuple[int], np.dtype[np.float64]]]:
    children: list[list[tuple[int, float]]] = [[] for _ in parents]
    for child, heard in enumerate(parents):
        for parent, weight in heard:
            children[parent].append((child, weight))
    starts = np.concatenate(([0], np.cumsum([len(c) for c in children]))).astype(np.intp)
    flat = [pair for each in children for pair in each]
    return starts, np.array([c for c, _ in flat], dtype=np.intp), np.array([w for _, w in flat], dtype=float)


def _ranks(
    rows: list[DraftRow],
    parents: list[list[tuple[int, float]]],
    depths: list[int],
    place: Index,
    dynamic: set[int],
) -> list[Rank]:
    ranks = []
    start = 1  # silence stands alone in rank 0
    while start < len(rows):
        stop = start
        while stop < len(rows) and depths[stop] == depths[start]:
            stop += 1
        middle = start
        while middle < stop and rows[middle].sort not in JOINS:
            middle += 1
        ranks.append(_rank(rows, parents, slice(start, middle), slice(middle, stop), dynamic, place))
        start = stop
    return ranks


def _rank(
    rows: list[DraftRow],
    parents: list[list[tuple[int, float]]],
    singles: slice,
    joins: slice,
    dynamic: set[int],
    place: Index,
) -> Rank:
    single_parents = np.array(
        [parents[i][0][0] if parents[i] else 0 for i in range(singles.start, singles.stop)], dtype=np.intp
    )
    heard = [parents[i] for i in range(joins.start, joins.stop)]
    joined = [pair for each in heard for pair in each]
    counts = [
        float(members) for i in range(joins.start, joins.stop)
        for members in _voltage_counts(rows[i])
    ]  # fmt: skip
    return Rank(
        singles=singles,
        parents=_as_slice(single_parents),
        joins=joins,
        join_parents=np.array([p for p, _ in joined], dtype=np.intp),
        join_weights=np.array([w for _, w in joined], dtype=float),
        join_starts=np.concatenate(([0], np.cumsum([len(each) for each in heard])[:-1])).astype(np.intp),
        coherent=np.array(
            [i - joins.start for i in range(joins.start, joins.stop) if rows[i].rule == "coherent"],
            dtype=np.intp,
        ),
        coherent_counts=np.array(counts, dtype=float),
        dynamic=tuple(i for i in range(singles.start, joins.stop) if i in dynamic),
        dynamic_pairs=tuple(
            (i, int(place[rows[i].pair_of]), 1.0 if rows[i].twin else 0.5)
            for i in range(singles.start, singles.stop)
            if rows[i].sort is Sort.PAIR and int(place[rows[i].pair_of]) in dynamic
        ),
    )


def _voltage_counts(row: DraftRow) -> list[float]:
    """How many members' voltages each parent brings to a coherent join; covariance rows bring none."""
    return [float(members) for _, members in row.heard] + [0.0] * len(row.extra)


def _as_slice(index: Index) -> Index | slice:
    if index.size and np.array_equal(index, np.arange(index[0], index[0] + index.size)):
        return slice(int(index[0]), int(index[0]) + index.size)
    return index
