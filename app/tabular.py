"""A solved project as rows: the JSON object, the CSV file, and the columns that people read on screen and on paper.

JSON and CSV carry the engine's numbers unrounded; `NODE_COLUMNS` words the same numbers for people. No Qt here.
"""

from __future__ import annotations

import csv
import io
import json
import math
from collections.abc import Callable, Sequence
from dataclasses import asdict
from typing import TYPE_CHECKING, Any, NamedTuple

from app import words

if TYPE_CHECKING:
    from engine.findings import Finding
    from engine.levels import NodeLevels
    from engine.loudspeaker import LoudspeakerLoad
    from engine.outcome import Outcome
    from engine.project import Project
    from engine.seat import SeatLevels

NODE_NUMBERS = ("level", "peak", "clip", "ceiling", "headroom", "peak_margin", "noise", "noise_a", "snr")
NODE_FIELDS = ("stage", "name", "port", "index", "domain", "unit", *NODE_NUMBERS)
SEAT_NUMBERS = ("level", "level_a", "peak", "hiss", "hiss_a", "hiss_margin")
LOUDSPEAKER_NUMBERS = ("average_w", "peak_w", "continuous_margin_db", "peak_margin_db")


def node_record(node: NodeLevels) -> dict[str, Any]:
    """One node as the JSON object has it."""
    return {
        "stage": node.stage,
        "name": node.name,
        "port": node.direction,
        "index": node.index,
        "domain": str(node.domain),
        "unit": node.unit,
        **_numbers(node, NODE_NUMBERS),
    }


def seat_record(seat: SeatLevels) -> dict[str, Any]:
    """One seat as the JSON object has it, its noise budget largest share first."""
    budget = [{**asdict(line), **_numbers(line, ("hiss", "hiss_a", "share"))} for line in seat.budget]
    return {"stage": seat.stage, "name": seat.name, **_numbers(seat, SEAT_NUMBERS), "budget": budget}


def loudspeaker_record(load: LoudspeakerLoad) -> dict[str, Any]:
    """One loudspeaker as the JSON object has it."""
    return {"stage": load.stage, "name": load.name, **_numbers(load, LOUDSPEAKER_NUMBERS)}


def record(outcome: Outcome) -> dict[str, list[dict[str, Any]]]:
    """The whole object of `gainwright table --json`."""
    return {
        "nodes": [node_record(node) for node in outcome.nodes],
        "seats": [seat_record(seat) for seat in outcome.seats],
        "loudspeakers": [loudspeaker_record(load) for load in outcome.loudspeakers],
        "findings": [
            {"severity": each.severity, "code": each.code, "stage": each.stage, "message": each.message}
            for each in outcome.findings
        ],
    }


def to_json(outcome: Outcome) -> str:
    """The JSON text; numbers unrounded, null where there is none."""
    return json.dumps(record(outcome), ensure_ascii=False, indent=1, allow_nan=False)


def to_csv(outcome: Outcome) -> str:
    """One line per node under a line of names; numbers unrounded, empty where there is none."""
    text = io.StringIO()
    writer = csv.DictWriter(text, NODE_FIELDS, lineterminator="\n")
    writer.writeheader()
    for node in outcome.nodes:
        writer.writerow({key: _csv(value) for key, value in node_record(node).items()})
    return text.getvalue()


def _csv(value: Any) -> Any:
    return "" if value is None else repr(value) if isinstance(value, float) else value


def _numbers(source: object, names: Sequence[str]) -> dict[str, float | None]:
    found = {}
    for name in names:
        value = getattr(source, name)
        found[name] = float(value) if value is not None and math.isfinite(value) else None
    return found


def place(project: Project, node: NodeLevels) -> str:
    """What a node is called: "Amplifier A input"; by its port where there are several: "Processor, output 2"."""
    stage = project.stage[node.stage]
    ports = {port.name: port for port in (stage.inputs() if node.direction == "in" else stage.outputs())}
    port = ports[node.port]
    alone = not port.tap and sum(not each.tap for each in ports.values()) == 1
    if alone:
        return f"{node.name} {'input' if node.direction == 'in' else 'output'}"
    return f"{node.name}, {port.label or port.name.replace('_', ' ')}"


