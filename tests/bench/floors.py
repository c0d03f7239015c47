"""What a solve could not beat: the same arithmetic as one fused numpy expression, without graph, lanes or names."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from engine.graph import Graph
from engine.rows import Rows
from engine.solve import LANES

Array = NDArray[np.float64]


def fused(rows: int, batch: int, width: int) -> Callable[[], Array]:
    """row = gain · parent + noise for as many rows, lanes and frequencies as a solve has, in one expression."""
    random = np.random.default_rng(1)
    parent = random.random((rows, LANES, batch, width))
    gain, noise = random.random((2, rows, 1, batch, width))
    weights = random.random((width, 3))
    return lambda: np.asarray((parent * gain + noise) @ weights)


def floor_of(graph: Graph, rows: Rows) -> Callable[[], Array]:
    """The floor of one solve."""
    return fused(graph.size, rows.batch, rows.gain.shape[-1])
