"""A microphone."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.attenuator import is_on
from engine.sections.base import NEVER, Active, ActiveStage, Domain, Input, Number, Output, StageSections
from engine.sections.noise import thermal, white_total
from engine.units import pa2_from_spl, power_from_db

from .base import Port, Stage
from .declare import Setting, figure, switch
from .declared import Values
from .shared import Form, form_option


class Microphone(Stage):
    """Sound pressure to volts: sensitivity, self-noise, and a level it can take."""

    title: ClassVar[str] = "Microphone"
    family: ClassVar[str] = "Inputs"
    order: ClassVar[int] = 210
    help: ClassVar[str] = (
        "Turns sound into a small voltage. With no self-noise given it has the thermal noise of its own impedance."
    )

    kind: Literal["microphone"] = "microphone"
    sensitivity_v_per_pa: Figure = figure(
        "Sensitivity", "mic_sensitivity", "2 mV/Pa",
        help="Open-circuit output at 1 Pa (94 dB SPL). Dynamic 1 to 3 mV/Pa, condenser 5 to 50. Older sheets give dB re 1 V/µbar.",
    )  # fmt: skip
    z_ohm: Figure = figure(
        "Source impedance", "impedance", "200 ohm", help="As its sheet gives it; 50 to 300 ohm is usual."
    )
    self_noise_spl: Figure | None = figure(
        "Self-noise", "self_noise",
        help="Equivalent sound level of its own noise, usually in dB(A): 5 to 25. Sheets may give S/N instead: 94 less that. "
        "A dynamic microphone has none stated.",
    )  # fmt: skip
    max_spl: Figure | None = figure(
        "Maximum level",
        "spl",
        help="The largest sine it takes at the distortion its sheet names, with no pad: 120 to 150 dB SPL.",
    )
    pad_db: Figure | None = figure(
        "Pad loss", "loss", help="Of a pad inside the microphone, ahead of its electronics; 10 or 20 dB."
    )
    form: Form = form_option("transformer")
    pad: Setting = switch(
        "Pad",
        help="Whether the microphone's own pad is in. It raises the level it can take; its noise stays.",
    )

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ACOUSTIC, many=True),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        volts2_per_pa2 = np.asarray(values["sensitivity_v_per_pa"], dtype=float) ** 2
        padded = np.where(is_on(values["pad"]), power_from_db(values.get("pad_db", 0.0)), 1.0)
        noise: Number
        if "self_noise_spl" in values:
            pressure2 = pa2_from_spl(values["self_noise_spl"])
            noise = white_total(axis, pressure2, values.tag("self_noise_spl.weighting")) * volts2_per_pa2
        else:
            noise = thermal(axis, values["z_ohm"], values["temperature_k"])
        capsule = Active(
            "capsule", gain=volts2_per_pa2 / padded, noise_behind=noise, domain=Domain.ANALOGUE,
            clip_in=pa2_from_spl(values["max_spl"]) * padded if "max_spl" in values else NEVER,
        )  # fmt: skip
        return ActiveStage(
            (capsule,), {"in": Input("capsule")}, {"out": Output("capsule", values["z_ohm"], self.form)}
        )

    def summary(self) -> str:
        return self.sensitivity_v_per_pa.text
