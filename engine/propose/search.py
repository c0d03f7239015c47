"""Search: from a solved project and wishes to a position for every free control."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from engine.loads import amplifiers_of
from engine.outcome import Outcome
from engine.rows import Array

from .bounds import NoWalk, trimmed
from .cells import STEP_DB, Due, Region, Web, build_moves, gather_rows
from .costs import lever_cost, meter_dues
from .levers import Hand, Lever, find_levers
from .passes import FLOOR_DB, best_pins, cheap_and_quiet, quietest, widest
from .protect import level_bounds, limiter_margin_db
from .reach import End, find_ends, noise_reach
from .rings import choices_of, cut_rings, shared_levers, side_by_side, with_choice
from .walk import cost_of, lever_positions, noise_of
from .wishes import Wishes, free_hands, held_back_db, wanted_margin_db

WINDOW_DB = 0.5  # a seat within this of its target is on it
NARROW_DB = 0.1  # tried first, so that nothing is gained by being off the target
HISS_OF_WINDOW = 10.0 ** ((WINDOW_DB + NARROW_DB) / 10.0)
MARGIN_EQUAL_DB = 0.5
PER_DB_LATE = 5.0
PER_DB_OFF = 0.5  # what a dB off the target costs, within its window


@dataclass(frozen=True, eq=False)
class Problem:
    """Everything a search reads: levers, the web they make, and the ends with the region of each."""

    outcome: Outcome
    wishes: Wishes
    levers: tuple[Lever, ...]
    web: Web
    ends: tuple[tuple[End, int], ...]
    wanted_db: float


@dataclass(frozen=True, eq=False)
class Choice:
    """What was found: the positions, the smallest margin reached (alignment counted) and noise over programme at the ends."""

    values: Mapping[Hand, float]
    margin_db: float
    noise: float
    cost: float
    shifts_db: tuple[float, ...]  # by region
    kept_level: tuple[int, ...]  # regions held at a level because paths meet again


def pose(
    outcome: Outcome,
    wishes: Wishes,
    corrections: Mapping[str, float] | None = None,
    more: Callable[[Outcome, Array], Sequence[Lever]] | None = None,
) -> Problem:
    """Read the levers and gather the rows.

    `corrections` [dB] are added to what single ends wish; `more` makes further levers from the outcome and the reach of
    its noise, of rows that nothing else moves.
    """
    ends = find_ends(outcome)
    reach = noise_reach(outcome, ends)
    levers = find_levers(outcome, free_hands(outcome, wishes), reach)
    if more is not None:
        taken = {row.row for lever in levers for row in lever.rows}
        added = (each for each in more(outcome, reach) if not taken & {row.row for row in each.rows})
        levers = (*levers, *added)
    plan = outcome.plan
    moved = {row.row for lever in levers for row in lever.rows}
    owner = gather_rows(outcome, moved)
    region_of: dict[int, int] = {}
    for row in range(plan.graph.size):
        region_of.setdefault(owner[row], len(region_of))
    place = {row: region_of[owner[row]] for row in range(plan.graph.size)}
    held = held_back_db(outcome, wishes)
    regions = _regions(outcome, len(region_of), place, moved, held, reach)
    wished = _wish(regions, ends, place, corrections or {})
    level_bounds(outcome, wishes, regions, place, wished)
    for region, due in meter_dues(outcome, place):
        regions[region].dues.append(due)
    parents = {row: int(plan.graph.first_parent[row]) for row in moved}
    moves = [
        move
        for index, lever in enumerate(levers)
        for move in build_moves(index, lever, parents, place, held, lever_cost(outcome.project, lever))
    ]
    web = Web(regions, moves, place)
    wanted = wanted_margin_db(outcome, wishes)
    if wishes.alignment == "limiter first":
        room = limiter_margin_db(outcome)
        louder = max((regions[index].wish or 0.0 for end, index in wished if end.is_seat), default=0.0)
        wanted = wanted if room is None else room - louder
    return Problem(outcome, wishes, levers, web, wished, wanted)


def _regions(
    outcome: Outcome, count: int, place: Mapping[int, int], moved: set[int], held: Array, reach: Array
) -> list[Region]:
    plan, margins = outcome.plan, outcome.margins
    regions = [Region() for _ in range(count)]
    noise = (plan.rows.noise[:, 0] * reach).sum(axis=1)
    before, behind = margins.at_in_db[:, 0] - held, margins.at_out_db[:, 0] - held
    pairs = set(plan.graph.pair_rows.tolist())
    for row in range(1, plan.graph.size):
        if row in moved:
            continue
        if row in pairs:
            # What two rows share moves with the later of them.
            row_place = place[int(plan.graph.pair_of[np.flatnonzero(plan.graph.pair_rows == row)[0]])]
            regions[row_place].noise += float(noise[row])
            continue
        ahead = regions[place[int(plan.graph.first_parent[row])]]
        ahead.margin = min(ahead.margin, float(before[row]))
        own = regions[place[row]]
        own.margin = min(own.margin, float(behind[row]))
        own.noise += float(noise[row])
    for source in (0, *plan.graph.emitting.tolist()):
        regions[place[source]].low = regions[place[source]].high = 0
    return regions


def _wish(
    regions: list[Region], ends: tuple[End, ...], place: Mapping[int, int], corrections: Mapping[str, float]
) -> tuple[tuple[End, int], ...]:
    """Give each end's region its window. Where several ends share one, the reference seat speaks, then one with a target."""
    found = tuple((end, place[end.row]) for end in ends)
    ranked = sorted(
        found, key=lambda pair: (not pair[0].is_reference, pair[0].off_db is None, not pair[0].is_seat)
    )
    for end, index in ranked:
        region = regions[index]
        if region.wish is not None:
            continue
        region.wish = (end.off_db or 0.0) + corrections.get(end.stage, 0.0)
        region.dues.append(Due(region.wish, region.wish, PER_DB_OFF))
    return found


