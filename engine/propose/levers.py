"""Levers: what the hands on a project's free controls do to the rows of its plan, for every real position at once.

A control is a lever when each of its positions moves the level by one amount at all frequencies. Equalisers, filters and
thresholds are not: they belong to the sound or to the protection. Controls of one stage whose sections overlap, and all
controls on one passive net, are one lever with the product of their positions.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from itertools import product

import numpy as np
from numpy.typing import NDArray

from engine.compile.fill import Table, fill_clip_by_load, fill_net, fill_stage
from engine.outcome import Outcome
from engine.rows import Array
from engine.sections.base import Active, ActiveStage, PassiveStage, StageSections
from engine.solve import FLAT, PEAK, PROGRAMME

FLAT_WITHIN_DB = 0.01
FLAT_IN_NET_DB = 0.5  # a pad ahead of a long line is not quite flat at the ends of the band
MOST_POSITIONS = 4096

Hand = tuple[str, str]  # stage, control


@dataclass(frozen=True, eq=False)
class MovedRow:
    """What one row becomes at each position [position], against the present.

    `gain_db` is its programme-weighted gain against now. Margins and noises hold at the present level: `margin_in` and
    `noise_in` (ahead of it) count with the shift of its input, `margin_out` and `noise_out` with that of its output.
    A noise is told as what it makes at the ends over the programme there, a power ratio.
    """

    row: int
    gain_db: Array
    margin_in: Array
    margin_out: Array
    noise_in: Array
    noise_out: Array

    def at(self, positions: NDArray[np.intp]) -> MovedRow:
        """The same at some positions."""
        return MovedRow(
            self.row, self.gain_db[positions], self.margin_in[positions], self.margin_out[positions],
            self.noise_in[positions], self.noise_out[positions],
        )  # fmt: skip


@dataclass(frozen=True, eq=False)
class Lever:
    """One or more hands that move the same rows. `values` [position, hand] in the controls' units, the present ones first."""

    hands: tuple[Hand, ...]
    values: Array
    rows: tuple[MovedRow, ...]


def find_levers(outcome: Outcome, free: Iterable[Hand], weight: Array) -> tuple[Lever, ...]:
    """The levers among free controls. `weight` [row, F] is what a power added at a row's output makes at the ends."""
    reader = Reader(outcome, weight)
    groups: list[tuple[list[Hand], set[int], set[int]]] = []
    for hand in free:
        rows, nets = reader.moved_by(hand)
        if not rows:
            continue
        met = [group for group in groups if group[1] & rows]
        groups = [group for group in groups if not group[1] & rows]
        hands = [each for group in met for each in group[0]]
        groups.append(([*hands, hand], rows.union(*(g[1] for g in met)), nets.union(*(g[2] for g in met))))
    return tuple(lever for hands, _, nets in groups if (lever := reader.lever(hands, nets)) is not None)


