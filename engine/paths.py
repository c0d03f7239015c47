"""Paths through the web of stages: from a source to a seat, one at a time."""

from __future__ import annotations

from collections.abc import Callable

from .project import Project

Loudness = Callable[[str], float]


def path_through(project: Project, stage: str, loudness: Loudness) -> tuple[str, ...]:
    """The path through a stage: upstream the loudest way at each join, downstream the first link at each split."""
    return (*_upstream(project, stage, loudness), stage, *_downstream(project, stage))


def paths(project: Project, loudness: Loudness) -> tuple[tuple[str, ...], ...]:
    """One path per stage that feeds nothing more, in signal order."""
    ends = [
        key
        for key in project.topology.order
        if not project.topology.out_of[key] and project.topology.into[key]
    ]
    return tuple(path_through(project, end, loudness) for end in ends)


def _upstream(project: Project, stage: str, loudness: Loudness) -> list[str]:
    found: list[str] = []
    at = stage
    while links := project.topology.into[at]:
        at = max(links, key=lambda link: loudness(link.source)).source
        found.append(at)
    return found[::-1]


def _downstream(project: Project, stage: str) -> list[str]:
    found: list[str] = []
    at = stage
    while links := project.topology.out_of[at]:
        at = _first(project, [link.target for link in links])
        found.append(at)
    return found


def _first(project: Project, targets: list[str]) -> str:
    """The branch drawn straightest: same row first, then the one that leads furthest."""
    return min(targets, key=lambda key: (project.stage[key].row, project.stage[key].column, key))
