"""What the card says of a solved stage, link or seat: lines, a table of levels, and who owns the hiss. No Qt here."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from app import words
from engine.levels import NodeLevels, SectionLevels
from engine.outcome import Outcome
from engine.project import Link
from engine.seat import SeatLevels

MOST_OWNERS = 6


@dataclass(frozen=True)
class Line:
    """One result: what it is, and how it reads; `grave` is a severity's word, or empty."""

    label: str
    text: str
    grave: str = ""


@dataclass(frozen=True)
class Levels:
    """One row of the table of levels; numbers in `unit`, the margin and gain in dB, already as text."""

    name: str
    unit: str
    gain: str
    level: str
    clip: str
    margin: str
    noise: str
    short: bool = False  # its peaks clip


@dataclass(frozen=True)
class Owner:
    """One part of the hiss: whose, which noise of it, its share 0 to 1, its level."""

    stage: str
    name: str
    share: float
    hiss_a: float | None


def levels_of(outcome: Outcome, stage: str) -> tuple[Levels, ...]:
    """The sections of a stage in signal order; its inputs and outputs where it has no sections of its own."""
    sections = outcome.sections(stage)
    if sections:
        return tuple(_section(each) for each in sections)
    nodes = [node for node in outcome.nodes if node.stage == stage]
    return tuple(_node(node, nodes) for node in nodes)


def node_lines(outcome: Outcome, stage: str) -> tuple[Line, ...]:
    """What stands at a stage's inputs and outputs; nothing where its table of levels shows just these."""
    nodes = [node for node in outcome.nodes if node.stage == stage]
    if not outcome.sections(stage):
        return ()
    return tuple(
        Line(_node_name(node, nodes).capitalize(), words.level(node.level, node.unit, muted=node.muted))
        for node in nodes
    )


def seat_lines(seat: SeatLevels) -> tuple[Line, ...]:
    """What a seat hears."""
    off = seat.off_target
    lines = [
        Line("Level", words.level(seat.level, "dB SPL", muted=True)),
        Line("Level, A-weighted", _spl(seat.level_a, "dB(A)")),
        Line("Peak, as a sine", words.level(seat.peak, "dB SPL", muted=True)),
    ]
    if off is not None:
        lines.append(Line("Target", words.level(seat.target, "dB SPL")))
        # A seat is on target within half a dB: DESIGN 5.8.
        lines.append(Line("Off target", words.gain(off), "mend" if abs(off) > 0.55 else ""))
    lines.append(Line("Hiss", _spl(seat.hiss_a, "dB(A)")))
    if seat.ambient is not None:
        lines.append(Line("The room itself", seat.ambient.name.replace(" dB", words.THIN + "dB")))
    if seat.hiss_margin is not None:
        where = "" if seat.margin_band_hz is None else f" at {words.hertz(seat.margin_band_hz)}"
        over = seat.hiss_margin < 0.0
        text = f"{words.margin(abs(seat.hiss_margin))} {'over' if over else 'under'}{where}"
        lines.append(Line("Against the room", text, "stop" if over else ""))
    return tuple(lines)


def owners_of(seat: SeatLevels) -> tuple[Owner, ...]:
    """The largest parts of a seat's hiss."""
    return tuple(
        Owner(
            part.stage, f"{part.name}, {part.origin}" if part.origin else part.name, part.share, part.hiss_a
        )
        for part in seat.budget[:MOST_OWNERS]
    )


def load_lines(outcome: Outcome, stage: str) -> tuple[Line, ...]:
    """What a loudspeaker has to carry; nothing for any other stage."""
    found = next((load for load in outcome.loudspeakers if load.stage == stage), None)
    if found is None:
        return ()
    lines = [
        Line("At its terminals", words.volts(found.volts, 3)),
        Line("Average power", words.watts(found.average_w)),
        Line("Peak power", words.watts(found.peak_w)),
    ]
    margins = (("Under continuous", found.continuous_margin_db), ("Under peak", found.peak_margin_db))
    lines += [
        Line(label, words.margin(value), "stop" if value < 0.0 else "")
        for label, value in margins
        if value is not None
    ]
    return tuple(lines)


def link_lines(outcome: Outcome, link: Link) -> tuple[Line, ...]:
    """A link's levels at its two ends, and what is lost between them."""
    ahead = _find(outcome.nodes, link.source, "out", link.output)
    behind = _find(outcome.nodes, link.target, "in", link.input)
    if ahead is None or behind is None:
        return ()
    lines = [
        Line("Leaves at", words.level(ahead.level, ahead.unit, muted=ahead.muted)),
        Line("Arrives at", words.level(behind.level, behind.unit, muted=behind.muted)),
    ]
    feeds = [each for each in outcome.project.topology.into[link.target] if each.input == link.input]
    if len(feeds) > 1:
        lines[1] = Line("Arrives, with the others, at", lines[1].text)
    elif ahead.unit == behind.unit and ahead.level is not None and behind.level is not None:
        lines.append(Line("On the way", words.gain(behind.level - ahead.level)))
    if behind.peak_margin is not None:
        lines.append(
            Line("Peak margin at its end", words.margin(behind.peak_margin), _short(behind.peak_margin))
        )
    return tuple(lines)


def _section(each: SectionLevels) -> Levels:
    clips = [
        clip
        for clip in (each.clip_out, None if each.unit_in != each.unit else each.clip_in)
        if clip is not None
    ]
    clip = each.clip_out if each.clip_out is not None else (clips[0] if clips else None)
    gain = NO_GAIN if each.unit_in != each.unit else words.number(each.gain_db, signed=True)
    return Levels(
        each.name, each.unit, gain, _muted(each.level_out), words.number(clip),
        words.number(each.margin), words.number(each.noise_out), each.margin is not None and each.margin < 0.0,
    )  # fmt: skip


NO_GAIN = ""


def _node(node: NodeLevels, among: Sequence[NodeLevels]) -> Levels:
    return Levels(
        _node_name(node, among), node.unit, NO_GAIN, _muted(node.level), words.number(node.clip), words.number(node.peak_margin),
        words.number(node.noise), node.peak_margin is not None and node.peak_margin < 0.0,
    )  # fmt: skip


def _node_name(node: NodeLevels, among: Sequence[NodeLevels]) -> str:
    alike = sum(each.direction == node.direction for each in among)
    side = "input" if node.direction == "in" else "output"
    return node.port.replace("_", " ") if alike > 1 else side


def _muted(level: float | None) -> str:
    return words.MUTED if level is None else words.number(level)


def _spl(value: float | None, unit: str) -> str:
    return words.MUTED if value is None else words.with_unit(words.number(value), unit)


def _short(margin: float) -> str:
    return "stop" if margin < 0.0 else ""


def _find(nodes: Iterable[NodeLevels], stage: str, direction: str, port: str) -> NodeLevels | None:
    return next((n for n in nodes if (n.stage, n.direction, n.port) == (stage, direction, port)), None)
