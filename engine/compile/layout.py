"""Lay a project out as rows: which row is which section, net node, arrival or sum."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass, field, replace

from engine.project import Link, Project
from engine.sections.base import Active, ActiveStage, Domain, PassiveStage, StageSections
from engine.sections.net import Node

from .draft import SILENCE, Draft
from .wire import NetShape, PassiveLoopError, alike_into_one, find_nets, in_node, is_electrical, out_node


@dataclass(frozen=True)
class NetRows:
    """Where a net's nodes stand: `by_driver` [(driver, node)] carries one driver's voltage, `total` [node] the sum.

    With one driver the two are the same row.
    """

    shape: NetShape
    by_driver: Mapping[tuple[int, Node], int]
    total: Mapping[Node, int]
    pairs: tuple[tuple[int, Node, Node, bool], ...] = ()  # covariance rows: row, two nodes, of unlike members


@dataclass
class Layout:
    """Drafted rows and what each is. Indices are the draft's."""

    draft: Draft = field(default_factory=Draft)
    section_rows: dict[str, list[int]] = field(default_factory=dict)
    arrival_rows: dict[str, int] = field(default_factory=dict)
    input_rows: dict[tuple[str, str], int] = field(default_factory=dict)
    output_rows: dict[tuple[str, str], int] = field(default_factory=dict)  # as loaded
    open_rows: dict[tuple[str, str], int] = field(
        default_factory=dict
    )  # open circuit, ahead of the output's impedance
    node_rows: dict[Node, int] = field(default_factory=dict)
    nets: list[NetRows] = field(default_factory=list)
    emitting: list[tuple[str, int]] = field(default_factory=list)
    dynamic: set[int] = field(default_factory=set)


def alike_groups(project: Project) -> dict[str, str | None]:
    """The group each stage stands in: linked stages with the same count above one are the same members."""
    group: dict[str, str | None] = {}
    for start in project.stages:
        if start.id in group or start.count == 1:
            group.setdefault(start.id, None)
            continue
        ahead = [start.id]
        while ahead:
            at = ahead.pop()
            if at in group:
                continue
            group[at] = start.id
            links = (*project.topology.into[at], *project.topology.out_of[at])
            ends = (end for link in links for end in (link.source, link.target))
            ahead.extend(end for end in ends if project.stage[end].count == start.count and end not in group)
    return group


def lay_out(project: Project, answers: Mapping[str, StageSections]) -> Layout:
    """Rows for every section and node, parents first."""
    layout = Layout()
    groups = alike_groups(project)
    shapes, same = find_nets(project, answers, groups)
    layout.draft.group_size = {key: project.stage[key].count for key in groups.values() if key is not None}
    net_of_driver = {(s, p): shape for shape in shapes for s, p, _ in shape.drivers}
    waiting = {id(shape): len(shape.drivers) for shape in shapes}
    for shape in shapes:
        if not shape.drivers:
            _add_net(layout, shape)
    left = [key for key in project.topology.order if isinstance(answers[key], ActiveStage)]
    while left:
        later = []
        for key in left:
            # A net with several drivers stands only when the last of them does.
            if not _can_hear(layout, project, key, same):
                later.append(key)
                continue
            answer = answers[key]
            assert isinstance(answer, ActiveStage)
            _add_active(layout, project, key, answer, groups, same)
            for port, output in answer.outputs.items():
                row = _row_of(layout, answer, key, output.section)
                layout.output_rows[key, port] = row
                layout.open_rows[key, port] = row
                if (driven := net_of_driver.get((key, port))) is not None:
                    waiting[id(driven)] -= 1
                    if not waiting[id(driven)]:
                        _add_net(layout, driven)
        if len(later) == len(left):
            raise _feedback(project, left, shapes)
        left = later
    _name_net_nodes(layout, project, answers, same)
    layout.draft.find_shared()
    _give_pairs(layout)
    return layout


def _can_hear(layout: Layout, project: Project, key: str, same: Mapping[Node, Node]) -> bool:
    """Whether the rows of all that leads into a stage have been laid out."""
    for link in project.topology.into[key]:
        if is_electrical(project, link):
            node = in_node(project, link)
            if same.get(node, node) not in layout.node_rows:
                return False
        elif (link.source, link.output) not in layout.output_rows:
            return False
    return True


def _feedback(project: Project, left: list[str], shapes: list[NetShape]) -> PassiveLoopError:
    """Why stages are left that can never hear: an output leads back to its own input through passive stages."""
    stuck = set(left)
    for shape in shapes:
        drivers = [stage for stage, _, _ in shape.drivers if stage in stuck]
        fed = [stage for stage, _, _ in shape.loads if stage in stuck]
        if drivers and fed:
            one, other = project.stage[fed[0]].name, project.stage[drivers[0]].name
            return PassiveLoopError(
                f"What {other} sends comes back to {one} through passive stages that both hang on: "
                "put an active stage between them"
            )
    return PassiveLoopError(f"{project.stage[left[0]].name} can never hear what leads to it")


def _give_pairs(layout: Layout) -> None:
    """Tell each net the covariance rows between its own nodes."""
    node_of = {row: node for net in layout.nets for node, row in net.total.items()}
    pairs: dict[int, list[tuple[int, Node, Node, bool]]] = defaultdict(list)
    for pair in layout.draft.net_pairs:
        pairs[layout.draft.net_of[pair.one]].append(
            (pair.row, node_of[pair.one], node_of[pair.other], pair.unlike)
        )
    for index, found in pairs.items():
        layout.nets[index] = replace(layout.nets[index], pairs=tuple(found))