def windowed(web: Web, window_db: float = WINDOW_DB) -> Web:
    """The web with every end's region held within its window.

    A narrower one than the usual stands around the present level where that is on target.
    """
    regions = []
    for region in web.regions:
        if region.wish is not None:
            middle = region.wish
            if window_db < WINDOW_DB and abs(middle) <= WINDOW_DB:
                middle = 0.0
            low = int(np.ceil((middle - window_db) / STEP_DB - 1e-6))
            high = int(np.floor((middle + window_db) / STEP_DB + 1e-6))
            region = replace(region, low=max(region.low, low), high=min(region.high, high))
        regions.append(region)
    return replace(web, regions=regions)


def search(problem: Problem, *, cancelled: Callable[[], bool] | None = None) -> Choice:
    """The best settings in the order of aims: margin up to the wanted one, then hiss, then cost. Raises `NoWalk`."""
    best: tuple[tuple[float, float, float], Choice] | None = None
    web = windowed(problem.web)
    shared = shared_levers(web)
    for choice in choices_of(web, shared) if shared else iter([{}]):
        if cancelled is not None and cancelled():
            break
        fixed = with_choice(web, choice)
        if fixed is None:
            continue
        try:
            found = _search_tree(problem, fixed)
        except NoWalk:
            continue
        rank = (-round(found.margin_db, 2), _rounded(found.noise), found.cost)
        if best is None or _is_better(rank, best[0]):
            best = (rank, found)
    if best is None:
        raise NoWalk
    return best[1]


def _rounded(noise: float) -> float:
    return 10.0 * float(np.log10(noise)) if noise > 0.0 else -np.inf


def _is_better(one: tuple[float, float, float], other: tuple[float, float, float]) -> bool:
    """Whether the first is better in the order of aims; hiss within 0.5 dB counts as equal."""
    if one[0] != other[0]:
        return one[0] < other[0]
    if abs(one[1] - other[1]) > 0.5:
        return one[1] < other[1]
    return one[2] < other[2] - 1e-9


