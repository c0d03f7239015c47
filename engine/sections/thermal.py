"""Thermal noise of a net's resistances, at each node and between nodes.

Everything in a passive two-port at one temperature that is not lossless makes noise. Written as

    I1 = (c/a) V1 - (1/a) I2        V2 = (1/a) V1 + (b/a) I2

it hides a current i at its near end and a voltage e at its far end, whose spectra are 4kT times the Hermitian part of
that matrix: <i i*> = Re(c/a), <e e*> = Re(b/a), <i e*> = -j Im(1/a) (Nyquist 1928; Twiss 1955 for two-ports; from
memory). So an attenuator, a cable and a transformer are told by their ABCD matrix alone, seen from either side.

Members alike of a group are one set of nodes in the net. What one of them makes reaches another by way of the node
outside the group that all of them hang on.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from engine.units import BOLTZMANN_J_PER_K

from .base import Complex
from .net import Edge, Net, Node


@dataclass(frozen=True)
class Heard:
    """Voltage at a node for one unit of a two-port's hidden current, and of its hidden voltage."""

    current: Complex
    voltage: Complex

    def times(self, gain: Complex) -> Heard:
        return Heard(self.current * gain, self.voltage * gain)


@dataclass
class Thermal:
    """The thermal noise of one net. `group` names the members a node stands for, `size` how many they are."""

    net: Net
    group: Mapping[Node, str | None]
    size: Mapping[str, int]
    _heard: dict[tuple[int, Node], Heard] = field(default_factory=dict, repr=False)

    def v2_per_hz(self, edge: Edge, one: Node, other: Node, *, unlike: bool = False) -> Any:
        """Cross-spectral density [V²/Hz] of what one stage's two-ports `edge` make at two nodes; their power where they are one.

        `unlike` asks for the nodes of two different members of one group. Real part only: what adds in a sum.
        """
        inside = self._group_of(edge)
        here, there = self._at(edge, one), self._at(edge, other)
        if inside is None:
            return self._together(edge, here, there)
        if (
            self._shared(edge) is None
        ):  # members alike that hang on nothing together hear nothing of one another
            return 0.0 if unlike else self._together(edge, here, there)
        count = self.size[inside]
        is_in, other_in = self.group[one] == inside, self.group[other] == inside
        if not is_in and not other_in:
            return count * self._together(edge, here, there)
        across = self._across(edge, one) if is_in else here
        other_across = self._across(edge, other) if other_in else there
        if unlike and is_in and other_in:
            own = self._together(edge, here, other_across) + self._together(edge, across, there)
            return own + (count - 2) * self._together(edge, across, other_across)
        return self._together(edge, here, there) + (count - 1) * self._together(edge, across, other_across)

    def _group_of(self, edge: Edge) -> str | None:
        near, far = self.group[edge.near], self.group[edge.far]
        return near if near == far else None

    def _together(self, edge: Edge, one: Heard, other: Heard) -> Any:
        two = edge.two_port
        a = np.asarray(two.a, dtype=complex)
        current2, voltage2, crossed = np.real(two.c / a), np.real(two.b / a), -1j * np.imag(1.0 / a)
        found = (
            current2 * one.current * np.conj(other.current)
            + voltage2 * one.voltage * np.conj(other.voltage)
            + crossed * one.current * np.conj(other.voltage)
            + np.conj(crossed) * one.voltage * np.conj(other.current)
        )
        return 4.0 * BOLTZMANN_J_PER_K * np.asarray(self.net.temperature_k) * np.real(found)

    def _at(self, edge: Edge, node: Node) -> Heard:
        """What a node hears of a two-port, within its own member."""
        key = (id(edge), node)
        if key not in self._heard:
            self._heard[key] = self._found(edge, node)
        return self._heard[key]

    def _found(self, edge: Edge, node: Node) -> Heard:
        two, net = edge.two_port, self.net
        before = net.at(edge.near, away_from=edge.far)
        behind = net.at(edge.far, away_from=edge.near)
        whole = np.asarray(before * (two.a + two.b * behind) + two.c + two.d * behind)
        # Where nothing feeds, loads or shunts it no noise current flows.
        is_open = np.abs(whole) < 1e-30
        scale = np.where(is_open, 0.0, 1.0 / np.where(is_open, 1.0, whole))
        way = net.way(edge.near, node)
        if len(way) > 1 and way[1] == edge.far:
            heard = Heard(-1.0, two.a * before + two.c)
            return heard.times(scale * net.path(edge.far, node))
        heard = Heard(-(two.a + two.b * behind), -behind)
        return heard.times(scale * net.path(edge.near, node))

    def _across(self, edge: Edge, node: Node) -> Heard:
        """What a member's node hears of the same two-port in another member."""
        shared = self._shared(edge)
        assert shared is not None
        return self._at(edge, shared).times(self.net.path(shared, node))

    def _shared(self, edge: Edge) -> Node | None:
        """The node outside a group that its members hang on; None where each member has a net of its own."""
        found = []
        for border in self.net.edges:
            if border.copies > 1:
                outside = border.far if border.mirrored else border.near
                way = self.net.way(edge.near, outside)
                found.append((len(way), outside))
        return min(found, key=lambda each: each[0])[1] if found else None
