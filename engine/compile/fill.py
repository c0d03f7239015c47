"""Write a project's numbers into its rows: a stage's, a net's, an acoustic link's, or all of them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

import numpy as np

from engine.bands import Axis
from engine.figures import parse
from engine.graph import Graph, Index
from engine.project import Link, Project
from engine.rows import Array, NoisePart, Origin, Rows
from engine.sections.base import NEVER, ActiveStage, Domain, Dynamics, Output, PassiveStage, StageSections
from engine.sections.curves import clip_at_load
from engine.sections.net import Edge
from engine.sections.thermal import Thermal
from engine.stages import Values

from .layout import Layout, NetRows

TONE = -1  # the test tone's place on the axis


@dataclass
class Table:
    """Rows while they are written."""

    gain: Array
    noise: Array
    clip_in: Array
    clip_out: Array
    emitted: Array
    parts: list[tuple[NoisePart, ...]]
    dynamics: dict[int, Dynamics]
    clip_weight: dict[int, Array]

    @classmethod
    def empty(cls, graph: Graph, batch: int, axis: Axis) -> Table:
        shape = (graph.size, batch, axis.size)
        return cls(
            np.ones(shape), np.zeros(shape), np.full(shape[:2], NEVER), np.full(shape[:2], NEVER),
            np.zeros((graph.emitting.size, 2, batch, axis.size)), [()] * graph.size, {}, {},
        )  # fmt: skip

    @classmethod
    def copied(cls, rows: Rows) -> Table:
        return cls(
            rows.gain.copy(), rows.noise.copy(), rows.clip_in.copy(), rows.clip_out.copy(), rows.emitted.copy(),
            list(rows.parts), dict(rows.dynamics), dict(rows.clip_weight),
        )  # fmt: skip

    def rows(self) -> Rows:
        for array in (self.gain, self.noise, self.clip_in, self.clip_out, self.emitted):
            array.setflags(write=False)
        return Rows(
            self.gain,
            self.noise,
            self.clip_in,
            self.clip_out,
            self.emitted,
            tuple(self.parts),
            self.dynamics,
            self.clip_weight,
        )

    def put_noise(self, row: int, parts: Iterable[tuple[Origin, object]]) -> None:
        """Write a row's noise and tell it apart by origin."""
        self.noise[row] = 0.0
        kept = []
        for origin, power in parts:
            given = np.asarray(power, dtype=float)
            if given.any():
                spectrum = np.broadcast_to(given, self.noise[row].shape)
                self.noise[row] += spectrum
                kept.append(NoisePart(origin, spectrum))
        self.parts[row] = tuple(kept)


def fill_stage(
    table: Table, layout: Layout, place: Index, answers: Mapping[str, StageSections], key: str, axis: Axis
) -> None:
    """Write an active stage's sections; a passive stage's numbers are its net's."""
    answer = answers[key]
    if isinstance(answer, PassiveStage):
        return
    for section, drafted in zip(answer.sections, layout.section_rows[key], strict=True):
        row = int(place[drafted])
        table.gain[row] = section.gain
        table.clip_in[row] = _per_setting(section.clip_in)
        table.clip_out[row] = _per_setting(section.clip_out)
        ahead, behind = np.asarray(section.noise_ahead), np.asarray(section.noise_behind)
        table.put_noise(
            row,
            (
                (Origin(key, f"{section.name} input"), ahead * section.gain),
                (Origin(key, section.name), behind),
            ),
        )
        if section.dynamics is not None:
            table.dynamics[row] = section.dynamics
        table.clip_weight.pop(row, None)
        if section.clip_weight is not None:
            table.clip_weight[row] = section.clip_weight
    if answer.emission is not None:
        source = [stage for stage, _ in layout.emitting].index(key)
        table.emitted[source, 0] = answer.emission.programme
        peak = np.broadcast_to(
            np.asarray(answer.emission.programme) * answer.emission.peak_factor,
            table.emitted[source, 1].shape,
        )
        table.emitted[source, 1] = peak
        # The test tone is a sine: its sine-scaled peak is its level.
        table.emitted[source, 1, :, TONE] = table.emitted[source, 0, :, TONE]


def fill_net(
    table: Table, layout: Layout, net: NetRows, place: Index, project: Project,
    answers: Mapping[str, StageSections], axis: Axis,
) -> None:  # fmt: skip
    """Write a net's transfers from each driver to each node, and its thermal noise at each node and between nodes."""
    solved = net.shape.with_numbers(answers, project.header.temperature_k)
    thermal = Thermal(solved, net.shape.group, layout.draft.group_size)
    noisy = [edge for edge in solved.edges if edge.owner is not None and _dissipates(edge)]
    for node, drafted in net.total.items():
        for place_, (stage, port, _) in enumerate(net.shape.drivers):
            row = int(place[net.by_driver[place_, node]])
            table.gain[row] = np.abs(np.asarray(solved.transfer(place_, node))) ** 2
            table.clip_out[row] = _clip_behind_link(net, answers, stage, port, node, table.gain[row])
        parts = ((Origin(str(edge.owner), "thermal"), thermal.v2_per_hz(edge, node, node)) for edge in noisy)
        table.put_noise(int(place[drafted]), ((origin, np.asarray(d) * axis.width_hz) for origin, d in parts))
    for pair, one, other, unlike in net.pairs:
        parts = (
            (Origin(str(edge.owner), "thermal"), thermal.v2_per_hz(edge, one, other, unlike=unlike))
            for edge in noisy
        )
        table.put_noise(int(place[pair]), ((origin, np.asarray(d) * axis.width_hz) for origin, d in parts))