def _row_of(layout: Layout, answer: ActiveStage, key: str, section: str) -> int:
    names = [s.name for s in answer.sections]
    return layout.section_rows[key][names.index(section)]


def _add_active(
    layout: Layout, project: Project, key: str, answer: ActiveStage,
    groups: Mapping[str, str | None], same: Mapping[Node, Node],
) -> None:  # fmt: skip
    group = groups[key]
    entering = _entering_rows(layout, project, key, answer, groups, same)
    by_name: dict[str, int] = {}
    before = SILENCE
    first_of = {port.section: name for name, port in answer.inputs.items()}
    for place, section in enumerate(answer.sections):
        if section.after:
            fed = [by_name[name] for name in section.after]
            parent = (
                fed[0] if len(fed) == 1 else layout.draft.add_join([(f, 1) for f in fed], group, "origin")
            )
        elif section.name in first_of:
            parent = entering.get(section.name, SILENCE)
        else:
            parent = before if place else SILENCE
        row = layout.draft.add_single(parent, group)
        by_name[section.name] = before = row
        if section.dynamics is not None:
            layout.dynamic.add(row)
        if place == 0 and answer.emission is not None:
            layout.emitting.append((key, row))
    layout.section_rows[key] = list(by_name.values())


def _entering_rows(
    layout: Layout, project: Project, key: str, answer: ActiveStage,
    groups: Mapping[str, str | None], same: Mapping[Node, Node],
) -> dict[str, int]:  # fmt: skip
    """The row that feeds each input's first section: a link's own, or the sum of several."""
    stage = project.stage[key]
    by_port: dict[str, list[tuple[int, int]]] = defaultdict(list)
    for link in project.topology.into[key]:
        row, members = _link_row(layout, project, link, groups, same)
        by_port[link.input].append((row, members))
    entering: dict[str, int] = {}
    for port in stage.inputs():
        heard = by_port.get(port.name, [])
        if not heard:
            row = SILENCE
        elif len(heard) == 1 and heard[0][1] == 1:
            row = heard[0][0]
        else:
            row = layout.draft.add_join(heard, groups[key], answer.join)
        layout.input_rows[key, port.name] = row
        entering[answer.inputs[port.name].section] = row
    return entering


def _link_row(
    layout: Layout, project: Project, link: Link, groups: Mapping[str, str | None], same: Mapping[Node, Node]
) -> tuple[int, int]:
    """The row a link brings, and how many members alike bring it."""
    members = alike_into_one(project, link, groups)
    domain = next(p.domain for p in project.stage[link.source].outputs() if p.name == link.output)
    if domain is Domain.ANALOGUE:
        node = in_node(project, link)
        node = same.get(node, node)
        return layout.node_rows[node], members
    row = layout.output_rows[link.source, link.output]
    if domain is Domain.ACOUSTIC:
        row = layout.draft.add_single(row, groups[link.source] if members > 1 else groups[link.target])
        layout.arrival_rows[link.id] = row
    return row, members


def _add_net(layout: Layout, shape: NetShape) -> None:
    """Rows for a net's nodes: one per driver and node, and their sums where drivers are several."""
    by_driver: dict[tuple[int, Node], int] = {}
    total: dict[Node, int] = {}
    for node in shape.nodes:
        heard: list[tuple[int, int]] = []
        for place, (stage, port, at) in enumerate(shape.drivers):
            parent = layout.open_rows[stage, port]
            row = layout.draft.add_single(parent, shape.group[node])
            by_driver[place, node] = row
            crosses = shape.group[at] is not None and shape.group[node] != shape.group[at]
            heard.append((row, layout.draft.group_size[shape.group[at]] if crosses else 1))  # type: ignore[index]
        if not heard:
            total[node] = layout.draft.add_single(SILENCE, shape.group[node])
        elif len(heard) == 1 and heard[0][1] == 1:
            total[node] = heard[0][0]
        else:
            if any(members > 1 for _, members in heard):
                for (row, members), (_stage, _port, at) in zip(heard, shape.drivers, strict=True):
                    if members > 1:
                        layout.draft.rows[row].group = shape.group[at]
            total[node] = layout.draft.add_join(heard, shape.group[node], "origin")
    layout.draft.net_of.update(dict.fromkeys(total.values(), len(layout.nets)))
    layout.nets.append(NetRows(shape, by_driver, total))
    layout.node_rows.update(total)


def _name_net_nodes(
    layout: Layout, project: Project, answers: Mapping[str, StageSections], same: Mapping[Node, Node]
) -> None:
    where = layout.node_rows
    for key, answer in answers.items():
        stage = project.stage[key]
        for port in stage.outputs():
            if (node := out_node(key, port.name)) in where:
                layout.output_rows[key, port.name] = where[node]
        if isinstance(answer, PassiveStage):
            for port in stage.inputs():
                node = ("centre", key) if port.many else ("in", key, port.name, "")
                layout.input_rows[key, port.name] = where[same.get(node, node)]


def first_section(answer: ActiveStage, port: str) -> Active:
    """The section behind an input port."""
    return next(s for s in answer.sections if s.name == answer.inputs[port].section)
