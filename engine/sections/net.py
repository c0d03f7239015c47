"""A net: every passive section fed by the same outputs, solved both ways at once.

A net is a tree of electrical nodes joined by reciprocal two-ports, with admittances (inputs) hanging on its nodes and
drivers (Thevenin sources) feeding some of them. Everything follows from two messages along an edge u -> v, away
from u, with Y' the admittance at v of all that lies beyond:

    look(u, v)  = (C + D Y') / (A + B Y')     the admittance u sees through the edge
    step(u, v)  = 1 / (A + B Y')              V_v / V_u when the net is driven from u's side
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Hashable, Iterable, Mapping
from dataclasses import dataclass, field
from itertools import pairwise
from typing import Any

import numpy as np

from .base import Complex, Number, TwoPort

Node = Hashable


@dataclass(frozen=True)
class Edge:
    """A two-port from node `near` to node `far`.

    `owner` is the stage whose resistances it holds (None: a bare link). `copies` nodes `far` stand behind one
    `near` where a group of stages alike begins (`mirrored`: behind one `far` stand `copies` nodes `near`).
    `scale` is the one-way voltage factor of the wiring.
    """

    near: Node
    far: Node
    two_port: TwoPort
    owner: str | None = None
    copies: int = 1
    mirrored: bool = False
    scale: float = 1.0


@dataclass(frozen=True)
class Driver:
    """An output feeding a node through its noiseless impedance."""

    node: Node
    z_ohm: Number


@dataclass
class Net:
    """One tree, ready to answer. Admittances are sums of 1/Z of the inputs at each node [S]."""

    edges: tuple[Edge, ...]
    drivers: tuple[Driver, ...]
    loads: Mapping[Node, Complex]
    temperature_k: Number
    _beside: dict[Node, list[tuple[Node, Edge]]] = field(init=False, repr=False)
    _look: dict[tuple[Node, Node], Any] = field(init=False, default_factory=dict, repr=False)

    def __post_init__(self) -> None:
        self._beside = defaultdict(list)
        for edge in self.edges:
            self._beside[edge.near].append((edge.far, edge))
            self._beside[edge.far].append((edge.near, edge))

    # -- admittances -----------------------------------------------------------------------------------------
    def hanging(self, node: Node, *, without: int | None = None) -> Complex:
        """What hangs on the node itself: inputs, and outputs that are not asked to drive."""
        total: Complex = self.loads.get(node, 0.0)
        for place, driver in enumerate(self.drivers):
            if driver.node == node and place != without:
                total = total + 1.0 / np.maximum(driver.z_ohm, 1e-9)
        return total

    def at(self, node: Node, *, away_from: Node | None = None, without: int | None = None) -> Complex:
        """Admittance at `node` of all that hangs there and beyond, but not through the edge to `away_from`."""
        total = self.hanging(node, without=without)
        for other, edge in self._beside[node]:
            copies = _seen_copies(edge, node)
            if other == away_from:
                copies = copies - 1  # the other members of a group hang there still
            if copies:
                total = total + copies * self.look(node, other)
        return total

    def look(self, near: Node, far: Node) -> Complex:
        """Admittance seen from `near` through one edge into what lies beyond `far`."""
        key = (near, far)
        if key not in self._look:
            two = self._facing(near, far)
            beyond = self.at(far, away_from=near)
            self._look[key] = (two.c + two.d * beyond) / (two.a + two.b * beyond)
        found: Complex = self._look[key]
        return found

    # -- transfers -------------------------------------------------------------------------------------------
    def transfer(self, driver: int, node: Node) -> Complex:
        """Voltage at `node` for one volt of the driver's open-circuit EMF, the other drivers silent."""
        source = self.drivers[driver]
        here = 1.0 / (1.0 + source.z_ohm * self.at(source.node, without=driver))
        return here * self.path(source.node, node)

    def path(self, start: Node, end: Node) -> Complex:
        """Voltage at `end` over voltage at `start`, driven from beyond `start`."""
        total: Complex = 1.0
        for near, far in pairwise(self.way(start, end)):
            two = self._facing(near, far)
            edge = self._edge(near, far)
            total = total / (two.a + two.b * self.at(far, away_from=near))
            if edge.near == near:
                total = total * edge.scale
        return total

    def way(self, start: Node, end: Node) -> list[Node]:
        """The nodes from `start` to `end`, both among them."""
        came: dict[Node, Node] = {start: start}
        ahead = [start]
        while ahead:
            node = ahead.pop()
            if node == end:
                break
            for other, _ in self._beside[node]:
                if other not in came:
                    came[other] = node
                    ahead.append(other)
        trail = [end]
        while trail[-1] != start:
            trail.append(came[trail[-1]])
        return trail[::-1]

    def _edge(self, near: Node, far: Node) -> Edge:
        return next(edge for other, edge in self._beside[near] if other == far)

    def _facing(self, near: Node, far: Node) -> TwoPort:
        edge = self._edge(near, far)
        return edge.two_port if edge.near == near else edge.two_port.reversed


def _seen_copies(edge: Edge, node: Node) -> int:
    """How many of the edge's far ends this node sees."""
    if edge.copies == 1:
        return 1
    one_side = edge.far if edge.mirrored else edge.near
    return edge.copies if node == one_side else 1


def find_loop(edges: Iterable[Edge]) -> Edge | None:
    """The first edge that closes a loop, or None in a tree."""
    parent: dict[Node, Node] = {}

    def root(node: Node) -> Node:
        while parent.setdefault(node, node) != node:
            parent[node] = parent[parent[node]]
            node = parent[node]
        return node

    for edge in edges:
        near, far = root(edge.near), root(edge.far)
        if near == far:
            return edge
        parent[near] = far
    return None
