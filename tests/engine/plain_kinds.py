"""Bare stages for tests of the solver itself: a source, an amplifier and a resistive splitter with nothing hidden in them."""

from __future__ import annotations

from typing import Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.project import Link, Project
from engine.sections.base import (
    Active,
    ActiveStage,
    Domain,
    Emission,
    Input,
    Output,
    PassiveStage,
    StageSections,
    TwoPort,
    series,
    shunt,
)
from engine.stages import Port, Setting, Stage, Values
from engine.stages.declare import control, figure
from engine.units import BOLTZMANN_J_PER_K


class PlainSource(Stage):
    """A programme of equal band powers behind a noisy resistance."""

    kind: Literal["plain_source"] = "plain_source"
    emf_v: Figure = figure("EMF", "voltage", "1 V", help="Open-circuit voltage.")
    z_ohm: Figure = figure("Source impedance", "impedance", "150 ohm", help="Noisy.")

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        programme = axis.spread(np.full(31, 1.0 / 31.0)) * np.asarray(values["emf_v"]) ** 2
        noise = axis.white(4.0 * BOLTZMANN_J_PER_K * values["temperature_k"] * np.asarray(values["z_ohm"]))
        return ActiveStage(
            (Active("source", noise_behind=noise),),
            {},
            {"out": Output("source", values["z_ohm"])},
            Emission(programme, 10.0),
        )


class PlainAmplifier(Stage):
    """Gain with white noise ahead of it; several links may feed it."""

    kind: Literal["plain_amplifier"] = "plain_amplifier"
    z_in_ohm: Figure = figure("Input impedance", "impedance", "10 k", help="Noiseless.")
    z_out_ohm: Figure = figure("Output impedance", "impedance", "1 uohm", help="Noiseless.")
    noise_v: Figure = figure("Input noise, whole band", "voltage", "1 uV", help="White.")
    gain_db: Setting = control("Gain", "dB", -80.0, 80.0, 0.1, 0.0, help="Plain gain.")

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE, many=True),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        gain = 10.0 ** (np.asarray(values["gain_db"]) / 10.0)
        density = np.asarray(values["noise_v"]) ** 2 / axis.white_band_hz
        return ActiveStage(
            (
                Active("input", clip_in=100.0, noise_ahead=axis.white(density)),
                Active("gain", gain=gain, clip_out=1000.0),
            ),
            {"in": Input("input", values["z_in_ohm"])},
            {"out": Output("gain", values["z_out_ohm"])},
        )


class PlainSplitter(Stage):
    """A resistance in each of two legs."""

    kind: Literal["plain_splitter"] = "plain_splitter"
    leg_ohm: Figure = figure("Leg", "impedance", "50 ohm", help="In series with each output.")
    across_ohm: Figure = figure("Across", "impedance", "100 k", help="Across the input.")

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("a", Domain.ANALOGUE), Port("b", Domain.ANALOGUE))

    def sections(self, values: Values, axis: Axis) -> StageSections:
        leg = series(values["leg_ohm"])
        return PassiveStage({"in": shunt(values["across_ohm"])}, {"a": leg, "b": leg @ TwoPort()})


def source(id: str, column: int = 0, emf: str = "1 V", z: str = "150 ohm") -> PlainSource:
    return PlainSource(id=id, name=id, column=column, emf_v=Figure(text=emf), z_ohm=Figure(text=z))


def amplifier(
    id: str,
    column: int,
    gain_db: float = 0.0,
    *,
    noise: str = "1 uV",
    z_in: str = "10 k",
    z_out: str = "1 uohm",
    count: int = 1,
) -> PlainAmplifier:
    return PlainAmplifier(
        id=id, name=id, column=column, count=count, noise_v=Figure(text=noise), z_in_ohm=Figure(text=z_in),
        z_out_ohm=Figure(text=z_out), gain_db=Setting(value=gain_db),
    )  # fmt: skip


def project(stages: list[Stage], *ends: tuple[str, str]) -> Project:
    """A project of these stages; an end may name its output as "stage.port"."""
    links = []
    for start, end in ends:
        stage, _, port = start.partition(".")
        links.append(Link(id=f"{start}>{end}", source=stage, output=port or "out", target=end))
    return Project(stages=tuple(stages), links=tuple(links))
