"""Where everything stands in the view, in px: blocks, ports, links; and what lies under a point. No Qt here."""

from __future__ import annotations

import itertools
from collections.abc import Iterator, Mapping
from functools import cached_property
from typing import Protocol

from app.gestures import Hit
from app.gestures.base import Box, Place, Point
from engine.project import Link, Project
from engine.stages import Port, Stage

from .routes import Route, port_share, routes
from .rows import RowScale, row_scale


class ColumnMap(Protocol):
    """What the layout needs of the columns."""

    @property
    def pitch_px(self) -> float: ...

    def x_in(self, column: float) -> float:
        """A block's left edge."""

    def x_out(self, column: float) -> float:
        """A block's right edge."""


class Layout:
    """One project as it stands in the view: `columns` give x, rows and `top_px` (how far it is scrolled) give y."""

    def __init__(self, project: Project, columns: ColumnMap, top_px: float = 0.0) -> None:
        self.project = project
        self.columns = columns
        self.top_px = top_px
        self._seen: tuple[float, float, float] | None = None
        self._boxes: dict[str, Box] = {}
        self._lines: dict[str, tuple[Point, ...]] = {}

    @property
    def scale(self) -> RowScale:
        """Heights of rows and blocks, by the present pitch."""
        return row_scale(self.columns.pitch_px)

    @cached_property
    def routes(self) -> Mapping[str, Route]:
        """The ways of the links."""
        return routes(self.project)

    @cached_property
    def at(self) -> Mapping[Place, str]:
        """Who stands where."""
        return {(stage.column, stage.row): stage.id for stage in self.project.stages}

    @property
    def rows(self) -> int:
        """How many rows are in use."""
        return max((stage.row for stage in self.project.stages), default=-1) + 1

    @property
    def columns_used(self) -> int:
        """How many columns are in use."""
        return max((stage.column for stage in self.project.stages), default=-1) + 1

    # -- where things stand ----------------------------------------------------------------------------------
    def cell(self, column: int, row: int) -> Box:
        """The block that stands, or would stand, on a place."""
        scale = self.scale
        left, right = self.columns.x_in(column), self.columns.x_out(column)
        return left, scale.top(row) - self.top_px, right - left, scale.block_px

    def box(self, key: str) -> Box:
        """A stage's block."""
        self._forget_if_moved()
        found = self._boxes.get(key)
        if found is None:
            stage = self.project.stage[key]
            found = self._boxes[key] = self.cell(stage.column, stage.row)
        return found

    def _forget_if_moved(self) -> None:
        """What was worked out holds until zoom or scroll."""
        now = (self.columns.pitch_px, self.columns.x_in(0), self.top_px)
        if now != self._seen:
            self._seen = now
            self._boxes, self._lines = {}, {}

    def port(self, key: str, name: str, *, is_output: bool) -> Point:
        """Where a port sits on its block's edge."""
        stage = self.project.stage[key]
        left, top, width, height = self.box(key)
        share = port_share(stage.outputs() if is_output else stage.inputs(), name)
        return left + width if is_output else left, top + height / 2.0 * (1.0 + share)

    def ports(self, key: str) -> Iterator[tuple[Port, bool, Point]]:
        """A stage's ports: the port, whether an output, where it sits."""
        stage = self.project.stage[key]
        for is_output, side in ((False, stage.inputs()), (True, stage.outputs())):
            for port in side:
                yield port, is_output, self.port(key, port.name, is_output=is_output)

    def linked(self, key: str) -> frozenset[tuple[bool, str]]:
        """Which of a stage's ports have links: whether an output, its name."""
        return self._linked.get(key, frozenset())

    @cached_property
    def _linked(self) -> Mapping[str, frozenset[tuple[bool, str]]]:
        found: dict[str, set[tuple[bool, str]]] = {}
        for link in self.project.links:
            found.setdefault(link.source, set()).add((True, link.output))
            found.setdefault(link.target, set()).add((False, link.input))
        return {key: frozenset(ends) for key, ends in found.items()}

    def keep_ways_of(self, other: Layout) -> None:
        """Take over what was worked out for a project with the same places, ports and links."""
        for known in ("routes", "at", "_linked"):
            if known in other.__dict__:
                self.__dict__[known] = other.__dict__[known]

    def line(self, link: Link) -> tuple[Point, ...]:
        """A link's corners from its output to its input."""
        self._forget_if_moved()
        found = self._lines.get(link.id)
        if found is None:
            found = self._lines[link.id] = self._drawn(link)
        return found

    def _drawn(self, link: Link) -> tuple[Point, ...]:
        start = self.port(link.source, link.output, is_output=True)
        end = self.port(link.target, link.input, is_output=False)
        route = self.routes[link.id]
        if route.first_gap is None:
            return start, end
        first = self._across(route.first_gap, route.first_lane.share)
        if route.row_gap is None:
            return start, (first, start[1]), (first, end[1]), end
        scale = self.scale
        under = scale.top(route.row_gap) + scale.block_px - self.top_px
        level = under + (scale.row_px - scale.block_px) * route.row_lane.share
        last = self._across(route.last_gap, route.last_lane.share)
        return start, (first, start[1]), (first, level), (last, level), (last, end[1]), end

    def middle_of_line(self, link: Link) -> Point:
        """The middle of a link's longest run."""
        runs = itertools.pairwise(self.line(link))
        (ax, ay), (bx, by) = max(
            runs, key=lambda run: abs(run[1][0] - run[0][0]) + abs(run[1][1] - run[0][1])
        )
        return (ax + bx) / 2.0, (ay + by) / 2.0

    def _across(self, gap: int, share: float) -> float:
        left, right = self.columns.x_out(gap), self.columns.x_in(gap + 1)
        return left + (right - left) * share

    # -- what lies where -------------------------------------------------------------------------------------
    def place(self, x: float, y: float) -> Place:
        """The grid place at a point: a column with half the gap on either side of its block."""
        pitch = self.columns.pitch_px
        origin = (self.columns.x_in(0) + self.columns.x_out(0)) / 2.0
        return max(0, round((x - origin) / pitch)), self.scale.row_at(y + self.top_px)

    def hit(self, x: float, y: float, *, reach: float = 6.0, carrying: bool = False) -> Hit:
        """What lies at a point: a port within reach, else a block, else a link within reach.

        For a hand that carries a block, ports matter only where a side has several, or no link leads there.
        """
        column, row = self.place(x, y)
        near = [self.at[place] for place in _around(column, row) if place in self.at]
        stage = next((hit for key in near if (hit := self._block_at(key, x, y))), None)
        if self.scale.detail == "bare":
            return stage or self._link_near(x, y, reach)
        port = self._port_near(near, x, y, reach)
        if carrying:
            if stage is not None:
                return (
                    port
                    if port is not None and port.id == stage.id and self._is_one_of_several(port)
                    else stage
                )
            link = self._link_near(x, y, reach)
            return link if link.what == "link" else port or link
        return port or stage or self._link_near(x, y, reach)

    def _block_at(self, key: str, x: float, y: float) -> Hit | None:
        left, top, width, height = self.box(key)
        if left <= x <= left + width and top <= y <= top + height:
            return Hit("stage", key, right=x >= left + width / 2.0)
        return None

    def _is_one_of_several(self, hit: Hit) -> bool:
        stage = self.project.stage[hit.id]
        return len(stage.outputs() if hit.what == "output" else stage.inputs()) > 1

    def _port_near(self, near: list[str], x: float, y: float, reach: float) -> Hit | None:
        """The nearest port. On its own block it reaches less far, so that the block can be grabbed; where a link leads
        there it leaves the middle of the gap to the link."""
        pitch = self.columns.pitch_px
        gap = pitch - (self.columns.x_out(0) - self.columns.x_in(0))
        best: tuple[float, Hit] | None = None
        for key in near:
            linked = self.linked(key)
            for port, is_output, (at_x, at_y) in self.ports(key):
                outwards = (x - at_x) if is_output else (at_x - x)
                furthest = min(reach, max(3.0, gap / 3.0)) if (is_output, port.name) in linked else reach
                if not -min(reach, pitch / 10.0) <= outwards <= furthest or abs(at_y - y) > reach:
                    continue
                away = max(abs(outwards), abs(at_y - y))
                if best is None or away < best[0]:
                    best = away, Hit("output" if is_output else "input", key, port.name, right=is_output)
        return best[1] if best else None

    def _link_near(self, x: float, y: float, reach: float) -> Hit:
        best, found = reach, Hit()
        for link in self.project.links:
            corners = self.line(link)
            if not _spans(corners, x, y, reach):
                continue
            for (ax, ay), (bx, by) in itertools.pairwise(corners):
                away = max(min(ax, bx) - x, x - max(ax, bx), min(ay, by) - y, y - max(ay, by), 0.0)
                if away < best:
                    best, found = away, Hit("link", link.id)
        return found

    def inside(self, band: Box) -> frozenset[str]:
        """The stages that a rectangle touches."""
        left, top, width, height = band
        caught: set[str] = set()
        for stage in self.project.stages:
            a, b, w, h = self.box(stage.id)
            if a <= left + width and a + w >= left and b <= top + height and b + h >= top:
                caught.add(stage.id)
        return frozenset(caught)

    # -- neighbours ------------------------------------------------------------------------------------------
    def nearest(self, key: str, columns: int, rows: int) -> str | None:
        """The nearest stage that way on the grid: along its row or column first, then aside."""
        here = self.project.stage[key]
        ranked = [
            (aside * 1000 + along if columns else along * 1000 + aside, other.id)
            for other in self.project.stages
            if (along := _along(here, other, columns, rows)) > 0
            for aside in (abs(other.row - here.row) if columns else abs(other.column - here.column),)
        ]
        return min(ranked)[1] if ranked else None


def _along(here: Stage, other: Stage, columns: int, rows: int) -> int:
    return (other.column - here.column) * columns + (other.row - here.row) * rows


def _around(column: int, row: int) -> Iterator[Place]:
    for by_row in (0, -1, 1):
        for by_column in (0, -1, 1):
            yield column + by_column, row + by_row


def _spans(corners: tuple[Point, ...], x: float, y: float, reach: float) -> bool:
    xs, ys = [corner[0] for corner in corners], [corner[1] for corner in corners]
    return min(xs) - reach <= x <= max(xs) + reach and min(ys) - reach <= y <= max(ys) + reach