@dataclass(eq=False)
class _Opened:
    """A web as a tree: its widest smallest margin up to the wanted one, and the regions pinned to make it one."""

    web: Web
    tree: Web
    widest: float
    pinned: tuple[int, ...]

    @classmethod
    def of(cls, web: Web, wanted: float) -> _Opened:
        tree, pinned = cut_rings(web)
        if pinned:
            tree = best_pins(web, tree, pinned, wanted)
        return cls(web, tree, min(widest(tree, wanted), wanted), tuple(pinned))

    @cached_property
    def noise(self) -> float:
        """The least noise over programme with that margin kept."""
        return quietest(trimmed(self.tree, self.widest), self.widest)

    def is_as_good_as(self, wide: _Opened) -> bool:
        """Whether holding the seats close to their targets costs no margin or hiss beyond what the window itself is worth."""
        if self.widest < wide.widest - MARGIN_EQUAL_DB - 1e-9 or (self.widest < 0.0 <= wide.widest):
            return False
        return bool(self.noise <= wide.noise * HISS_OF_WINDOW)


def _search_tree(problem: Problem, web: Web) -> Choice:
    web = trimmed(side_by_side(trimmed(web, FLOOR_DB)), FLOOR_DB)
    opened = _Opened.of(web, problem.wanted_db)
    try:
        close = _Opened.of(trimmed(windowed(web, NARROW_DB), FLOOR_DB), problem.wanted_db)
        if close.is_as_good_as(opened):
            opened = close
    except NoWalk:
        pass
    tree, reached = opened.tree, opened.widest
    floor, most = _limits(problem, opened.web, reached)
    if problem.wishes.alignment == "amplifier last":
        tree = _driven(problem, tree, reached)
    tree = trimmed(tree, floor)
    noise = opened.noise if floor == reached else quietest(tree, floor)
    found, kept = cheap_and_quiet(tree, floor, noise, most)
    values = {
        hand: float(value)
        for lever, place in lever_positions(kept, found).items()
        for hand, value in zip(
            problem.levers[lever].hands, problem.levers[lever].values[place].tolist(), strict=True
        )
    }
    shifts = tuple(shift * STEP_DB for shift in found.shifts)
    return Choice(values, reached, noise_of(kept, found), cost_of(kept, found), shifts, opened.pinned)


def _driven(problem: Problem, web: Web, reached: float) -> Web:
    """The web with a price on margin at what drives the amplifiers: it is to clip ahead of them."""
    plan, margins = problem.outcome.plan, problem.outcome.margins.at_out_db[:, 0]
    regions = list(web.regions)
    for stage in amplifiers_of(plan):
        row = plan.input_row(stage.id)
        while row and not np.isfinite(margins[row]):
            row = int(plan.graph.first_parent[row])
        if row:
            at = web.region_of[row]
            due = Due(float(margins[row]) - reached, np.inf, PER_DB_LATE)
            regions[at] = replace(regions[at], dues=[*regions[at].dues, due])
    return replace(web, regions=regions)


def _limits(problem: Problem, web: Web, reached: float) -> tuple[float, float]:
    """The margin to keep [dB] and the noise not to exceed.

    Where the wanted margin is out of reach, 0.5 dB less than the best counts as equal, but nothing below 0 dB. Present
    settings that are on target are not made worse.
    """
    present = problem.web
    now_db = min(
        [region.margin for region in present.regions] + [float(move.margin[0]) for move in present.moves]
    )
    is_on_target = all(region.low <= 0 <= region.high for region in web.regions)
    floor = reached
    if reached < problem.wanted_db and problem.wishes.alignment in ("reserve", "together"):
        near = max(reached - MARGIN_EQUAL_DB, min(reached, 0.0))
        if is_on_target and now_db >= near:
            floor = min(now_db, reached)
        elif problem.wishes.alignment == "reserve":
            floor = near
    if not is_on_target or now_db < floor - 1e-9:
        return floor, np.inf
    now = sum(region.noise for region in present.regions) + sum(
        float(move.noise[0]) for move in present.moves
    )
    return floor, now * (1.0 + 1e-9)
