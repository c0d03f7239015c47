"""What a project comes to: solved once, read by window, sheets, command line and findings alike.

`evaluate` compiles and solves; everything else is read from the solution when first asked for and kept.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from .assume import Assumptions, assume
from .compile import NodeRef, Plan, build_plan, rewritten
from .findings import Finding, find
from .levels import (
    NUMBERS,
    BandLevels,
    NodeLevels,
    SectionLevels,
    band_levels,
    node_columns,
    node_levels,
    section_levels,
)
from .limits import LimiterThreshold, limiter_thresholds
from .loudspeaker import LoudspeakerLoad, loudspeaker_loads
from .margins import Margins, find_margins
from .meters import MeterReading, meter_readings
from .paths import path_through, paths
from .project import Project, difference
from .rows import Array
from .seat import SeatLevels, seat_levels
from .solve import FLAT, TONE, Solution, solve


@dataclass(frozen=True)
class Narrowest:
    """The first clip point to be reached: which section of which stage, ahead of ("in") or behind ("out") it."""

    stage: str
    name: str
    section: str
    side: str
    margin_db: float


@dataclass(frozen=True, eq=False)
class Outcome:
    """A solved project."""

    plan: Plan
    solution: Solution
    sum_kind: int = FLAT
    _nodes: dict[int, NodeLevels] = field(default_factory=dict, repr=False)
    _bands: dict[NodeRef, BandLevels] = field(default_factory=dict, repr=False)

    @property
    def project(self) -> Project:
        return self.plan.project

    @cached_property
    def margins(self) -> Margins:
        """Margins and carried clip points of every row."""
        return find_margins(self.plan.graph, self.plan.rows, self.solution, self.plan.axis, self.sum_kind)

    @cached_property
    def assumptions(self) -> Assumptions:
        """What the data sheets left open, and the interval it leaves every number in."""
        return assume(self.plan, self.sum_kind)

    @cached_property
    def columns(self) -> dict[str, Array]:
        """Every node's numbers as arrays [node, batch]; NaN where there is none."""
        return node_columns(self.plan, self.solution, self.margins, self.sum_kind)

    @cached_property
    def nodes(self) -> tuple[NodeLevels, ...]:
        """Every stage's inputs and outputs, in signal order."""
        return tuple(self._node_at(place) for place in range(len(self.plan.nodes)))

    @cached_property
    def _lines(self) -> list[tuple[float, ...]]:
        return list(zip(*(self.columns[name][:, 0].tolist() for name in NUMBERS), strict=True))

    def _node_at(self, place: int) -> NodeLevels:
        if place not in self._nodes:
            self._nodes[place] = node_levels(
                self.plan, self._lines[place], self.assumptions.node_bounds, place
            )
        return self._nodes[place]

    def node(self, stage: str, direction: str, port: str | None = None) -> NodeLevels:
        """One node; the first of its direction where no port is named. Raises KeyError where there is none."""
        for place in self.plan.places.get((stage, direction), ()):
            if port in (None, self.plan.nodes[place].port):
                return self._node_at(place)
        raise KeyError(f"{stage} has no {direction} node {port or ''}".rstrip())

    def sections(self, stage: str) -> tuple[SectionLevels, ...]:
        """The sections of an active stage, in signal order."""
        return section_levels(self.plan, self.solution, self.margins, stage)

    def band_levels(self, node: NodeLevels) -> BandLevels:
        """One node by one-third-octave bands."""
        ref = next(
            r
            for r in self.plan.nodes
            if (r.stage, r.port, r.direction) == (node.stage, node.port, node.direction)
        )
        if ref not in self._bands:
            self._bands[ref] = band_levels(self.plan, self.solution, ref)
        return self._bands[ref]

    @cached_property
    def seats(self) -> tuple[SeatLevels, ...]:
        """Every seat, in signal order, each with its noise budget."""
        return seat_levels(self.plan, self.solution, self.assumptions.seat_bounds, self.sum_kind)

    @cached_property
    def loudspeakers(self) -> tuple[LoudspeakerLoad, ...]:
        """What every loudspeaker has to carry."""
        return loudspeaker_loads(self.plan, self.solution)

    @cached_property
    def limiters(self) -> tuple[LimiterThreshold, ...]:
        """Every limiter ahead of every loudspeaker, with the threshold that protects it."""
        return limiter_thresholds(self.plan)

    @cached_property
    def meters(self) -> tuple[MeterReading, ...]:
        """What every meter of the project shows, for the test tone and for programme."""
        return meter_readings(self.plan, self.solution)

    @property
    def loudest(self) -> SeatLevels | None:
        """The seat with the highest A-weighted level; None where nothing sounds."""
        heard = [seat for seat in self.seats if seat.level_a is not None]
        return max(heard, key=lambda seat: seat.level_a or 0.0, default=None)

    @cached_property
    def narrowest(self) -> Narrowest | None:
        """The first to clip; None where nothing does or nothing sounds."""
        at_in, at_out = self.margins.at_in_db[:, 0], self.margins.at_out_db[:, 0]
        own = np.minimum(at_in, at_out)
        row = int(np.argmin(own))
        if not np.isfinite(own[row]):
            return None
        side = "in" if at_in[row] <= at_out[row] else "out"
        stage, section = self.plan.owner_of(row)
        return Narrowest(stage, self.project.stage[stage].name, section, side, float(own[row]))

    @cached_property
    def findings(self) -> tuple[Finding, ...]:
        """What the tool has noticed, the gravest first."""
        return find(self)

    def paths(self) -> tuple[tuple[str, ...], ...]:
        """Every seat's (or ending stage's) main path, as stage ids from source to end."""
        return paths(self.project, self._loudness)

    def path_through(self, stage: str) -> tuple[str, ...]:
        """The path that leads through a stage: at a join the loudest way, at a split the first."""
        return path_through(self.project, stage, self._loudness)

    def trace(self, path: Sequence[str]) -> tuple[NodeLevels, ...]:
        """The nodes along a path, in order: into and out of each stage by the ports its links use."""
        found: list[NodeLevels] = []
        for place, stage in enumerate(path):
            before = path[place - 1] if place else None
            after = path[place + 1] if place + 1 < len(path) else None
            found.extend(self._trace_nodes(stage, before, after))
        return tuple(found)

    def _trace_nodes(self, stage: str, before: str | None, after: str | None) -> list[NodeLevels]:
        into = {link.input for link in self.project.topology.into[stage] if link.source == before}
        out_of = {link.output for link in self.project.topology.out_of[stage] if link.target == after}
        found: list[NodeLevels] = []
        for direction, ports in (("in", into), ("out", out_of)):
            places = self.plan.places.get((stage, direction), ())
            chosen = [place for place in places if self.plan.nodes[place].port in ports] or places
            found.extend(self._node_at(place) for place in chosen[:1])
        return found

    def _loudness(self, stage: str) -> float:
        """How loud a stage's first output is, for choosing a way at a join."""
        outputs = self.project.stage[stage].outputs()
        if not outputs:
            return 0.0
        return float(self.solution.flat[self.plan.output_row(stage, outputs[0].name), 0, 0])


def evaluate(project: Project, previous: Outcome | None = None, *, tone_hz: float | None = None) -> Outcome:
    """Solve a project; with `previous` only the rows of what changed are written anew.

    With `tone_hz` all levels are those of a sine at that frequency, each source sending it at its programme level.
    Raises `PassiveLoopError` for a ring of passive sections.
    """
    plan: Plan | None = None
    if previous is not None and tone_hz is None and previous.sum_kind == FLAT:
        plan = _rewritten(previous.plan, project)
    plan = plan or build_plan(project, project.axis(tone_hz))
    kind = FLAT if tone_hz is None else TONE
    return Outcome(plan, solve(plan.graph, plan.rows, plan.axis), kind)


def _rewritten(plan: Plan, project: Project) -> Plan | None:
    changes = difference(plan.project, project)
    if any(before is None or after is None for before, after in changes.values()):
        return None
    return rewritten(plan, project, changes)
