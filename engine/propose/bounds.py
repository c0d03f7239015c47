"""Bounds: which shifts and positions a walk can take at all, by narrowing every region between its neighbours."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from .cells import STEP_DB, Move, Region, Web

EDGE_DB = 1e-6
MOST_TURNS = 50  # bounds that go on creeping towards each other are left as they are
Steps = NDArray[np.int64]


class NoWalk(Exception):
    """No setting of the levers leads to where the ends want to be."""


def is_pinned(region: Region) -> bool:
    """Whether only one shift is possible."""
    return region.low == region.high


def trimmed(web: Web, floor_db: float, noise_cap: float = np.inf) -> Web:
    """The web without the shifts and positions that no walk with margins of `floor_db` and that little noise can take.

    Raises `NoWalk` where nothing is left.
    """
    regions = [_bounded(region, floor_db, noise_cap) for region in web.regions]
    if any(region.low > region.high for region in regions):
        raise NoWalk
    moves = list(web.moves)
    beside: dict[int, list[int]] = {}
    for index, move in enumerate(moves):
        for region in move.regions:
            beside.setdefault(region, []).append(index)
    waiting = dict.fromkeys(range(len(moves)))
    for _ in range(MOST_TURNS * len(moves)):
        if not waiting:
            break
        index = next(iter(waiting))
        del waiting[index]
        before = [(regions[at].low, regions[at].high) for at in moves[index].regions]
        moves[index] = _tighten(moves[index], regions, floor_db, noise_cap)
        for at, (low, high) in zip(moves[index].regions, before, strict=True):
            if (regions[at].low, regions[at].high) != (low, high):
                waiting.update(dict.fromkeys(beside[at]))
        waiting.pop(index, None)
    return replace(web, regions=regions, moves=moves)


def _bounded(region: Region, floor_db: float, noise_cap: float) -> Region:
    low, high = region.low, region.high
    if np.isfinite(region.margin):
        high = min(high, int(np.floor((region.margin - floor_db + EDGE_DB) / STEP_DB)))
    if region.noise > 0.0 and np.isfinite(noise_cap):
        low = max(low, int(np.ceil(10.0 * np.log10(region.noise / noise_cap) / STEP_DB)))
    return replace(region, low=low, high=high)


def _tighten(move: Move, regions: list[Region], floor_db: float, noise_cap: float) -> Move:
    low, high = _span(move, regions, floor_db, noise_cap)
    kept = np.flatnonzero(low <= high)
    if not kept.size:
        raise NoWalk
    for place, index in enumerate(move.regions):
        region = regions[index]
        region.low = max(region.low, int((low + move.offsets[place])[kept].min()))
        region.high = min(region.high, int((high + move.offsets[place])[kept].max()))
        if region.low > region.high:
            raise NoWalk
    return move if kept.size == low.size else chosen(move, kept)


def _span(move: Move, regions: list[Region], floor_db: float, noise_cap: float) -> tuple[Steps, Steps]:
    """The shifts of its first region that each position leaves possible [position]."""
    lows = np.array([regions[index].low for index in move.regions])[:, None] - move.offsets
    highs = np.array([regions[index].high for index in move.regions])[:, None] - move.offsets
    low, high = lows.max(axis=0), highs.min(axis=0)
    room = np.where(np.isfinite(move.margin), move.margin - floor_db + EDGE_DB, 1e6) / STEP_DB
    high = np.minimum(high, np.floor(room).astype(np.int64))
    if np.isfinite(noise_cap):
        with np.errstate(divide="ignore"):
            least = np.maximum(10.0 * np.log10(move.noise / noise_cap) / STEP_DB, -1e6)
        low = np.maximum(low, np.ceil(least).astype(np.int64))
    return low, high


def chosen(move: Move, kept: NDArray[np.intp]) -> Move:
    """A move with some of its positions."""
    return replace(
        move, picks=tuple(move.picks[each] for each in kept.tolist()), offsets=move.offsets[:, kept],
        margin=move.margin[kept], noise=move.noise[kept], cost=move.cost[kept],
    )  # fmt: skip