class Reader:
    """Reads rows at other positions than the present ones."""

    def __init__(self, outcome: Outcome, weight: Array) -> None:
        self.outcome, self.plan, self.weight = outcome, outcome.plan, weight
        self.nets_of: dict[str, list[int]] = {}
        for index, net in enumerate(self.plan.layout.nets):
            for stage in net.shape.stages:
                self.nets_of.setdefault(stage, []).append(index)

    def moved_by(self, hand: Hand) -> tuple[set[int], set[int]]:
        """The rows one control moves, and the nets it touches; none where it is no lever."""
        values = self._positions([hand])
        if values is None or len(values) < 2:
            return set(), set()
        values = values[np.unique([0, 1, len(values) // 2, -1])] if len(values) > 4 else values
        answers = self._answers([hand], values)
        nets = self._nets(hand[0], answers)
        found = self._read([hand], len(values), answers, nets) or []
        if not any(np.isfinite(row.gain_db[1:]).any() for row in found):
            return set(), set()  # a mute
        return {row.row for row in found}, nets

    def lever(self, hands: list[Hand], nets: set[int]) -> Lever | None:
        """The lever of these hands together."""
        while (values := self._positions(hands)) is None:
            hands = hands[:-1]  # too many to be searched together: the last found stays where it is
        found = self._read(hands, len(values), self._answers(hands, values), nets)
        if not found:
            return None
        usable = np.flatnonzero(np.all([np.isfinite(row.gain_db) for row in found], axis=0))
        if usable.size < 2 or usable[0] != 0:
            return None
        return Lever(tuple(hands), values[usable], tuple(row.at(usable) for row in found))

    def _positions(self, hands: list[Hand]) -> Array | None:
        """All positions [position, hand], the present first and the nearest next; None where they are too many."""
        ladders: list[list[float]] = []
        for stage, control in hands:
            item = self.plan.project.stage[stage]
            now = getattr(item, control).value
            if now is None:
                return np.zeros((0, len(hands)))
            steps = item.control_range(control).positions
            steps = steps[np.isfinite(steps) & (np.abs(steps - now) > 1e-6)]
            ladders.append([now, *steps[np.argsort(np.abs(steps - now), kind="stable")].tolist()])
        if len(hands) > 1 and np.prod([float(len(ladder)) for ladder in ladders]) > MOST_POSITIONS:
            return None
        return np.array(list(product(*ladders)))

    def _answers(self, hands: list[Hand], values: Array) -> Mapping[str, StageSections]:
        plan, fresh = self.plan, dict(self.plan.answers)
        for stage in dict.fromkeys(stage for stage, _ in hands):
            item = plan.project.stage[stage]
            moved = {
                control: values[:, [place]] for place, (owner, control) in enumerate(hands) if owner == stage
            }
            kept = plan.overrides.get(stage) or item.values()
            given = kept.replaced({**moved, "temperature_k": plan.project.header.temperature_k})
            fresh[stage] = item.sections(given, plan.axis)
        return fresh

    def _nets(self, stage: str, answers: Mapping[str, StageSections]) -> set[int]:
        """The nets whose transfers or clip points follow a control of this stage."""
        answer = answers[stage]
        nets = self.nets_of.get(stage, [])
        if isinstance(answer, PassiveStage):
            return set(nets)
        impedances = [port.z_ohm for port in answer.inputs.values()] + [
            port.z_ohm for port in answer.outputs.values()
        ]
        if any(_varies(z) for z in impedances):
            return set(nets)
        shapes = [(n, self.plan.layout.nets[n].shape) for n in nets]
        return {n for n, shape in shapes if shape.clip_scale and any(d[0] == stage for d in shape.drivers)}

    def _read(
        self, hands: list[Hand], count: int, answers: Mapping[str, StageSections], nets: set[int]
    ) -> list[MovedRow] | None:
        """The rows that differ from the present, in signal order; None where the hands are no lever."""
        found: dict[int, MovedRow | None] = {}
        for stage in dict.fromkeys(stage for stage, _ in hands):
            answer = answers[stage]
            if isinstance(answer, PassiveStage):
                continue
            if not _comparable(answer, self.plan.answers[stage]):
                return None
            for section, (_, row) in zip(answer.sections, self.plan.section_list(stage), strict=True):
                if _moves(section):
                    found[row] = self._section(row, section, count)
        for index in nets:
            found = {**self._net(index, count, answers), **found}
        rows = [found[row] for row in sorted(found)]
        return None if any(row is None for row in rows) else [row for row in rows if row is not None]

    def _section(self, row: int, section: Active, count: int) -> MovedRow | None:
        gain = np.atleast_2d(np.asarray(section.gain, dtype=float))
        behind = np.atleast_2d(np.asarray(section.noise_behind, dtype=float))
        ahead = np.atleast_2d(np.asarray(section.noise_ahead, dtype=float))
        clips = (
            np.broadcast_to(np.asarray(each, dtype=float).reshape(-1), count)
            for each in (section.clip_in, section.clip_out)
        )
        kept = [
            clip if _varies(given) else None
            for given, clip in zip((section.clip_in, section.clip_out), clips, strict=True)
        ]
        return self._moved_row(row, count, gain, ahead, behind, *kept)

    def _net(
        self, index: int, count: int, answers: Mapping[str, StageSections]
    ) -> dict[int, MovedRow | None]:
        """A net's rows by the engine's own filler, and its drivers' clip points where they follow the load."""
        plan, net = self.plan, self.plan.layout.nets[index]
        owners = {stage for stage, _, _ in net.shape.drivers}
        sections = {int(plan.place[row]) for stage in owners for row in plan.layout.section_rows[stage]}
        nodes = {int(plan.place[row]) for row in (*net.by_driver.values(), *net.total.values())}
        rows = sorted(sections | nodes)
        compact = np.zeros(plan.graph.size, dtype=np.intp)
        compact[rows] = np.arange(1, len(rows) + 1)
        shape = (len(rows) + 1, count, plan.axis.size)
        sources = (plan.graph.emitting.size, 2, count, plan.axis.size)
        table = Table(
            np.ones(shape), np.zeros(shape), np.full(shape[:2], np.inf), np.full(shape[:2], np.inf), np.zeros(sources),
            [()] * (len(rows) + 1), {}, {},
        )  # fmt: skip
        place = compact[plan.place]
        for stage in owners:
            fill_stage(table, plan.layout, place, answers, stage, plan.axis)
        fill_net(table, plan.layout, net, place, plan.project, answers, plan.axis)
        fill_clip_by_load(table, plan.layout, net, place, plan.project, answers)
        found: dict[int, MovedRow | None] = {}
        for row in rows:
            at, now = int(compact[row]), plan.rows
            clips = (
                given if _differs(given[:, None], kept[row]) else None
                for given, kept in ((table.clip_in[at], now.clip_in), (table.clip_out[at], now.clip_out))
            )
            clip_in, clip_out = clips
            gain, noise = table.gain[at], table.noise[at]
            is_node = row in nodes and row not in sections
            if is_node and (_differs(gain, now.gain[row, 0]) or _differs(noise, now.noise[row, 0])):
                found[row] = self._moved_row(
                    row, count, gain, np.zeros((1, 1)), noise, clip_in, clip_out, in_net=True
                )
            elif clip_in is not None or clip_out is not None:
                still, own = now.gain[row, :1], now.noise[row, :1]
                found[row] = self._moved_row(row, count, still, np.zeros((1, 1)), own, clip_in, clip_out)
        return found

    def _moved_row(
        self, row: int, count: int, gain: Array, ahead: Array, behind: Array, clip_in: Array | None, clip_out: Array | None,
        *, in_net: bool = False,
    ) -> MovedRow | None:  # fmt: skip
        """A row at all positions; None where its gain is not one number of dB. `clip_*` is None where it stays."""
        plan, solution, margins = self.plan, self.outcome.solution, self.outcome.margins
        axis, now = plan.axis, plan.rows.gain[row, 0]
        parent = int(plan.graph.first_parent[row])
        before = solution.spectra[parent, PROGRAMME, 0] * axis.flat_weight
        if not (now * before).sum() > 0.0:
            return None
        with np.errstate(divide="ignore", invalid="ignore"):
            change = np.broadcast_to(10.0 * np.log10(gain / now), (gain.shape[0], axis.size))
        change = change[:, (now > 0.0) & (axis.flat_weight > 0.0)]
        on = ~np.isneginf(change).any(axis=1)
        edge = change.shape[1] // 8 if in_net else 0
        bend = np.ptp(change[on][:, edge : change.shape[1] - edge], axis=1)
        if np.any(bend > (FLAT_IN_NET_DB if in_net else FLAT_WITHIN_DB)):
            return None
        with np.errstate(divide="ignore"):
            gain_db = 10.0 * np.log10(
                np.broadcast_to(gain, (gain.shape[0], axis.size)) @ before / (now @ before)
            )
        peaks = solution.sums[:, PEAK, 0, FLAT]
        reach = self.weight[row]
        return MovedRow(
            row,
            np.broadcast_to(np.where(on, gain_db, -np.inf), count),
            _margin(
                clip_in,
                float(plan.rows.clip_in[row, 0]),
                float(margins.at_in_db[row, 0]),
                peaks[parent],
                count,
            ),
            _margin(
                clip_out,
                float(plan.rows.clip_out[row, 0]),
                float(margins.at_out_db[row, 0]),
                peaks[row],
                count,
            ),
            np.broadcast_to(np.broadcast_to(ahead, (ahead.shape[0], axis.size)) @ (now * reach), count),
            np.broadcast_to(np.broadcast_to(behind, (behind.shape[0], axis.size)) @ reach, count),
        )


def _margin(clip: Array | None, clip_now: float, margin_now: float, peak: float, count: int) -> Array:
    """Margins [position] at the present level."""
    if clip is None:
        return np.full(count, margin_now)
    with np.errstate(divide="ignore"):
        if np.isfinite(margin_now):
            return np.asarray(margin_now + 10.0 * np.log10(clip / clip_now))
        return np.asarray(10.0 * np.log10(clip / peak)) if peak > 0.0 else np.full(count, np.inf)


def _varies(number: object) -> bool:
    """Whether a number differs between positions."""
    array = np.asarray(number)
    return array.ndim == 2 and array.shape[0] > 1 and bool(np.any(array[1:] != array[0]))


def _moves(section: Active) -> bool:
    parts = (section.gain, section.clip_in, section.clip_out, section.noise_ahead, section.noise_behind)
    return any(_varies(part) for part in parts)


def _differs(there: Array, now: Array) -> bool:
    """Whether any position [position, F] is not the present one [F], by more than rounding."""
    with np.errstate(invalid="ignore"):
        near = np.abs(there - now) <= 1e-9 * np.abs(now)
    return bool(np.any(~(near | (there == now))))


def _comparable(answer: ActiveStage, now: StageSections) -> bool:
    """Whether positions differ in gain, noise and clip points alone."""
    assert isinstance(now, ActiveStage)
    sent = answer.emission
    if sent is not None and (_varies(sent.programme) or _varies(sent.peak_factor)):
        return False
    for section, before in zip(answer.sections, now.sections, strict=True):
        curve = section.dynamics
        if section.name != before.name or (curve is None) != (before.dynamics is None):
            return False
        if curve is not None and any(_varies(each) for each in (curve.threshold, curve.ratio, curve.make_up)):
            return False
    return True


__all__ = ["Hand", "Lever", "MovedRow", "find_levers"]
