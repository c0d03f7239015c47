"""Impossible, said clearly: which aim cannot be met, by how many dB, and the least change that would make it possible."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from engine.figures import format_db
from engine.loads import amplifiers_of
from engine.loudspeaker import loudspeakers_of
from engine.outcome import Outcome
from engine.rows import Array

from .bounds import NoWalk, trimmed
from .cells import Due, Web
from .levers import Lever, MovedRow
from .passes import FLOOR_DB
from .proposal import Proposal
from .rings import cut_rings, side_by_side
from .search import WINDOW_DB, Problem, pose, windowed
from .walk import Found, Walk, lever_positions
from .wishes import Wishes

STEP = 0.5
FARTHEST_DB = 60.0
WIDE_DB = 120.0


@dataclass(frozen=True)
class Relief:
    """One change that would make it possible, and how many dB of it."""

    text: str
    by_db: float


@dataclass(frozen=True, eq=False)
class Impossible:
    """No settings meet the aims. `aim` is "level", "clip", "alignment" or "nothing to move"; it is missed by `miss_db`.

    `stage` is where it fails, if at one place. `nearest` are the settings that come nearest.
    """

    aim: str
    miss_db: float
    stage: str | None
    message: str
    reliefs: tuple[Relief, ...] = ()
    nearest: Proposal | None = field(default=None, repr=False)


# -- how far off -------------------------------------------------------------------------------------------------


def least_deviation(problem: Problem, floor_db: float) -> dict[str, float] | None:
    """How far off its wish each end has to stay [dB] for margins of `floor_db`, by stage; None where there is no walk at all."""
    web = _silent(problem.web)
    regions = []
    for region in web.regions:
        if region.wish is not None:
            due = Due(region.wish - WINDOW_DB, region.wish + WINDOW_DB, 1.0)
            region = replace(region, dues=[due])
        regions.append(region)
    found = _cheapest(replace(web, regions=regions), floor_db, around=True)
    if found is None:
        return None
    _, walk = found
    off: dict[str, float] = {}
    for end, index in problem.ends:
        wish = problem.web.regions[index].wish or 0.0
        off[end.stage] = walk.shifts[index] * 0.05 - wish
    return off


def is_between_steps(problem: Problem, stage: str) -> bool:
    """Whether levels on both sides of what an end wishes can be made, so that only the steps are too coarse."""
    for side in (-1, 1):
        web = _silent(problem.web)
        regions = list(web.regions)
        for end, index in problem.ends:
            if end.stage == stage:
                at = round((regions[index].wish or 0.0) / 0.05)
                region = regions[index]
                regions[index] = (
                    replace(region, high=min(region.high, at)) if side < 0 else replace(region, low=max(region.low, at))
                )  # fmt: skip
        try:
            trimmed(replace(web, regions=regions), FLOOR_DB)
        except NoWalk:
            return False
    return True


def _silent(web: Web) -> Web:
    """The web without noise, costs and dues."""
    regions = [replace(region, noise=0.0, dues=[]) for region in web.regions]
    moves = [
        replace(move, noise=np.zeros_like(move.noise), cost=np.zeros_like(move.cost)) for move in web.moves
    ]
    return replace(web, regions=regions, moves=moves)


def _cheapest(web: Web, floor_db: float, *, around: bool = False) -> tuple[Web, Found] | None:
    """The least cost with margins of `floor_db`; ends that close a ring are tried around their wish."""
    try:
        web = trimmed(side_by_side(trimmed(web, floor_db)), floor_db)
        tree, pinned = cut_rings(web)
    except NoWalk:
        return None
    shifts: Sequence[int] = (0,)
    if pinned:
        reach = round(WIDE_DB / 0.05) if around else 10
        shifts = sorted(range(-reach, reach + 1, 10 if around else 2), key=abs)
    best: tuple[float, Web, Found] | None = None
    for shift in shifts:
        regions = list(tree.regions)
        for region in pinned:
            at = min(max(tree.regions[region].low + shift, web.regions[region].low), web.regions[region].high)
            regions[region] = replace(regions[region], low=at, high=at)
        try:
            kept = trimmed(replace(tree, regions=regions), floor_db)
            found = Walk(kept).cheapest(1.0)
        except NoWalk:
            continue
        if best is None or found.value < best[0] - 1e-9:
            best = (found.value, kept, found)
        if not pinned or best[0] < 1e-9:
            break
    return None if best is None else (best[1], best[2])


# -- what would help -------------------------------------------------------------------------------------------


def reliefs(
    outcome: Outcome, wishes: Wishes, corrections: dict[str, float] | None = None
) -> tuple[Relief, ...]:
    """The least changes, one sort at a time, that let a search succeed: target, amplifier, pad, loudspeaker. Least first."""
    found = [
        *_lower_target(pose(outcome, wishes, corrections)),
        *_equipment(outcome, wishes, corrections or {}),
    ]
    return tuple(sorted(found, key=lambda each: each.by_db))


def _lower_target(problem: Problem) -> Iterator[Relief]:
    off = least_deviation(problem, 0.0)
    if off is None:
        return
    for end, _ in problem.ends:
        change = off[end.stage]
        if abs(change) > WINDOW_DB + 1e-6 and end.is_seat:
            name = problem.outcome.project.stage[end.stage].name
            side = "Lower" if change < 0.0 else "Raise"
            yield Relief(f"{side} the target of {name} by {format_db(abs(change), 'dB')}.", abs(change))


def _equipment(outcome: Outcome, wishes: Wishes, corrections: dict[str, float]) -> Iterator[Relief]:
    amplifiers = [(s.id, outcome.plan.section_list(s.id)) for s in amplifiers_of(outcome.plan)]
    speakers = [(s.id, outcome.plan.section_list(s.id)) for s in loudspeakers_of(outcome.plan)]
    sorts = (
        ("An amplifier with {db} less gain in place of {name}.", [(k, r[-1][1]) for k, r in amplifiers], -1.0, False),
        ("An amplifier with {db} more gain in place of {name}.", [(k, r[-1][1]) for k, r in amplifiers], 1.0, False),
        ("A pad of {db} ahead of {name}.", [(k, r[0][1]) for k, r in amplifiers], -1.0, True),
        ("A loudspeaker {db} more sensitive in place of {name}.", [(k, r[0][1]) for k, r in speakers if r], 1.0, False),
    )  # fmt: skip
    for words, rows, sign, is_ahead in sorts:
        if not rows:
            continue
        made = _Virtual(rows, sign, is_ahead)
        problem = pose(outcome, wishes, corrections, made)
        index = {
            lever: lever_index for lever_index, lever in enumerate(problem.levers) if lever.hands[0][1] == ""
        }
        if not index:
            continue
        web = _silent(windowed(problem.web))
        moves = [
            replace(move, cost=np.abs(problem.levers[move.levers[0]].values[[p[0] for p in move.picks], 0]))
            if problem.levers[move.levers[0]] in index
            else move
            for move in web.moves
        ]
        found = _cheapest(replace(web, moves=moves), 0.0)
        if found is None:
            continue
        kept, walk = found
        for lever, place in lever_positions(kept, walk).items():
            hand = problem.levers[lever].hands[0]
            change = abs(float(problem.levers[lever].values[place, 0]))
            if hand[1] == "" and change > 0.0:
                name = outcome.project.stage[hand[0]].name
                yield Relief(words.format(db=format_db(change, "dB"), name=name), change)


@dataclass(frozen=True)
class _Virtual:
    """Levers that no hand has: the gain of some rows, or a loss ahead of them, from 0 to FARTHEST_DB."""

    rows: list[tuple[str, int]]
    sign: float
    is_ahead: bool

    def __call__(self, outcome: Outcome, reach: Array) -> list[Lever]:
        plan, margins = outcome.plan, outcome.margins
        gain = self.sign * np.arange(0.0, FARTHEST_DB + STEP, STEP)
        still = np.zeros(gain.shape)
        found = []
        for stage, row in self.rows:
            noise = float((plan.rows.noise[row, 0] * reach[row]).sum())
            ahead = margins.at_in_db[row, 0] - (gain if self.is_ahead else still)
            moved = MovedRow(
                row,
                gain,
                np.broadcast_to(ahead, gain.shape),
                still + margins.at_out_db[row, 0],
                still,
                still + noise,
            )
            found.append(Lever(((stage, ""),), gain[:, None], (moved,)))
        return found
