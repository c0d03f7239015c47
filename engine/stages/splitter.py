"""One output to several inputs."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import (
    Active,
    ActiveStage,
    Domain,
    Input,
    Output,
    PassiveStage,
    StageSections,
    TwoPort,
    ideal_transformer,
    series,
)
from engine.units import power_from_db

from .base import Port, Stage
from .declare import figure, option
from .declared import Values
from .shared import Form, form_option, stated_noise


class Splitter(Stage):
    """Parallel, resistive or transformer: passive, every load is felt in every branch. Active: none is."""

    title: ClassVar[str] = "Splitter"
    family: ClassVar[str] = "Lines"
    order: ClassVar[int] = 530
    help: ClassVar[str] = (
        "One signal to several places. Passive splits share the source's current: each load lowers all the levels."
    )

    kind: Literal["splitter"] = "splitter"
    leg_ohm: Figure = figure(
        "Resistance per leg",
        "impedance",
        "100 ohm",
        help="Resistive: in series with each output. Transformer: its winding resistance, primary side counted in.",
    )
    loss_db: Figure = figure(
        "Transformer loss",
        "loss",
        "0 dB",
        help="Of each isolated output into an open circuit: 20 log of its ratio; 0 dB for 1:1.",
    )
    gain_db: Figure = figure("Gain", "gain", "0 dB", help="Of each output of an active splitter.")
    max_v: Figure = figure(
        "Maximum level", "voltage", "+22 dBu", help="Of an active splitter, at its input and outputs."
    )
    noise: Figure | None = figure(
        "S/N or noise",
        "noise",
        "-100 dBu unweighted",
        references=("nominal", "max"),
        help="Of an active splitter, at each output.",
    )
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="Of an active splitter.")
    z_out_ohm: Figure = figure(
        "Output impedance", "impedance", "100 ohm", help="Of each output of an active splitter."
    )
    build: Literal["parallel", "resistive", "transformer", "active"] = option(
        "Build", "parallel", choices=("parallel", "resistive", "transformer", "active"),
        help="Parallel: just wired together. Transformer: the first output is direct, the others are isolated.",
    )  # fmt: skip
    ways: int = option("Outputs", 2, low=2, high=8, help="How many outputs it has.")
    form: Form = form_option()

    def in_use(self, name: str) -> bool:
        if name in ("gain_db", "max_v", "noise", "z_in_ohm", "z_out_ohm"):
            return self.build == "active"
        if name == "loss_db":
            return self.build == "transformer"
        return name != "leg_ohm" or self.build in ("resistive", "transformer")

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return tuple(
            Port(f"out_{n}" if n > 1 else "out", Domain.ANALOGUE, f"output {n}")
            for n in range(1, self.ways + 1)
        )

    def sections(self, values: Values, axis: Axis) -> StageSections:
        if self.build == "active":
            return self._active(values, axis)
        ports = [port.name for port in self.outputs()]
        bare = TwoPort()
        if self.build == "parallel":
            return PassiveStage({"in": bare}, dict.fromkeys(ports, bare))
        leg = series(np.asarray(values["leg_ohm"]))
        if self.build == "resistive":
            return PassiveStage({"in": bare}, dict.fromkeys(ports, leg))
        isolated = ideal_transformer(10.0 ** (np.asarray(values["loss_db"]) / 20.0)) @ leg
        return PassiveStage({"in": bare}, {ports[0]: bare, **dict.fromkeys(ports[1:], isolated)})

    def _active(self, values: Values, axis: Axis) -> ActiveStage:
        max2 = np.asarray(values["max_v"]) ** 2
        noise = stated_noise(axis, values, "noise", {"nominal": max2, "max": max2})
        names = {port.name: port.label for port in self.outputs()}
        each = tuple(
            Active(
                label,
                gain=power_from_db(values["gain_db"]),
                clip_out=max2,
                noise_behind=noise,
                after=("input",),
            )
            for label in names.values()
        )
        outputs = {port: Output(label, values["z_out_ohm"], self.form) for port, label in names.items()}
        return ActiveStage(
            (Active("input", clip_in=max2), *each), {"in": Input("input", values["z_in_ohm"])}, outputs
        )

    def summary(self) -> str:
        return f"{self.build}, {self.ways} ways"
