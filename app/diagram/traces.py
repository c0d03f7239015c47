"""A path's numbers as places on the diagram's left axis: one point per node, broken where the domain changes. No Qt here."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Protocol

from engine.levels import NodeLevels
from engine.sections.base import Domain

#: The lines of the diagram, bottom first: what is drawn over what.
SERIES = ("noise", "peak", "ceiling", "level", "clip")


class ColumnMap(Protocol):
    """What the diagram needs of the columns."""

    def x_in(self, column: float) -> float:
        """Where an input stands."""

    def x_out(self, column: float) -> float:
        """Where an output stands."""


@dataclass(frozen=True)
class Place:
    """One node of the path: where it stands, and its numbers on the left axis (None: nothing there)."""

    node: NodeLevels
    x: float
    shift_db: float  # from the node's own unit to the left axis
    reference_db: float  # taken off in the view referred to the clip point

    def on_axis(self, number: str) -> float | None:
        """One of the node's levels on the left axis."""
        value: float | None = getattr(self.node, number)
        return None if value is None else value + self.shift_db - self.reference_db

    def bound(self, number: str) -> tuple[float, float] | None:
        """The interval an ambiguous figure leaves a level in, on the left axis."""
        if number not in self.node.low:
            return None
        offset = self.shift_db - self.reference_db
        return self.node.low[number] + offset, self.node.high[number] + offset


def places(
    trace: Sequence[NodeLevels],
    column_of: dict[str, int],
    columns: ColumnMap,
    spl_shift_db: float,
    *,
    to_clip: bool,
) -> tuple[Place, ...]:
    """The nodes of a path at their columns. `to_clip` refers each to its own clip point and leaves out what has none."""
    found = []
    for node in trace:
        column = column_of[node.stage]
        x = columns.x_in(column) if node.direction == "in" else columns.x_out(column)
        if to_clip:
            if node.clip is not None:
                found.append(Place(node, x, 0.0, node.clip))
            continue
        shift = {Domain.ACOUSTIC: -spl_shift_db, Domain.DIGITAL: node.full_scale_dbu or 0.0}.get(
            node.domain, 0.0
        )
        found.append(Place(node, x, shift, 0.0))
    return tuple(found)


def spans(line: Sequence[Place], number: str) -> list[tuple[float, float, float, float]]:
    """The spans of one line, left to right: (x1, level1, x2, level2); none where the domain changes or a level is missing."""
    found = []
    for one, two in pairwise(line):
        left, right = one.on_axis(number), two.on_axis(number)
        if left is not None and right is not None and one.node.domain == two.node.domain:
            found.append((one.x, left, two.x, right))
    return found
