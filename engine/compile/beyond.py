"""What lies beyond each node of a net, away from its drivers.

A net's nodes all hear their driver directly, so the web of rows does not show which node stands ahead of which. The
usable ceiling at a node asks for the clip points of what it feeds: that is read from the tree itself.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable

import numpy as np

from engine.graph import Index
from engine.sections.net import Node

from .layout import NetRows


def find_beyond(nets: Iterable[NetRows], place: Index) -> tuple[Index, Index, Index]:
    """Rows of net nodes, where each one's list starts, and the rows beyond them (themselves included) end to end."""
    of: list[int] = []
    starts: list[int] = []
    rows: list[int] = []
    for net in nets:
        if len(net.shape.nodes) < 2:
            continue
        for node, beyond in _beyond(net).items():
            of.append(int(place[net.total[node]]))
            starts.append(len(rows))
            rows.extend(sorted({int(place[net.total[other]]) for other in beyond}))
    return tuple(np.array(each, dtype=np.intp) for each in (of, starts, rows))  # type: ignore[return-value]


def _beyond(net: NetRows) -> dict[Node, set[Node]]:
    beside: dict[Node, list[Node]] = defaultdict(list)
    for near, far, *_ in net.shape.edges:
        beside[near].append(far)
        beside[far].append(near)
    found: dict[Node, set[Node]] = {node: {node} for node in net.shape.nodes}
    for _stage, _port, start in net.shape.drivers:
        came: dict[Node, Node | None] = {start: None}
        order = [start]
        for node in order:
            for other in beside[node]:
                if other not in came:
                    came[other] = node
                    order.append(other)
        for node in reversed(order):
            parent = came[node]
            if parent is not None:
                found[parent] |= found[node]
    return found
