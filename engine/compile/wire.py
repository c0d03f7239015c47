"""Find the nets of a project: which passive sections hang together, what drives them, what loads them."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass

from engine.project import Link, Project
from engine.sections.base import ActiveStage, Complex, Domain, PassiveStage, StageSections, TwoPort
from engine.sections.net import Driver, Edge, Net, Node, find_loop
from engine.topology import LinkError

BARE = TwoPort()

#: What one leg to an unbalanced input does: voltage factor, and power factor of the clip point besides.
#: Push-pull loses half its swing, level and clip alike; a cross-coupled output holds its level with half the swing
#: to clip in; transformer and impedance-balanced outputs keep both (common practice, no source).
ONE_LEG = {
    "push-pull": (0.5, 1.0),
    "cross-coupled": (1.0, 0.25),
    "transformer": (1.0, 1.0),
    "impedance-balanced": (1.0, 1.0),
    "unbalanced": (1.0, 1.0),
}


class PassiveLoopError(LinkError):
    """Passive sections linked in a ring, or leading a stage's output back to its own input."""


@dataclass(frozen=True)
class NetShape:
    """One net without its numbers: its edges and ends by name, the stages whose numbers it needs."""

    nodes: tuple[Node, ...]
    edges: tuple[
        tuple[Node, Node, str, str, int, bool, float], ...
    ]  # near, far, stage, part, copies, mirrored, scale
    drivers: tuple[tuple[str, str, Node], ...]  # stage, port, node
    loads: tuple[tuple[str, str, Node], ...]  # stage, input port, node
    clip_scale: Mapping[Node, float]  # power factor of the clip point behind a link
    group: Mapping[Node, str | None]
    stages: frozenset[str]

    def with_numbers(self, answers: Mapping[str, StageSections], temperature_k: float) -> Net:
        """The net with the two-ports and impedances its stages answer now."""
        edges = tuple(
            Edge(near, far, self._two_port(answers, stage, part), stage or None, copies, mirrored, scale)
            for near, far, stage, part, copies, mirrored, scale in self.edges
        )
        drivers = tuple(
            Driver(node, _active(answers, stage).outputs[port].z_ohm) for stage, port, node in self.drivers
        )
        loads: dict[Node, Complex] = {}
        for stage, port, node in self.loads:
            loads[node] = loads.get(node, 0.0) + 1.0 / _active(answers, stage).inputs[port].z_ohm
        return Net(edges, drivers, loads, temperature_k)

    @staticmethod
    def _two_port(answers: Mapping[str, StageSections], stage: str, part: str) -> TwoPort:
        if not stage:
            return BARE
        passive = answers[stage]
        assert isinstance(passive, PassiveStage)
        side, port = part.split(":", 1)
        return passive.arms[port] if side == "arm" else passive.legs[port]


def _active(answers: Mapping[str, StageSections], stage: str) -> ActiveStage:
    answer = answers[stage]
    assert isinstance(answer, ActiveStage)
    return answer


def out_node(stage: str, port: str) -> Node:
    """The electrical node of an output."""
    return ("out", stage, port)


def in_node(project: Project, link: Link) -> Node:
    """The electrical node a link leads into; every link of a many-port has its own."""
    port = next(p for p in project.stage[link.target].inputs() if p.name == link.input)
    return ("in", link.target, link.input, link.id if port.many else "")


