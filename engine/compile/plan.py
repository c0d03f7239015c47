"""A compiled project: its graph, its rows, and where every stage, port and net stands in them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

import numpy as np

from engine.bands import Axis
from engine.graph import Graph, Index
from engine.project import Project
from engine.rows import NoisePart, Rows
from engine.sections.base import NEVER, Active, ActiveStage, Domain, PassiveStage, StageSections
from engine.stages import Values

from .beyond import find_beyond
from .fill import Table, fill_arrivals, fill_clip_by_load, fill_net, fill_pairs, fill_stage
from .layout import Layout, lay_out
from .ranking import rank_rows


@dataclass(frozen=True)
class NodeRef:
    """One node: a stage's input or output. `row` carries its level.

    `section` is the row of the section behind an input or ahead of an output, None in a passive stage;
    `has_clip` whether that section has a clip point of its own there, or the driver's is carried along.
    """

    stage: str
    port: str
    direction: str  # "in" or "out"
    index: int
    domain: Domain
    row: int
    section: int | None
    has_clip: bool


@dataclass(frozen=True, eq=False)
class Plan:
    """What `solve` needs, and the names to read its answer by. Rows are numbered as the graph has them."""

    project: Project
    axis: Axis
    graph: Graph
    rows: Rows
    answers: Mapping[str, StageSections]
    layout: Layout
    place: Index
    nodes: tuple[NodeRef, ...]
    places: Mapping[
        tuple[str, str], tuple[int, ...]
    ]  # where a stage's "in" or "out" nodes stand among `nodes`
    overrides: Mapping[str, Values]
    batch: int

    def section_row(self, stage: str, section: str) -> int:
        """Where a section's output stands."""
        answer = self.answers[stage]
        assert isinstance(answer, ActiveStage)
        names = [s.name for s in answer.sections]
        return int(self.place[self.layout.section_rows[stage][names.index(section)]])

    def section_list(self, stage: str) -> list[tuple[Active, int]]:
        """An active stage's sections with their rows; empty for a passive one."""
        answer = self.answers[stage]
        if isinstance(answer, PassiveStage):
            return []
        return [
            (s, int(self.place[r]))
            for s, r in zip(answer.sections, self.layout.section_rows[stage], strict=True)
        ]

    def owner_of(self, row: int) -> tuple[str, str]:
        """The stage and section a row with a clip point belongs to; a half-driven link's is its output's."""
        for stage in self.answers:
            for section, at in self.section_list(stage):
                if at == row:
                    return stage, section.name
        return next((stage, "output, one leg") for stage, at in self.half_driven() if at == row)

    def input_row(self, stage: str, port: str = "in") -> int:
        """Where the level at an input stands; silence (0) where nothing feeds it."""
        return int(self.place[self.layout.input_rows.get((stage, port), 0)])

    def output_row(self, stage: str, port: str = "out") -> int:
        """Where the level at an output stands, as loaded."""
        return int(self.place[self.layout.output_rows[stage, port]])

    def open_row(self, stage: str, port: str = "out") -> int:
        """Where an output's open-circuit level stands, ahead of its own impedance."""
        return int(self.place[self.layout.open_rows[stage, port]])

    def half_driven(self) -> Iterable[tuple[str, int]]:
        """Outputs whose wiring lowers their clip point: the stage, and the row behind the link."""
        for net in self.layout.nets:
            for node in net.shape.clip_scale:
                for index, (stage, _port, _) in enumerate(net.shape.drivers):
                    yield stage, int(self.place[net.by_driver[index, node]])

    def arrival_row(self, link: str) -> int:
        """Where one acoustic link's share of its stage's input stands."""
        return int(self.place[self.layout.arrival_rows[link]])