class Column(NamedTuple):
    """A column of the node table: its heading and a node's text in it."""

    heading: str
    text: Callable[[NodeLevels], str]


def _level(name: str) -> Callable[[NodeLevels], str]:
    """A level without its unit, which has a column of its own; "muted" stands in the level's own column only."""

    def text(node: NodeLevels) -> str:
        value = getattr(node, name)
        if value is None:
            return words.MUTED if name == "level" and node.muted else words.NOTHING
        return words.number(value, signed=node.unit != "dB SPL")

    return text


def _margin(name: str) -> Callable[[NodeLevels], str]:
    return lambda node: words.number(getattr(node, name))


NODE_COLUMNS: tuple[Column, ...] = (
    Column("unit", lambda node: node.unit),
    Column("level", _level("level")),
    Column("peak", _level("peak")),
    Column("clip", _level("clip")),
    Column("ceiling", _level("ceiling")),
    Column("headroom", _margin("headroom")),
    Column("peak margin", _margin("peak_margin")),
    Column("noise", _level("noise")),
    Column("noise (A)", _level("noise_a")),
    Column("S/N", _margin("snr")),
)


def node_table(outcome: Outcome) -> list[list[str]]:
    """Every node as people read it, under a row of headings."""
    rows = [["node", *(column.heading for column in NODE_COLUMNS)]]
    rows += [
        [place(outcome.project, node), *(column.text(node) for column in NODE_COLUMNS)]
        for node in outcome.nodes
    ]
    return rows


def seat_table(outcome: Outcome) -> list[list[str]]:
    """Every seat as people read it, under a row of headings."""
    rows = [
        [
            "seat",
            "dB SPL",
            "dB(A)",
            "peak",
            "target",
            "off target",
            "hiss dB(A)",
            "under the room",
            "who owns the hiss",
        ]
    ]
    for seat in outcome.seats:
        first = seat.budget[0] if seat.budget else None
        owner = f"{first.name}, {first.origin}: {words.share(first.share)}" if first else words.NOTHING
        numbers = (seat.level, seat.level_a, seat.peak, seat.target)
        rows.append(
            [seat.name, *(words.number(value) for value in numbers), words.number(seat.off_target, signed=True),
             words.number(seat.hiss_a), words.number(seat.hiss_margin), owner]
        )  # fmt: skip
    return rows


def loudspeaker_table(outcome: Outcome) -> list[list[str]]:
    """Every loudspeaker as people read it, under a row of headings."""
    rows = [["loudspeaker", "average", "peak", "left to continuous", "left to peak"]]
    rows += [
        [load.name, words.watts(load.average_w), words.watts(load.peak_w), words.margin(load.continuous_margin_db),
         words.margin(load.peak_margin_db)]
        for load in outcome.loudspeakers
    ]  # fmt: skip
    return rows


def grouped(findings: Sequence[Finding]) -> list[list[Finding]]:
    """Findings of one severity, code and mend together, so that what to do is said once; otherwise in their order."""
    groups: dict[tuple[str, str, str], list[Finding]] = {}
    for each in findings:
        groups.setdefault((each.severity, each.code, each.mend), []).append(each)
    return list(groups.values())


def aligned(rows: Sequence[Sequence[str]], left: int = 1) -> str:
    """Rows as text in columns: the first `left` to the left, the others to the right, a row of headings above."""
    widths = [max(len(row[at]) for row in rows) for at in range(len(rows[0]))]
    lines = []
    for row in rows:
        cells = [
            text.ljust(wide) if at < left else text.rjust(wide)
            for at, (text, wide) in enumerate(zip(row, widths, strict=True))
        ]
        lines.append("  ".join(cells).rstrip())
    return "\n".join(lines)
