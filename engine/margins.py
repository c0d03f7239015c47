"""Clip points, referred both ways: every row's own margin, the usable ceiling, and the clip level a node shows.

All sources are taken to rise together. A margin is a clip level less the peak there, in dB; the smallest margin on
the paths through a row is one minimum swept forward and one swept backward.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .bands import Axis
from .graph import Graph
from .rows import Array, Rows
from .solve import FLAT, PEAK, Solution


@dataclass(frozen=True, eq=False)
class Margins:
    """Per row and setting [row, batch].

    `at_in_db` and `at_out_db` are the row's own peak margins ahead of and behind it; `usable_db` the smallest on the
    paths through it; `clip_level` the clip point carried to its output [power], infinite where nothing clips.
    """

    at_in_db: Array
    at_out_db: Array
    usable_db: Array
    clip_level: Array

    @property
    def own_db(self) -> Array:
        """The smaller of a row's two own margins [row, batch]."""
        return np.minimum(self.at_in_db, self.at_out_db)


def find_margins(graph: Graph, rows: Rows, solution: Solution, axis: Axis, sum_kind: int = FLAT) -> Margins:
    """Margins of a solution; `sum_kind` chooses the programme's total (FLAT) or the test tone (TONE)."""
    peak = solution.sums[:, PEAK, :, sum_kind]
    before = peak[graph.first_parent]
    after = peak
    if rows.clip_weight:
        before, after = before.copy(), after.copy()
        weights = axis.weights[:, sum_kind]
        for row, shape in rows.clip_weight.items():
            before[row] = solution.spectra[graph.first_parent[row], PEAK] @ (shape * weights)
            after[row] = solution.spectra[row, PEAK] @ (shape * weights)
    at_in, at_out = _margin_db(rows.clip_in, before), _margin_db(rows.clip_out, after)
    own = np.minimum(at_in, at_out)
    forward, backward = own.copy(), own.copy()
    for rank in graph.ranks:
        at = rank.singles
        if at.stop > at.start:
            np.minimum(forward[at], forward[rank.parents], out=forward[at])
        at = rank.joins
        if at.stop > at.start:
            heard = np.minimum.reduceat(forward[rank.join_parents], rank.join_starts, axis=0)
            np.minimum(forward[at], heard, out=forward[at])
    for rank in reversed(graph.ranks):
        at = rank.joins
        if at.stop > at.start:
            counts = np.diff(rank.join_starts, append=rank.join_parents.size)
            np.minimum.at(backward, rank.join_parents, np.repeat(backward[at], counts, axis=0))
        at = rank.singles
        if at.stop > at.start:
            if isinstance(rank.parents, slice):
                np.minimum(backward[rank.parents], backward[at], out=backward[rank.parents])
            else:
                np.minimum.at(backward, rank.parents, backward[at])
        backward[0] = np.inf
    usable = np.minimum(forward, backward)
    if graph.beyond_of.size:
        usable[graph.beyond_of] = np.minimum.reduceat(usable[graph.beyond_rows], graph.beyond_starts, axis=0)
    return Margins(at_in, at_out, usable, _carried(graph, rows, peak))


def _margin_db(clip: Array, peak: Array) -> Array:
    """10 log10(clip / peak), infinite where nothing clips or nothing sounds."""
    margin = np.full(np.broadcast_shapes(clip.shape, peak.shape), np.inf)
    live = np.isfinite(clip) & (peak > 0.0)
    np.log10(np.divide(clip, peak, where=live, out=margin), where=live, out=margin)
    return np.where(live, 10.0 * margin, np.inf)


def _carried(graph: Graph, rows: Rows, peak: Array) -> Array:
    """Clip levels at row outputs: a section's own, or the one ahead of it times the gain at the test tone.

    At a join it is the level there when the first of the branches clips: a quiet branch that clips low takes nothing
    from a loud one. Where nothing sounds it is the lowest of the branches' clip levels.
    """
    gain = rows.gain[:, :, -1]
    carried = np.full(rows.clip_out.shape, np.inf)
    is_pair = np.zeros(graph.size, dtype=bool)
    is_pair[graph.pair_rows] = True
    for rank in graph.ranks:
        at = rank.singles
        if at.stop > at.start:
            ahead = np.minimum(rows.clip_in[at], carried[rank.parents])
            here = np.where(gain[at] > 0.0, ahead * gain[at], np.inf)
            carried[at] = np.where(np.isfinite(rows.clip_out[at]), rows.clip_out[at], here)
            carried[at][is_pair[at]] = np.inf
        at = rank.joins
        if at.stop > at.start:
            carried[at] = _at_join(
                carried[rank.join_parents], peak[rank.join_parents], peak[at], rank.join_starts
            )
            carried[at][is_pair[at]] = np.inf
    return carried


def _at_join(carried: Array, peak: Array, together: Array, starts: NDArray[np.intp]) -> Array:
    """Clip levels of joins [join, batch] from those of their branches and the peaks of branches and joins."""
    room = np.full(carried.shape, np.inf)
    np.divide(carried, peak, out=room, where=peak > 0.0)
    rise = np.minimum.reduceat(room, starts, axis=0)
    lowest = np.minimum.reduceat(carried, starts, axis=0)
    finite = np.isfinite(rise)  # nowhere, where nothing sounds
    return np.where(finite, np.where(finite, rise, 0.0) * together, lowest)
