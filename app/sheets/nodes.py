"""The levels sheet: every node of the project in signal order, as a table."""

from __future__ import annotations

from collections.abc import Sequence

from app import tabular
from engine.levels import NodeLevels
from engine.outcome import Outcome

from .flow import Block, column_width, columns_in, pour
from .frame import body_area
from .grid import Column, Grid
from .page import HAIR, SMALL, Line, Page, Paper

_LEAST = {
    "unit": 30.0,
    "headroom": 40.0,
    "peak margin": 48.0,
    "noise": 30.0,
    "noise (A)": 37.0,
    "ceiling": 30.0,
    "S/N": 24.0,
}
_GAP = 5.0
_ROW = 12.0


def pages(outcome: Outcome, paper: Paper) -> list[Page]:
    """Every node, heads repeated."""
    area = body_area(paper)
    grid = node_grid(column_width(area[2]))
    blocks = node_rows(outcome, outcome.nodes, grid)
    about = f"Programme, peak, clip point and noise at {len(outcome.nodes)} nodes, in signal order"
    return [
        Page(paper, "Levels", about, tuple(items))
        for items in pour(blocks, grid.head(), area, columns_in(area[2]))
    ]


def node_grid(width: float) -> Grid:
    """The columns of a node table over a width."""
    columns = [Column("node", 142.0, 2.0)]
    for column in tabular.NODE_COLUMNS:
        align = "left" if column.heading == "unit" else "right"
        columns.append(Column(column.heading, _LEAST.get(column.heading, 28.0), 0.6, align))  # type: ignore[arg-type]
    return Grid.over(width, columns, _GAP)


def node_rows(outcome: Outcome, nodes: Sequence[NodeLevels], grid: Grid) -> list[Block]:
    """A row of small type for each node, ruled under each stage."""
    rows: list[Block] = []
    for at, node in enumerate(nodes):
        texts = [
            tabular.place(outcome.project, node),
            *(column.text(node) for column in tabular.NODE_COLUMNS),
        ]
        cells = [grid.cell(place, 8.5, text, SMALL, place == 0) for place, text in enumerate(texts)]
        last_of_stage = at + 1 == len(nodes) or nodes[at + 1].stage != node.stage
        rule = [Line(0.0, _ROW - 0.6, grid.width, _ROW - 0.6, HAIR)] if last_of_stage else []
        rows.append(Block(_ROW, (*cells, *rule)))
    return rows
