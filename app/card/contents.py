"""What a card must hold for a selection: the same contents need no new rows. No Qt here, and no kind is named."""

from __future__ import annotations

from collections.abc import Collection, Iterable
from dataclasses import dataclass
from typing import Literal

from engine.project import HEADER_KEY, Link, Project
from engine.sections.base import Domain
from engine.stages import Stage
from engine.stages.declare import FigureSpec
from engine.stages.declared import Declared

Sort = Literal["project", "stages", "links", "mixed"]


@dataclass(frozen=True)
class Contents:
    """Names of what is shown, in order; two equal contents are the same rows.

    `figures` are numbered where there may be many. `absent` are those that may be added. `distances` are the links
    through air into the one stage. `positions` are the named positions of each control.
    """

    sort: Sort
    keys: tuple[str, ...]
    kinds: tuple[str, ...]
    controls: tuple[str, ...] = ()
    positions: tuple[tuple[str, ...], ...] = ()
    options: tuple[str, ...] = ()
    figures: tuple[str, ...] = ()
    absent: tuple[str, ...] = ()
    distances: tuple[str, ...] = ()


def contents_of(
    project: Project, selection: Iterable[str], opened: Collection[tuple[str, str]] = ()
) -> Contents:
    """What to show. Of several only what they have in common; `opened` figures are shown though not given yet."""
    chosen = set(selection)
    stages = [project.stage[key] for key in project.topology.order if key in chosen]
    links = [link for link in project.links if link.id in chosen]
    if stages and links:
        return Contents("mixed", (*(s.id for s in stages), *(link.id for link in links)), ())
    if links:
        return _links(project, links, opened)
    if not stages:
        return _declared("project", (HEADER_KEY,), [project.header], opened)
    return _stages(project, stages, opened)


def _stages(project: Project, stages: list[Stage], opened: Collection[tuple[str, str]]) -> Contents:
    first, keys = stages[0], tuple(stage.id for stage in stages)
    controls = [
        name
        for name, spec, _ in first.controls()
        if all(
            (other := each.control_specs().get(name)) is not None
            and each.in_use(name)
            and other.unit == spec.unit
            and _names(each, name) == _names(first, name)
            for each in stages[1:]
        )
    ]
    found = _declared("stages", keys, list(stages), opened)
    return Contents(
        "stages", keys, tuple(stage.kind for stage in stages), tuple(controls),
        tuple(_names(first, name) for name in controls), found.options, found.figures, found.absent,
        _through_air(project, first.id) if len(stages) == 1 else (),
    )  # fmt: skip


def _links(project: Project, links: list[Link], opened: Collection[tuple[str, str]]) -> Contents:
    """Distance through air, wiring where there is a wire."""
    found = _declared("links", tuple(link.id for link in links), list(links), opened)
    domains = {domain_of(project, link) for link in links}
    air, wire = domains == {Domain.ACOUSTIC}, domains == {Domain.ANALOGUE}
    unheard = () if all(is_heard(project, link) for link in links) else ("off_axis_db",)
    figures = ("distance_m", *(name for name in found.figures if name != "distance_m")) if air else ()
    absent = tuple(name for name in found.absent if name not in (*figures, *unheard)) if air else ()
    return Contents(
        "links", found.keys, tuple(sorted(str(each) for each in domains)), options=found.options if wire else (),
        figures=figures, absent=absent,
    )  # fmt: skip


def _declared(
    sort: Sort, keys: tuple[str, ...], items: list[Declared], opened: Collection[tuple[str, str]]
) -> Contents:
    first, rest = items[0], items[1:]
    options = tuple(
        name
        for name, spec in first.option_specs().items()
        if first.in_use(name)
        and all(
            (other := each.option_specs().get(name)) is not None
            and (other.choices, other.low, other.high) == (spec.choices, spec.low, spec.high)
            and each.in_use(name)
            for each in rest
        )
    )
    figures: list[str] = []
    absent: list[str] = []
    for name, spec in first.figure_specs().items():
        if not all(_asks(each, name, spec) for each in items):
            continue
        if spec.many:
            if not rest:
                figures += [f"{name}.{place}" for place in range(len(getattr(first, name)))]
                (figures if (keys[0], name) in opened else absent).append(
                    f"{name}.{len(getattr(first, name))}" if (keys[0], name) in opened else name
                )
        elif any(getattr(each, name) is not None for each in items) or (keys[0], name) in opened:
            figures.append(name)
        else:
            absent.append(name)
    return Contents(sort, keys, (), options=options, figures=tuple(figures), absent=tuple(absent))


def _asks(item: Declared, name: str, spec: FigureSpec) -> bool:
    """Whether an item asks for the same figure, whatever its help and usual value."""
    own = item.figure_specs().get(name)
    return own is not None and (own.quantity, own.many) == (spec.quantity, spec.many) and item.in_use(name)


def domain_of(project: Project, link: Link) -> Domain:
    """What a link carries."""
    stage = project.stage[link.source]
    return next((port.domain for port in stage.outputs() if port.name == link.output), stage.domain)


def is_heard(project: Project, link: Link) -> bool:
    """Whether people listen where a link ends: only there a source's loss off its axis counts."""
    return project.stage[link.target].is_seat


def _through_air(project: Project, stage: str) -> tuple[str, ...]:
    return tuple(
        link.id for link in project.topology.into[stage] if domain_of(project, link) is Domain.ACOUSTIC
    )


def _names(stage: Stage, control: str) -> tuple[str, ...]:
    return tuple(name for name, _ in stage.control_choices(control))
