"""Solve a compiled project: sweep programme, peak and noise through its rows, rank by rank. Pure.

Every row is the same arithmetic, for all lanes, settings and frequencies at once:

    row = gain * (sum of weighted parents) + noise

The noise of one origin that meets itself again adds as voltage: `compile` lists covariance rows among a join's
parents, whose weights make the sum |a1 + a2|^2 P = a1^2 P + a2^2 P + 2 a1 a2 P. So a solve needs no special case.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .bands import Axis
from .graph import Graph, Rank
from .rows import Array, Rows

PROGRAMME, PEAK, NOISE = 0, 1, 2
LANES = 3
FLAT, A_WEIGHTED, TONE = 0, 1, 2


@dataclass(frozen=True, eq=False)
class Solution:
    """Powers at every row: `spectra` [row, lane, batch, F]; `sums` [row, lane, batch, 3] flat, A-weighted, test tone.

    `factors` holds the gains [lane, batch, F or 1] that compressors and limiters took at their rows.
    """

    spectra: Array
    sums: Array
    factors: Mapping[int, Array]

    @property
    def flat(self) -> Array:
        """Total powers [row, lane, batch]."""
        return self.sums[..., FLAT]

    @property
    def a_weighted(self) -> Array:
        """A-weighted total powers [row, lane, batch]."""
        return self.sums[..., A_WEIGHTED]

    @property
    def tone(self) -> Array:
        """Powers of the test tone [row, lane, batch]."""
        return self.sums[..., TONE]


def solve(graph: Graph, rows: Rows, axis: Axis) -> Solution:
    """All levels of a project. A single solve is a batch of one."""
    batch, width = rows.gain.shape[1:]
    spectra = np.empty((graph.size, LANES, batch, width))
    spectra[0] = 0.0  # silence
    factors: dict[int, Array] = {}
    noise, gain = rows.noise, rows.gain[:, None]
    for place, rank in enumerate(graph.ranks):
        at = rank.singles
        if at.stop > at.start:
            inside = spectra[at]
            np.multiply(spectra[rank.parents], gain[at], out=inside)
            if not place:  # sources hear silence, so all of them stand in the first rank
                spectra[graph.emitting, :NOISE] = rows.emitted
            inside[:, NOISE] += noise[at]
        at = rank.joins
        if at.stop > at.start:
            _join(spectra, rank)
            spectra[at, NOISE] += noise[at]
        for row, of, exponent in rank.dynamic_pairs:
            spectra[row] *= factors[of] ** exponent
        for row in rank.dynamic:
            factors[row] = _take_dynamics(spectra[row], rows, row, axis)
    return Solution(spectra, spectra @ axis.weights, factors)


def _join(spectra: Array, rank: Rank) -> None:
    weights = rank.join_weights[:, None, None, None]
    parents = spectra[rank.join_parents]
    sums = np.add.reduceat(parents * weights, rank.join_starts, axis=0)
    if rank.coherent.size:
        counts = rank.coherent_counts[:, None, None, None]
        voltage = np.add.reduceat(np.sqrt(parents[:, :NOISE]) * counts, rank.join_starts, axis=0)
        sums[rank.coherent, :NOISE] = voltage[rank.coherent] ** 2
    spectra[rank.joins] = sums


def _take_dynamics(lanes: Array, rows: Rows, row: int, axis: Axis) -> NDArray[np.float64]:
    """Multiply one row's lanes [lane, batch, F] in place by its static curve; return the factors."""
    curve = rows.dynamics[row]
    sums = lanes @ axis.weights
    factor = np.ones((LANES, lanes.shape[1], lanes.shape[2]))
    for which, points in ((FLAT, slice(None, -1)), (TONE, slice(-1, None))):
        programme, peak = sums[PROGRAMME, :, which, None], sums[PEAK, :, which, None]
        threshold = np.broadcast_to(np.asarray(curve.threshold, dtype=float), programme.shape)
        if curve.limiter:
            body = np.minimum(1.0, threshold / np.maximum(programme, 1e-300))
            factor[PROGRAMME, :, points] = body
            factor[NOISE, :, points] = body
            factor[PEAK, :, points] = np.minimum(1.0, threshold / np.maximum(peak, 1e-300))
            continue
        heard = peak if curve.detector == "peak" else programme
        over = np.maximum(heard / threshold, 1.0)
        factor[:, :, points] = over ** (1.0 / np.asarray(curve.ratio) - 1.0) * curve.make_up
    if curve.spares_noise:
        factor[NOISE] = 1.0
    lanes *= factor
    return factor
