"""Where an arrow key leads: along the links first, else to the nearest block that way."""

from __future__ import annotations

from typing import Literal

from engine.project import Link

from .layout import Layout

Way = Literal["left", "right", "up", "down"]
STEPS = {"left": (-1, 0), "right": (1, 0), "up": (0, -1), "down": (0, 1)}


def next_stage(layout: Layout, key: str, way: Way) -> str | None:
    """The stage that an arrow leads to from a stage: what it feeds, what feeds it, or who stands above or below."""
    project = layout.project
    here = project.stage[key]
    around = project.topology
    if way == "right":
        along = [link.target for link in around.out_of[key]]
    elif way == "left":
        along = [link.source for link in around.into[key]]
    else:
        along = []
    if along:
        return min(
            along, key=lambda at: (abs(project.stage[at].row - here.row), project.stage[at].column, at)
        )
    return layout.nearest(key, *STEPS[way])


def from_link(layout: Layout, link: Link, way: Way) -> str | None:
    """Where an arrow leads from a link: to its ends, or to the next link of the same ends above or below."""
    if way == "left":
        return link.source
    if way == "right":
        return link.target
    project = layout.project
    fan = [other for other in project.links if other.source == link.source or other.target == link.target]
    fan.sort(key=lambda each: (project.stage[each.source].row, project.stage[each.target].row, each.id))
    at = fan.index(link) + (1 if way == "down" else -1)
    return fan[at].id if 0 <= at < len(fan) else None


def link_at(layout: Layout, key: str, way: Way) -> str | None:
    """The link on a stage's left or right, the straightest first."""
    project = layout.project
    here = project.stage[key]
    links = project.topology.out_of[key] if way == "right" else project.topology.into[key]

    def bend(link: Link) -> tuple[int, str]:
        other = project.stage[link.target if way == "right" else link.source]
        return abs(other.row - here.row), link.id

    return min(links, key=bend).id if links and way in ("left", "right") else None


def first_stage(layout: Layout) -> str | None:
    """Where a path begins."""
    return next(iter(layout.project.topology.order), None)


def last_stage(layout: Layout) -> str | None:
    """Where the last path ends."""
    return next(reversed(layout.project.topology.order), None)
