"""The settings sheet: what a hand sets, in signal order or rack by rack, with room for what was found and left."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import replace

from engine.project import Project

from . import faces
from .flow import Block, column_width, columns_in, pour, stacked
from .frame import body_area
from .grid import Column, Grid, heading
from .page import BODY, HAIR, LARGE, RULE, SMALL, Box, Item, Line, Page, Paper, Text
from .settings_lines import SettingLine, StageSettings, by_rack, in_signal_order

_ROW = 23.0
_NEXT_PANEL_LINE = 17.0
_NEXT_LINE = 12.0
_TICK = 12.0
_COLUMNS = (
    Column("done", 20.0),
    Column("stage and its place", 92.0, 2.0),
    Column("control", 78.0, 0.7),
    Column("set to, as marked on the panel", 149.0, 1.5),
    Column("state", 50.0),
    Column("as found", 42.0, 2.0),
    Column("as left", 42.0, 2.0),
)


def signal_order_pages(project: Project, paper: Paper) -> list[Page]:
    """Every control of every stage, as the signal meets them."""
    groups = in_signal_order(project)
    return _pages(
        paper,
        "Settings",
        _about(groups, "in signal order"),
        lambda grid: [_stage(grid, each) for each in groups],
    )


def rack_order_pages(project: Project, paper: Paper) -> list[Page]:
    """The same lines rack by rack."""
    racks = by_rack(project)

    def blocks(grid: Grid) -> Iterable[Block]:
        for rack, groups in racks:
            yield heading(rack or "No rack place given", grid.width, LARGE, _count(groups))
            yield from (_stage(grid, each) for each in groups)

    groups = [each for _, rack in racks for each in rack]
    return _pages(paper, "Settings by rack", _about(groups, "rack by rack"), blocks)


def _pages(paper: Paper, title: str, about: str, blocks: Callable[[Grid], Iterable[Block]]) -> list[Page]:
    area = body_area(paper)
    grid = Grid.over(column_width(area[2]), _COLUMNS)
    filled = list(blocks(grid))
    if filled:
        filled[-1] = replace(filled[-1], keep=True)
    filled.append(_sign_off(grid.width))
    return [
        Page(paper, title, about, tuple(items))
        for items in pour(filled, grid.head(), area, columns_in(area[2]))
    ]


def _about(groups: Sequence[StageSettings], order: str) -> str:
    return f"Every control {order}: {_count(groups)}"


def _count(groups: Sequence[StageSettings]) -> str:
    settings, stages = sum(len(each.lines) for each in groups), len(groups)
    return f"{settings} setting{'s' * (settings != 1)} on {stages} stage{'s' * (stages != 1)}"


def _stage(grid: Grid, group: StageSettings) -> Block:
    """One stage: its name and place beside its first controls, a line for each control, a rule under the last."""
    rows = [_line(grid, line) for line in group.lines]
    name, name_height = _name(grid, group)
    end = max(3.0, name_height - sum(row.height for row in rows))
    rows.append(Block(end, (Line(0.0, end - 1.0, grid.width, end - 1.0, RULE),)))
    rows[0] = Block(rows[0].height, (*name, *rows[0].items))
    whole = stacked(rows)
    again = Block(16.0, (Text(grid.lefts[1], 13.0, f"{group.called} (continued)", BODY, True),))
    return Block(whole.height, whole.items, parts=tuple(rows), again=again)


def _name(grid: Grid, group: StageSettings) -> tuple[list[Item], float]:
    """The stage's name and place, and how far down they reach."""
    lines = [(line, BODY, True) for line in faces.wrapped(group.called, BODY, grid.widths[1], True)]
    lines += [(line, SMALL, False) for line in faces.wrapped(group.rack, SMALL, grid.widths[1])]
    items: list[Item] = []
    y = 4.0
    for text, points, strong in lines:
        y += points + 1.5
        items.append(Text(grid.lefts[1], y, text, points, strong))
    return items, y + 7.0


def _line(grid: Grid, line: SettingLine) -> Block:
    """One control: a box to tick, its name, its panel's words large, the same in its unit, and two boxes to write in."""
    room = grid.widths[3] - (faces.width(line.value, BODY) + 12.0 if line.value else 0.0)
    panel = faces.wrapped(line.panel, LARGE, room, True) or [""]
    control = faces.wrapped(line.control, BODY, grid.widths[2])
    height = _ROW + max(_NEXT_PANEL_LINE * (len(panel) - 1), _NEXT_LINE * (len(control) - 1))
    items: list[Item] = [
        Box(grid.lefts[0] + 1.0, 5.0, _TICK, _TICK),
        *(grid.cell(2, 15.0 + _NEXT_LINE * at, text) for at, text in enumerate(control)),
        *(
            Text(grid.lefts[3], 16.0 + _NEXT_PANEL_LINE * at, text, LARGE, True)
            for at, text in enumerate(panel)
        ),
        grid.cell(4, 15.0, line.state, BODY, line.state == "locked"),
        Box(grid.lefts[5], 3.0, grid.widths[5], height - 5.0, HAIR),
        Box(grid.lefts[6], 3.0, grid.widths[6], height - 5.0, HAIR),
    ]
    if line.value:
        items.append(Text(grid.lefts[3] + grid.widths[3] - 6.0, 15.0, line.value, BODY, False, "right"))
    return Block(height, tuple(items))


def _sign_off(width: float) -> Block:
    """Where the one who set it and the one who checked it sign."""
    items: list[Item] = []
    for place, label in enumerate(("set by", "checked by", "date and time")):
        left = place * (width + 16.0) / 3.0
        items += [Line(left, 44.0, left + (width - 32.0) / 3.0, 44.0, HAIR), Text(left, 54.0, label, SMALL)]
    return Block(58.0, tuple(items))