def find_nets(
    project: Project, answers: Mapping[str, StageSections], groups: Mapping[str, str | None]
) -> tuple[list[NetShape], Mapping[Node, Node]]:
    """All nets of the project, and which input nodes are the very node of the output that feeds them.

    Raises `PassiveLoopError` for a ring of passive sections.
    """
    same: dict[Node, Node] = {}
    electrical = [link for link in project.links if is_electrical(project, link)]
    edges: list[tuple[Node, Node, str, str, int, bool, float]] = []
    clip_scale: dict[Node, float] = {}
    group: dict[Node, str | None] = {}
    drivers: list[tuple[str, str, Node]] = []
    loads: list[tuple[str, str, Node]] = []
    for key, answer in answers.items():
        stage = project.stage[key]
        if isinstance(answer, PassiveStage):
            centre: Node = ("centre", key)
            group[centre] = groups[key]
            linked = set()
            for link in project.topology.into[key]:
                node, members = in_node(project, link), alike_into_one(project, link, groups)
                linked.add(link.input)
                group[node] = groups[link.source] if members > 1 else groups[key]
                edges.append((node, centre, key, f"arm:{link.input}", members, members > 1, 1.0))
            for port in stage.inputs():
                if port.name not in linked:
                    node = ("in", key, port.name, "")
                    group[node] = groups[key]
                    edges.append((node, centre, key, f"arm:{port.name}", 1, False, 1.0))
            for port in stage.outputs():
                group[out_node(key, port.name)] = groups[key]
                edges.append((centre, out_node(key, port.name), key, f"leg:{port.name}", 1, False, 1.0))
        else:
            for port in stage.outputs():
                if port.domain is Domain.ANALOGUE:
                    group[out_node(key, port.name)] = groups[key]
                    drivers.append((key, port.name, out_node(key, port.name)))
    for link in electrical:
        near, far = out_node(link.source, link.output), in_node(project, link)
        group.setdefault(far, groups[link.source])
        enters_group = groups[link.source] != groups[link.target] and groups[link.target] is not None
        copies = project.stage[link.target].count if enters_group else 1
        scale, clip = _wiring(answers, link)
        if copies == 1 and scale == 1.0 and clip == 1.0:
            same[far] = near
            group.pop(far, None)
        else:
            if alike_into_one(project, link, groups) == 1:
                group[far] = groups[link.target]
            edges.append((near, far, "", "", copies, False, scale))
            if clip != 1.0:
                clip_scale[far] = clip
        if isinstance(answers[link.target], ActiveStage):
            loads.append((link.target, link.input, same.get(far, far)))
    edges = [(same.get(near, near), same.get(far, far), *rest) for near, far, *rest in edges]  # type: ignore[misc]
    _refuse_loops(project, edges)
    return _components(edges, drivers, loads, clip_scale, group), same


def alike_into_one(project: Project, link: Link, groups: Mapping[str, str | None]) -> int:
    """How many members alike a link brings into a stage that stands for one."""
    leaves = groups[link.source] is not None and groups[link.target] is None
    return project.stage[link.source].count if leaves else 1


def is_electrical(project: Project, link: Link) -> bool:
    """Whether a link carries volts."""
    return any(
        p.name == link.output and p.domain is Domain.ANALOGUE for p in project.stage[link.source].outputs()
    )


def _wiring(answers: Mapping[str, StageSections], link: Link) -> tuple[float, float]:
    answer = answers[link.source]
    if link.wiring == "balanced" or isinstance(answer, PassiveStage):
        return 1.0, 1.0
    return ONE_LEG[answer.outputs[link.output].form]


def _refuse_loops(project: Project, edges: list[tuple[Node, Node, str, str, int, bool, float]]) -> None:
    loop = find_loop(Edge(near, far, BARE) for near, far, *_ in edges)
    if loop is not None:
        names = sorted(
            {project.stage[node[1]].name for node in (loop.near, loop.far) if isinstance(node, tuple)}
        )
        raise PassiveLoopError(
            f"{' and '.join(names)} close a ring of passive sections: put an active stage in one of its branches"
        )


def _components(
    edges: list[tuple[Node, Node, str, str, int, bool, float]],
    drivers: list[tuple[str, str, Node]],
    loads: list[tuple[str, str, Node]],
    clip_scale: dict[Node, float],
    group: dict[Node, str | None],
) -> list[NetShape]:
    root: dict[Node, Node] = {node: node for node in group}

    def find(node: Node) -> Node:
        while root[node] != node:
            root[node] = root[root[node]]
            node = root[node]
        return node

    for near, far, *_ in edges:
        root[find(near)] = find(far)
    members: dict[Node, list[Node]] = defaultdict(list)
    for node in group:
        members[find(node)].append(node)
    per_root: dict[Node, tuple[list[object], ...]] = {key: ([], [], []) for key in members}
    for edge in edges:
        per_root[find(edge[0])][0].append(edge)
    for driver in drivers:
        per_root[find(driver[2])][1].append(driver)
    for load in loads:
        per_root[find(load[2])][2].append(load)
    nets = []
    for key, nodes in members.items():
        its_edges, its_drivers, its_loads = per_root[key]
        owners = {e[2] for e in its_edges if e[2]} | {d[0] for d in its_drivers} | {x[0] for x in its_loads}  # type: ignore[index]
        nets.append(
            NetShape(tuple(nodes), tuple(its_edges), tuple(its_drivers), tuple(its_loads),  # type: ignore[arg-type]
                     {n: clip_scale[n] for n in nodes if n in clip_scale}, {n: group[n] for n in nodes}, frozenset(owners))
        )  # fmt: skip
    return nets