def build_plan(
    project: Project,
    axis: Axis | None = None,
    *,
    overrides: Mapping[str, Values] | None = None,
    batch: int = 1,
) -> Plan:
    """Compile a project. `overrides` puts other values in place of some stages' (or links') own, arrays [batch, 1].

    Raises `PassiveLoopError` for a ring of passive sections, ValueError where a stage cannot answer.
    """
    axis = axis or project.axis()
    overrides = dict(overrides or {})
    answers = {key: _answer(project, key, axis, overrides) for key in project.topology.order}
    layout = lay_out(project, answers)
    emitting = [row for _, row in layout.emitting]
    graph, place = rank_rows(layout.draft, emitting, frozenset(layout.dynamic))
    of, starts, beyond = find_beyond(layout.nets, place)
    graph = replace(graph, beyond_of=of, beyond_starts=starts, beyond_rows=beyond)
    rows = _filled(project, axis, graph, layout, place, answers, overrides, batch)
    nodes = tuple(_nodes(project, answers, layout, place))
    return Plan(project, axis, graph, rows, answers, layout, place, nodes, _places(nodes), overrides, batch)


def redrawn(plan: Plan, overrides: Mapping[str, Values], batch: int) -> Plan:
    """The same project with other values in place of some stages' (or links') own, arrays [batch, 1]; its graph stays.

    Raises ValueError where a stage answers with other sections than before.
    """
    fresh = {key: _answer(plan.project, key, plan.axis, overrides) for key in plan.answers}
    for key, answer in fresh.items():
        if _shape(answer) != _shape(plan.answers[key]):
            raise ValueError(
                f"{key}: other values make other sections, so the project has to be compiled anew"
            )
    rows = _filled(plan.project, plan.axis, plan.graph, plan.layout, plan.place, fresh, overrides, batch)
    return replace(plan, rows=rows, answers=fresh, overrides=dict(overrides), batch=batch)


def _filled(
    project: Project, axis: Axis, graph: Graph, layout: Layout, place: Index,
    answers: Mapping[str, StageSections], overrides: Mapping[str, Values], batch: int,
) -> Rows:  # fmt: skip
    table = Table.empty(graph, batch, axis)
    for stage in answers:
        fill_stage(table, layout, place, answers, stage, axis)
    for net in layout.nets:
        fill_net(table, layout, net, place, project, answers, axis)
        fill_clip_by_load(table, layout, net, place, project, answers)
    fill_arrivals(table, layout, place, project, answers, axis, project.links, overrides)
    fill_pairs(table, graph)
    return table.rows()


def rewritten(plan: Plan, project: Project, changed: Iterable[str]) -> Plan | None:
    """The plan with the rows of some stages or links written anew; None where the shape has changed.

    `changed` are the ids that differ between `plan.project` and `project`.
    """
    changed = set(changed)
    stages = [key for key in changed if key in project.stage]
    if (
        any(key not in plan.answers for key in stages)
        or not changed <= project.stage.keys() | project.link.keys()
    ):
        return None
    if project.axis() is not plan.axis and project.axis(plan.axis.tone_hz) is not plan.axis:
        return None
    fresh = {key: _answer(project, key, plan.axis, plan.overrides) for key in stages}
    answers = {**plan.answers, **fresh}
    if any(_shape(fresh[key]) != _shape(plan.answers[key]) for key in stages) or _moved_links(
        plan.project, project, changed
    ):
        return None
    table = Table.copied(plan.rows)
    for key in stages:
        fill_stage(table, plan.layout, plan.place, answers, key, plan.axis)
    for net in plan.layout.nets:
        if not net.shape.stages & changed:
            continue
        # A link that costs clip point carries its driver's along.
        if net.shape.clip_scale or any(
            key in net.shape.stages and _impedances(answers[key]) != _impedances(plan.answers[key])
            for key in stages
        ):
            fill_net(table, plan.layout, net, plan.place, project, answers, plan.axis)
        fill_clip_by_load(table, plan.layout, net, plan.place, project, answers)
    near = {
        link.id for link in project.links if link.id in changed or link.target in changed or link.source in changed
    }  # fmt: skip
    links = [link for link in project.links if link.id in near]
    fill_arrivals(table, plan.layout, plan.place, project, answers, plan.axis, links, plan.overrides)
    fill_pairs(table, plan.graph)
    return replace(plan, project=project, rows=table.rows(), answers=answers)


