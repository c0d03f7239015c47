"""The way of every link over the grid: right-angle turns in the gaps between columns and rows, never through a block.

All here is in grid terms, so that it is worked out once for a project and holds for any zoom and scroll. Lines of one
output leave along one trunk, lines into one input arrive along one; other lines in the same gap get lanes of their own.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Hashable, Iterable, Mapping
from dataclasses import dataclass

from engine.project import Link, Project
from engine.stages import Port, Stage

LaneKey = tuple[str, int, Hashable]  # "gap" or "row", which one, whose


@dataclass(frozen=True)
class Lane:
    """Which of how many lanes, evenly spread over a gap."""

    index: int
    of: int

    @property
    def share(self) -> float:
        """Place across the gap, 0 ... 1."""
        return (self.index + 1.0) / (self.of + 1.0)


@dataclass(frozen=True)
class Route:
    """A link's turns: in the gap right of column `first_gap`; then, where no row is free, along the gap under
    `row_gap` to the gap right of `last_gap`. No turn at all: `first_gap` is None."""

    link: str
    first_gap: int | None = None
    first_lane: Lane = Lane(0, 1)
    row_gap: int | None = None
    row_lane: Lane = Lane(0, 1)
    last_gap: int = 0
    last_lane: Lane = Lane(0, 1)


def port_share(ports: tuple[Port, ...], name: str) -> float:
    """How far under a block's middle a port sits, in halves of its height: the first at 0, the rest below it."""
    place = next((at for at, port in enumerate(ports) if port.name == name), 0)
    return 0.0 if place == 0 else 0.8 * place / max(1, len(ports) - 1)


def routes(project: Project) -> Mapping[str, Route]:
    """Every link's way, by its id."""
    plans = _plan(project)
    lanes = _spread(plan.uses for plan in plans)
    found: dict[str, Route] = {}
    for plan in plans:
        keys = [key for key, _low, _high, _rank in plan.uses]
        if not keys:
            found[plan.link.id] = Route(plan.link.id)
        elif len(keys) == 1:
            found[plan.link.id] = Route(plan.link.id, keys[0][1], lanes[keys[0]])
        else:
            first, row, last = keys
            found[plan.link.id] = Route(
                plan.link.id, first[1], lanes[first], row[1], lanes[row], last[1], lanes[last]
            )
    return found


@dataclass(frozen=True)
class _Plan:
    link: Link
    uses: tuple[tuple[LaneKey, float, float, float], ...]  # lane, from, to, rank among lanes


def _plan(project: Project) -> list[_Plan]:
    standing = {(stage.column, stage.row) for stage in project.stages}
    joined = {
        (key, link.input) for key, links in project.topology.into.items() for link in links if len(links) > 1
    }
    plans = []
    for link in project.links:
        source, target = project.stage[link.source], project.stage[link.target]
        plans.append(_Plan(link, tuple(_uses(link, source, target, standing, joined))))
    return plans


def _uses(
    link: Link, source: Stage, target: Stage, standing: set[tuple[int, int]], joined: set[tuple[str, str]]
) -> Iterable[tuple[LaneKey, float, float, float]]:
    start = source.row + 0.35 * port_share(source.outputs(), link.output)
    end = target.row + 0.35 * port_share(target.inputs(), link.input)
    between = range(source.column + 1, target.column)
    free_at_start = not any((column, source.row) in standing for column in between)
    free_at_end = not any((column, target.row) in standing for column in between)
    if start == end and free_at_start:
        return
    out, into = ("out", link.source, link.output), ("in", link.target, link.input)
    joins = (link.target, link.input) in joined
    # A lower start that turns down must turn nearer its block, or it would cross the ones above it.
    rank = -start if end > start else start
    if joins and free_at_start:
        yield ("gap", target.column - 1, into), *sorted((start, end)), end if end < start else -end  # type: ignore[misc]
    elif free_at_end:
        yield ("gap", source.column, out), *sorted((start, end)), rank  # type: ignore[misc]
    elif free_at_start:
        yield ("gap", target.column - 1, into if joins else out), *sorted((start, end)), rank  # type: ignore[misc]
    else:
        under = target.row if target.row <= source.row else target.row - 1
        level = under + 0.5
        yield ("gap", source.column, out), *sorted((start, level)), rank  # type: ignore[misc]
        yield ("row", under, out), float(source.column), float(target.column), 0.0
        yield ("gap", target.column - 1, into if joins else out), *sorted((level, end)), rank  # type: ignore[misc]


def _spread(
    all_uses: Iterable[tuple[tuple[LaneKey, float, float, float], ...]],
) -> dict[LaneKey, Lane]:
    """Give lines that would lie on each other lanes of their own, as few as will do."""
    spans: dict[tuple[str, int], dict[LaneKey, tuple[float, float, float]]] = defaultdict(dict)
    for uses in all_uses:
        for key, low, high, rank in uses:
            old = spans[key[:2]].get(key, (low, high, rank))
            spans[key[:2]][key] = (min(low, old[0]), max(high, old[1]), min(rank, old[2]))
    lanes: dict[LaneKey, Lane] = {}
    for gap in spans.values():
        filled: list[list[tuple[float, float]]] = []
        taken: dict[LaneKey, int] = {}
        for key, (low, high, _) in sorted(gap.items(), key=lambda item: (item[1][2], str(item[0]))):
            place = next(
                (at for at, lane in enumerate(filled) if all(high < a or low > b for a, b in lane)),
                len(filled),
            )
            if place == len(filled):
                filled.append([])
            filled[place].append((low, high))
            taken[key] = place
        lanes.update({key: Lane(place, len(filled)) for key, place in taken.items()})
    return lanes