def fill_clip_by_load(
    table: Table,
    layout: Layout,
    net: NetRows,
    place: Index,
    project: Project,
    answers: Mapping[str, StageSections],
) -> None:
    """Write the clip points of outputs that are rated at several loads, for the load their net turns out to be.

    Ratings hold at the terminals, the section's clip point ahead of the output's own impedance.
    """
    rated = [d for d in enumerate(net.shape.drivers) if _output(answers, d[1][0], d[1][1]).clip_by_load]
    if not rated:
        return
    solved = net.shape.with_numbers(answers, project.header.temperature_k)
    for index, (stage, port, node) in rated:
        answer, output = answers[stage], _output(answers, stage, port)
        assert isinstance(answer, ActiveStage)
        admittance = np.atleast_2d(np.asarray(solved.at(node, without=index)))[:, TONE, None]
        clip_v2 = clip_at_load(admittance, output.clip_by_load)
        clip_v2 = clip_v2 * np.abs(1.0 + output.z_ohm * admittance) ** 2
        names = [section.name for section in answer.sections]
        row = int(place[layout.section_rows[stage][names.index(output.section)]])
        table.clip_out[row] = _per_setting(clip_v2)


def _output(answers: Mapping[str, StageSections], stage: str, port: str) -> Output:
    answer = answers[stage]
    assert isinstance(answer, ActiveStage)
    return answer.outputs[port]


def _dissipates(edge: Edge) -> bool:
    return any(np.any(np.asarray(term) != 0.0) for term in (edge.two_port.b, edge.two_port.c))


def _clip_behind_link(
    net: NetRows, answers: Mapping[str, StageSections], stage: str, port: str, node: object, gain: Array
) -> Array | float:
    """The clip point at a node whose link lowers the driver's: half the swing for the same level."""
    scale = net.shape.clip_scale.get(node)
    if scale is None:
        return NEVER
    answer = answers[stage]
    assert isinstance(answer, ActiveStage)
    return np.asarray(_own_clip(answer, answer.outputs[port].section) * gain[:, TONE] * scale)


def _own_clip(answer: ActiveStage, output: str) -> Array | float:
    """A stage's clip point at one of its sections' outputs: its own, or that of a section ahead times the gain behind it."""
    by_name = {section.name: section for section in answer.sections}
    before = dict(zip([*by_name][1:], by_name, strict=False))
    section = by_name[output]
    own = np.asarray(_per_setting(section.clip_out))
    ahead = section.after[0] if section.after else before.get(output)
    carried = np.minimum(_per_setting(section.clip_in), NEVER if ahead is None else _own_clip(answer, ahead))
    gain = np.asarray(section.gain)
    at_tone = gain[..., TONE] if gain.ndim and gain.shape[-1] > 1 else _per_setting(gain)
    behind = np.where(
        np.asarray(at_tone) > 0.0, np.where(np.isfinite(carried), carried, 0.0) * at_tone, NEVER
    )
    return np.asarray(np.where(np.isfinite(own), own, np.where(np.isfinite(carried), behind, NEVER)))


def fill_arrivals(
    table: Table, layout: Layout, place: Index, project: Project, answers: Mapping[str, StageSections], axis: Axis,
    links: Iterable[Link], overrides: Mapping[str, Values],
) -> None:  # fmt: skip
    """Write the acoustic links: what reaches a microphone or a seat of what a source or loudspeaker sends out."""
    air = {
        "temperature_k": project.header.temperature_k,
        "humidity_percent": parse(project.header.humidity_percent.text, "percent").amount,
        "air_counts": float(project.header.air == "counted"),
    }
    for link in links:
        if link.id not in layout.arrival_rows:
            continue
        source, target = answers[link.source], project.stage[link.target]
        assert isinstance(source, ActiveStage)
        given = overrides.get(link.id) or link.values()
        target_values = overrides.get(link.target) or target.values()
        output = source.outputs[link.output]
        heard = given.replaced({**air, "directivity_q": output.directivity_q})
        table.gain[int(place[layout.arrival_rows[link.id]])] = target.arrival(
            target_values, heard, output.reference_m, axis
        )


def fill_pairs(table: Table, graph: Graph) -> None:
    """Write the covariance rows' gains: the amplitude gain of the row each follows, or its power gain for two alike."""
    followed = table.gain[graph.pair_of]
    table.gain[graph.pair_rows] = np.where(graph.pair_power[:, None, None], followed, np.sqrt(followed))


def _per_setting(level: object) -> Array | float:
    """A clip level [batch, 1] or float as [batch] or float."""
    array = np.asarray(level, dtype=float)
    return array[..., 0] if array.ndim == 2 else float(array)


__all__ = ["Domain", "Table", "fill_arrivals", "fill_clip_by_load", "fill_net", "fill_pairs", "fill_stage"]