def _answer(project: Project, key: str, axis: Axis, overrides: Mapping[str, Values]) -> StageSections:
    stage = project.stage[key]
    values = overrides[key] if key in overrides else stage.values()
    return stage.sections(values.replaced({"temperature_k": project.header.temperature_k}), axis)


def _shape(answer: StageSections) -> tuple[object, ...]:
    """What must stay the same for rows to be written anew in place."""
    if isinstance(answer, PassiveStage):
        return (tuple(answer.arms), tuple(answer.legs))
    return (
        tuple((s.name, s.after, s.dynamics is None) for s in answer.sections),
        tuple((name, port.section) for name, port in answer.inputs.items()),
        tuple((name, port.section, port.form) for name, port in answer.outputs.items()),
        answer.emission is None,
        answer.join,
    )


def _moved_links(before: Project, after: Project, changed: set[str]) -> bool:
    for key in changed & after.link.keys():
        old, new = before.link.get(key), after.link[key]
        if old is None or (old.source, old.output, old.target, old.input, old.wiring) != (
            new.source, new.output, new.target, new.input, new.wiring
        ):  # fmt: skip
            return True
    return any(
        before.stage[key].count != after.stage[key].count
        for key in changed & after.stage.keys() & before.stage.keys()
    )


def _impedances(answer: StageSections) -> object:
    if isinstance(answer, PassiveStage):
        return [
            np.asarray(term).tobytes()
            for two in (*answer.arms.values(), *answer.legs.values())
            for term in (two.a, two.b, two.c, two.d)
        ]
    impedances = [port.z_ohm for port in answer.inputs.values()] + [
        port.z_ohm for port in answer.outputs.values()
    ]
    return [np.asarray(number).tobytes() for number in impedances]


def _nodes(
    project: Project, answers: Mapping[str, StageSections], layout: Layout, place: Index
) -> Iterable[NodeRef]:
    for key in project.topology.order:
        stage, answer = project.stage[key], answers[key]
        for index, port in enumerate(stage.inputs()):
            row = int(place[layout.input_rows.get((key, port.name), 0)])
            name = answer.inputs[port.name].section if isinstance(answer, ActiveStage) else None
            yield NodeRef(
                key,
                port.name,
                "in",
                index,
                port.domain,
                row,
                *_section(layout, place, answer, key, name, "clip_in"),
            )
        for index, port in enumerate(p for p in stage.outputs() if not p.tap):
            row = int(place[layout.output_rows[key, port.name]])
            name = answer.outputs[port.name].section if isinstance(answer, ActiveStage) else None
            yield NodeRef(
                key,
                port.name,
                "out",
                index,
                port.domain,
                row,
                *_section(layout, place, answer, key, name, "clip_out"),
            )


def _places(nodes: tuple[NodeRef, ...]) -> Mapping[tuple[str, str], tuple[int, ...]]:
    found: dict[tuple[str, str], tuple[int, ...]] = {}
    for place, ref in enumerate(nodes):
        found[ref.stage, ref.direction] = (*found.get((ref.stage, ref.direction), ()), place)
    return found


def _section(
    layout: Layout, place: Index, answer: StageSections, key: str, name: str | None, side: str
) -> tuple[int | None, bool]:
    """The row of a section by name, and whether it has a clip point on that side."""
    if isinstance(answer, PassiveStage):
        return None, False
    for section, row in zip(answer.sections, layout.section_rows[key], strict=True):
        if section.name == name:
            return int(place[row]), bool(np.all(np.asarray(getattr(section, side)) < NEVER))
    raise ValueError(f"stage {key!r} names a section {name!r} it does not have")


__all__ = ["NodeRef", "NoisePart", "Plan", "build_plan", "redrawn", "rewritten"]
