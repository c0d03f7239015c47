"""Several outputs to one input."""

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
    series,
)
from engine.units import power_from_db

from .base import Port, Stage
from .declare import figure, option
from .declared import Values
from .shared import Form, form_option, stated_noise


class Combiner(Stage):
    """Passive: a resistance in each leg to a common point, so each source loads the others. Active: a summing amplifier."""

    title: ClassVar[str] = "Combiner"
    family: ClassVar[str] = "Lines"
    order: ClassVar[int] = 540
    help: ClassVar[str] = "Sums several lines. A passive one with two equal legs loses about 6 dB."

    kind: Literal["combiner"] = "combiner"
    leg_ohm: Figure = figure(
        "Resistance per leg", "impedance", "1 k", help="In series with each source: 470 ohm to 10 kohm."
    )
    gain_db: Figure = figure("Gain", "gain", "0 dB", help="Of an active combiner, from each input.")
    max_v: Figure = figure(
        "Maximum level", "voltage", "+22 dBu", help="Of an active combiner, at its output."
    )
    noise: Figure | None = figure(
        "S/N or noise",
        "noise",
        "-95 dBu unweighted",
        references=("nominal", "max"),
        help="Of an active combiner, at its output.",
    )
    z_in_ohm: Figure = figure(
        "Input impedance", "impedance", "20 k", help="Of each input of an active combiner."
    )
    z_out_ohm: Figure = figure("Output impedance", "impedance", "100 ohm", help="Of an active combiner.")
    build: Literal["resistive", "active"] = option(
        "Build", "resistive", choices=("resistive", "active"), help="Resistive: no supply, with loss."
    )
    form: Form = form_option()

    def in_use(self, name: str) -> bool:
        if name in ("gain_db", "max_v", "noise", "z_in_ohm", "z_out_ohm"):
            return self.build == "active"
        return name != "leg_ohm" or self.build == "resistive"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE, many=True),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        if self.build == "resistive":
            return PassiveStage({"in": series(np.asarray(values["leg_ohm"]))}, {"out": TwoPort()})
        max2 = np.asarray(values["max_v"]) ** 2
        noise = stated_noise(axis, values, "noise", {"nominal": max2, "max": max2})
        total = Active("sum", gain=power_from_db(values["gain_db"]), clip_out=max2, noise_behind=noise)
        return ActiveStage(
            (total,),
            {"in": Input("sum", values["z_in_ohm"])},
            {"out": Output("sum", values["z_out_ohm"], self.form)},
        )

    def summary(self) -> str:
        return self.leg_ohm.text if self.build == "resistive" else "active"
