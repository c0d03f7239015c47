"""A direct box, or a transformer in a line."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.attenuator import is_on
from engine.sections.base import Active, ActiveStage, Domain, Input, Output, StageSections
from engine.sections.noise import thermal
from engine.units import power_from_db

from .base import Port, Stage
from .declare import Setting, figure, option, switch
from .declared import Values
from .shared import Form, form_option, stated_noise


class DirectBox(Stage):
    """Steps a line down to microphone level, or isolates it. A transformer's largest level falls 6 dB per octave.

    The core saturates by flux, which is voltage over frequency: L_max(f) = L_max(f0) + 20 log10(f / f0), so a level
    given at a low frequency leaves far more room above it.
    """

    title: ClassVar[str] = "Direct box, transformer"
    family: ClassVar[str] = "Inputs"
    order: ClassVar[int] = 220
    help: ClassVar[str] = "Unbalanced to balanced, instrument to microphone level, or 1:1 isolation."

    kind: Literal["direct_box"] = "direct_box"
    loss_db: Figure = figure(
        "Loss",
        "loss",
        "21.6 dB",
        help="Into an open output: 20 log of the turns ratio. 12:1 is 21.6 dB, an isolation transformer 0 to 1 dB.",
    )
    pad_db: Figure | None = figure(
        "Pad loss", "loss", "20 dB", help="Of the switch ahead of it, for loudspeaker and hot line levels."
    )
    max_level_v: Figure = figure(
        "Maximum level", "voltage_at_frequency", "+19 dBu @ 20 Hz",
        help="Largest sine at its input, and the frequency it is given at: below that it falls 6 dB per octave.",
    )  # fmt: skip
    z_in_ohm: Figure = figure(
        "Input impedance",
        "impedance",
        "140 k",
        help="With a microphone input behind it: 50 to 250 kohm passive, 1 Mohm active.",
    )
    z_out_ohm: Figure = figure(
        "Output impedance", "impedance", "150 ohm", help="With its usual source ahead of it."
    )
    noise: Figure | None = figure(
        "S/N or noise",
        "noise",
        references=("nominal", "max"),
        help="Of an active one, at its output. Passive: thermal noise of its output impedance.",
    )
    build: Literal["transformer", "active"] = option(
        "Build",
        "transformer",
        choices=("transformer", "active"),
        help="Active: no saturation at low frequencies.",
    )
    form: Form = form_option("transformer")
    pad: Setting = switch("Pad", help="Whether the pad is in. It raises the level the box can take.")

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        padded = np.where(is_on(values["pad"]), power_from_db(values.get("pad_db", 0.0)), 1.0)
        max2 = np.asarray(values["max_level_v"]) ** 2
        rated_hz = np.asarray(values.get("max_level_v.frequency_hz", 20.0))
        flux = (rated_hz / axis.f_hz) ** 2
        own = thermal(axis, values["z_out_ohm"], values["temperature_k"])
        box = Active(
            "box", gain=power_from_db(-np.asarray(values["loss_db"])) / padded, clip_in=max2 * padded,
            noise_behind=stated_noise(axis, values, "noise", {"max": max2, "nominal": max2}, otherwise=own),
            clip_weight=flux if self.build == "transformer" else None,
        )  # fmt: skip
        return ActiveStage(
            (box,),
            {"in": Input("box", values["z_in_ohm"])},
            {"out": Output("box", values["z_out_ohm"], self.form)},
        )

    def summary(self) -> str:
        return f"−{self.loss_db.text}" + (", pad in" if self.pad.value else "")
