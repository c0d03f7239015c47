"""Everything at a node, in words: what the pointer shows over it, and what a screen reader says. No Qt here."""

from __future__ import annotations

from app import words
from engine.levels import NodeLevels
from engine.sections.base import Domain


def lines(node: NodeLevels) -> list[tuple[str, str]]:
    """Label and value of every number a node has, the level first."""
    unit = node.unit
    side = {"in": "input", "out": "output"}[node.direction]
    port = "" if node.port in ("in", "out") else f" {node.port}"
    found = [(f"{node.name}{port}", side)]
    found.append(("level", _level(node, "level")))
    if node.domain is Domain.ANALOGUE and node.level is not None:
        found.append(("", words.volts(words.volts_of_dbu(node.level))))
    found += [("peak", _level(node, "peak")), ("clip point", words.level(node.clip, unit))]
    found.append(("usable ceiling", words.level(node.ceiling, unit)))
    found += [("headroom", words.margin(node.headroom)), ("peak margin", words.margin(node.peak_margin))]
    found += [("noise", _level(node, "noise")), ("noise, A-weighted", words.level(node.noise_a, unit))]
    found.append(("S/N", words.margin(node.snr)))
    return [(label, value) for label, value in found if value != words.NOTHING]


def sentence(node: NodeLevels) -> str:
    """The node in one sentence."""
    (name, side), *rest = lines(node)
    return f"{name} {side}: " + ", ".join(f"{label} {value}".strip() for label, value in rest)


def _level(node: NodeLevels, number: str) -> str:
    value: float | None = getattr(node, number)
    said = words.level(value, node.unit, muted=node.muted and number != "noise")
    if number in node.low:
        said = f"{words.number(node.low[number])} to {words.level(node.high[number], node.unit)}"
    return said
