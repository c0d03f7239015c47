"""What keeps a web from being a tree: levers side by side, hands that work on several branches, paths that meet again."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from itertools import product

import numpy as np

from .bounds import chosen, is_pinned
from .cells import Move, Web
from .walk import find_cycle

MOST_ALIKE = 8  # ways to reach one shift that are kept when levers stand side by side
MOST_CHOICES = 64  # of hands that work on several branches


def side_by_side(web: Web) -> Web:
    """The web with all levers between the same two free regions made one: they must move alike, for the mix keeps its balance."""
    groups: dict[tuple[int, ...], list[Move]] = {}
    kept: list[Move] = []
    for move in web.moves:
        free = sorted(region for region in set(move.regions) if not is_pinned(web.regions[region]))
        if len(free) == 2 and len(set(move.regions)) == 2:
            groups.setdefault(tuple(free), []).append(move)
        else:
            kept.append(move)
    for (one, other), moves in groups.items():
        kept.append(moves[0] if len(moves) == 1 else _one_of(one, other, moves))
    return replace(web, moves=kept)


def _one_of(one: int, other: int, moves: list[Move]) -> Move:
    turned = [move if move.regions[0] == one else _turned(move) for move in moves]
    reached = [np.unique(move.offsets[1]) for move in turned]
    common = reached[0]
    for each in reached[1:]:
        common = common[[np.abs(each - step).min() <= 1 for step in common]]
    picks: list[tuple[int, ...]] = []
    offsets, margins, noises, costs = [], [], [], []
    levers = tuple(lever for move in turned for lever in move.levers)
    for step in sorted(common.tolist(), key=abs):
        ways = [_best_ways(move, step) for move in turned]
        for way in (
            product(*ways) if np.prod([len(w) for w in ways]) <= MOST_ALIKE else [tuple(w[0] for w in ways)]
        ):
            picks.append(
                tuple(place for move, at in zip(turned, way, strict=True) for place in move.picks[at])
            )
            offsets.append(step)
            margins.append(min(move.margin[at] for move, at in zip(turned, way, strict=True)))
            noises.append(sum(move.noise[at] for move, at in zip(turned, way, strict=True)))
            costs.append(sum(move.cost[at] for move, at in zip(turned, way, strict=True)))
    steps = np.array([[0] * len(offsets), offsets], dtype=np.int64)
    return Move(
        levers, tuple(picks), (one, other), steps, np.array(margins), np.array(noises), np.array(costs)
    )


def _turned(move: Move) -> Move:
    """The same move told from its other end."""
    shift = move.offsets[1]
    drop_db = shift * 0.05
    return replace(
        move, regions=(move.regions[1], move.regions[0]), offsets=np.array([np.zeros_like(shift), -shift]),
        margin=move.margin + drop_db, noise=move.noise * 10.0 ** (drop_db / 10.0),
    )  # fmt: skip


def _best_ways(move: Move, step: int) -> list[int]:
    """The positions that make this step and are not worse than another in margin, noise and cost; the cheapest first."""
    at = np.flatnonzero(np.abs(move.offsets[1] - step) <= 1)
    kept: list[int] = []
    for place in sorted(at.tolist(), key=lambda p: (move.cost[p], move.noise[p], -move.margin[p], p)):
        if not any(move.margin[k] >= move.margin[place] and move.noise[k] <= move.noise[place] for k in kept):
            kept.append(place)
    return kept


def shared_levers(web: Web) -> list[int]:
    """Levers that make more than one move: each has to be chosen alike in all of them."""
    seen: dict[int, int] = {}
    for move in web.moves:
        for lever in move.levers:
            seen[lever] = seen.get(lever, 0) + 1
    return [lever for lever, count in seen.items() if count > 1]


def choices_of(web: Web, shared: list[int]) -> Iterator[dict[int, int]]:
    """Every choice of positions of shared levers, the present first; only their own positions one by one where all are too many."""
    ladders = [
        sorted({pick[0] for move in web.moves if move.levers == (lever,) for pick in move.picks})
        for lever in shared
    ]
    if np.prod([float(len(ladder)) for ladder in ladders]) <= MOST_CHOICES:
        yield from (dict(zip(shared, choice, strict=True)) for choice in product(*ladders))
        return
    now = dict.fromkeys(shared, 0)
    yield now
    for place in range(1, max(len(ladder) for ladder in ladders)):
        yield {
            lever: ladder[min(place, len(ladder) - 1)] for lever, ladder in zip(shared, ladders, strict=True)
        }
    for lever, ladder in list(zip(shared, ladders, strict=True))[: MOST_CHOICES // 2]:
        yield from ({**now, lever: place} for place in ladder[1:])


def with_choice(web: Web, choice: dict[int, int]) -> Web | None:
    """The web with shared levers held at a choice; None where one cannot stand there."""
    moves = []
    for move in web.moves:
        if move.levers[0] in choice:
            kept = [at for at, pick in enumerate(move.picks) if pick == (choice[move.levers[0]],)]
            if not kept:
                return None
            move = chosen(move, np.array(kept))
        moves.append(move)
    return replace(web, moves=moves)


def cut_rings(web: Web) -> tuple[Web, list[int]]:
    """The web with regions pinned until it is a tree, and which: an end where a ring has one, else where most moves meet.

    A pinned end takes the shift nearest its wish that all its branches can make; other regions stay at their present level.
    """
    pinned: list[int] = []
    while (ring := find_cycle(web)) is not None:
        ends = [region for region in ring if web.regions[region].wish is not None]
        degree = {region: sum(region in move.regions for move in web.moves) for region in ring}
        region = ends[0] if ends else max(ring, key=lambda each: (degree[each], -each))
        pinned.append(region)
        wish = web.regions[region].wish
        at = 0 if wish is None or abs(wish) <= 0.5 else round(wish / 0.05)
        web = pin(web, region, min(max(at, web.regions[region].low), web.regions[region].high))
    return web, pinned


def pin(web: Web, region: int, shift: int) -> Web:
    """The web with one region held at a shift."""
    regions = list(web.regions)
    regions[region] = replace(regions[region], low=shift, high=shift)
    return replace(web, regions=regions)
