"""Passes: the widest margin, the least hiss, the least cost, each on as few shifts as bounds leave."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from .bounds import NoWalk, trimmed
from .cells import STEP_DB, Web
from .rings import pin
from .walk import Found, Walk, cost_of, noise_of

FLOOR_DB = -60.0
MOST_MARGIN_DB = 120.0
TOP_DB = 10.0
RATE_STEPS = 5
HISS_EQUAL = 10.0 ** (0.5 / 10.0)  # hiss within 0.5 dB counts as equal


def widest(tree: Web, wanted: float) -> float:
    """The widest smallest margin. Bounds alone give a ceiling for it, so that few shifts are left to walk through."""
    low, high = ceiling(tree, wanted)
    try:
        near = Walk(_under_the_top(trimmed(tree, max(low - 0.5, FLOOR_DB)))).widest(wanted).value
    except NoWalk:
        near = -np.inf
    if near >= high - STEP_DB:
        return near
    below = 0.5
    while True:
        floor = max(low - below, FLOOR_DB)
        try:
            return Walk(trimmed(tree, floor)).widest(wanted).value
        except NoWalk:
            if floor == FLOOR_DB:
                raise
            below *= 4.0


def ceiling(web: Web, wanted: float) -> tuple[float, float]:
    """Two margins close together: bounds leave the first possible, and the second not unless it is the wanted one."""
    low, high = FLOOR_DB, min(wanted, MOST_MARGIN_DB)
    if _is_open(web, high):
        return high, high
    while high - low > 0.02:
        middle = 0.5 * (low + high)
        low, high = (middle, high) if _is_open(web, middle) else (low, middle)
    return low, high


def _under_the_top(web: Web) -> Web:
    """The web with the shifts some decibels below the highest of each region alone: often the widest margin is there."""
    band = round(TOP_DB / STEP_DB)
    regions = [replace(region, low=max(region.low, region.high - band)) for region in web.regions]
    return trimmed(replace(web, regions=regions), FLOOR_DB)


def _is_open(web: Web, floor: float, cap: float = np.inf) -> bool:
    try:
        trimmed(web, floor, cap)
    except NoWalk:
        return False
    return True


def quietest(web: Web, floor: float) -> float:
    """The least noise over programme among walks with margins of `floor`; again bounds leave few shifts."""
    low, high = -300.0, 60.0
    while high - low > 0.5:
        middle = 0.5 * (low + high)
        low, high = (low, middle) if _is_open(web, floor, 10.0 ** (middle / 10.0)) else (middle, high)
    cap = 10.0 ** ((high + 6.0) / 10.0)
    while True:
        try:
            kept = trimmed(web, floor, cap)
            found = noise_of(kept, Walk(kept).cheapest(0.0))
        except NoWalk:
            cap *= 100.0
            if cap > 1e30:
                raise
            continue
        if found <= cap:
            return found
        cap = found * 1.0001


def cheap_and_quiet(tree: Web, floor: float, noise: float, most: float) -> tuple[Found, Web]:
    """The least cost among walks whose hiss is within 0.5 dB of the least: a rate of exchange is raised until it is not."""
    if not noise > 0.0:
        return Walk(tree).cheapest(1.0), tree
    most = max(min(noise * HISS_EQUAL, most), noise)
    web = trimmed(tree, floor, most * 1.0001)
    walk = Walk(web)
    best = walk.cheapest(1e-9, noise)
    spread = max(cost_of(web, best), 1e-6)
    low, high = (HISS_EQUAL - 1.0) / spread, np.inf
    rate = low
    for _ in range(RATE_STEPS):
        found = walk.cheapest(rate, noise)
        if noise_of(web, found) <= most * (1.0 + 1e-9):
            if cost_of(web, found) <= cost_of(web, best) + 1e-9:
                best = found
            low, rate = rate, (rate * 8.0 if high == np.inf else (rate * high) ** 0.5)
        else:
            high, rate = rate, (low * rate) ** 0.5
    return best, web


def best_pins(web: Web, tree: Web, pinned: list[int], wanted: float) -> Web:
    """Choose the shifts of pinned regions one after another: the nearest to its wish that is as good as any."""
    _, most = ceiling(web, wanted)
    for region in pinned:
        free = web.regions[region]
        wish = 0.0 if free.wish is None or free.low <= 0 <= free.high else free.wish
        around = range(free.low, free.high + 1) if free.wish is not None else _coarse(free.low, free.high)
        best: tuple[float, int] | None = None
        for shift in sorted(around, key=lambda s: abs(s * STEP_DB - wish)):
            try:
                value = widest(trimmed(pin(tree, region, shift), FLOOR_DB), wanted)
            except NoWalk:
                continue
            if best is None or value > best[0] + 1e-6:
                best = (value, shift)
            if best[0] >= most - STEP_DB:
                break
        if best is not None:
            tree = pin(tree, region, best[1])
    return trimmed(tree, FLOOR_DB)


def _coarse(low: int, high: int) -> range:
    """Whole decibels around the present."""
    step = round(1.0 / STEP_DB)
    return range(max(low, -20 * step) // step * step, min(high, 20 * step) + 1, step)
