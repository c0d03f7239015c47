"""A compressor or limiter."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections import dynamics as curves
from engine.sections.base import NEVER, Active, ActiveStage, Input, Output, StageSections
from engine.units import power_from_db, v2_from_dbu

from .base import Port, Stage
from .declare import Setting, control, figure, option, switch
from .declared import Values
from .shared import Form, Signal, domain_of, form_option, marked_db, signal_option, stated_noise


class DynamicsProcessor(Stage):
    """A gain that depends on level, by its static curve: what a steady programme comes to."""

    title: ClassVar[str] = "Dynamics"
    family: ClassVar[str] = "Processing"
    order: ClassVar[int] = 420
    help: ClassVar[str] = (
        "Compressor: above the threshold the level rises by 1/ratio. Limiter: it does not rise at all."
    )

    kind: Literal["dynamics"] = "dynamics"
    max_v: Figure = figure(
        "Maximum level", "voltage", "+22 dBu", help="The largest clean sine, at its input and at its output."
    )
    noise: Figure | None = figure(
        "S/N or noise",
        "noise",
        "-90 dBu unweighted",
        references=("nominal", "max"),
        help="At its output, with unity gain and nothing compressed.",
    )
    nominal_v: Figure = figure(
        "Nominal level", "voltage", "+4 dBu", help="What an S/N without a maximum refers to."
    )
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="10 to 50 kohm is usual.")
    z_out_ohm: Figure = figure("Output impedance", "impedance", "100 ohm", help="50 to 600 ohm is usual.")
    form: Form = form_option()
    signal: Signal = signal_option()
    mode: Literal["compressor", "limiter"] = option(
        "Mode",
        "compressor",
        choices=("compressor", "limiter"),
        help="A limiter's ratio is infinite, whatever the ratio control says.",
    )
    detector: Literal["rms", "peak"] = option(
        "Detector",
        "rms",
        choices=("rms", "peak"),
        help="What is held against the threshold: the programme's rms, or its sine-scaled peak.",
    )
    threshold_db: Setting = control(
        "Threshold",
        "dBu or dBFS",
        -50.0,
        24.0,
        0.5,
        10.0,
        marking="number",
        help="In dBu, in a digital path in dBFS: the level from which on it acts.",
    )
    ratio: Setting = control(
        "Ratio",
        ": 1",
        1.0,
        20.0,
        0.5,
        4.0,
        marking="number",
        help="4 : 1 lets 10 dB more in come out as 2.5 dB more.",
    )
    make_up_db: Setting = control(
        "Make-up",
        "dB",
        -20.0,
        20.0,
        0.5,
        0.0,
        help="Gain behind the detector. It raises the noise ahead of it too.",
    )
    inserted: Setting = switch(
        "In circuit", off="bypassed", on="in", help="Bypassed, the level passes unchanged.", typical=True
    )

    def in_use(self, name: str) -> bool:
        return name != "ratio" or self.mode == "compressor"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", domain_of(self.signal)),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", domain_of(self.signal)),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        is_digital = self.signal == "digital"
        max2 = np.asarray(values["max_v"]) ** 2
        clip = NEVER if is_digital else max2
        references = {"nominal": np.asarray(values["nominal_v"]) ** 2, "max": max2}
        noise = 0.0 if is_digital else stated_noise(axis, values, "noise", references)
        to_power = power_from_db if is_digital else v2_from_dbu
        threshold, make_up = to_power(values["threshold_db"]), power_from_db(values["make_up_db"])
        if self.mode == "limiter" and self.detector == "peak":
            curve = curves.peak_limiter(threshold, values["inserted"])
            behind = np.where(np.asarray(values["inserted"]) > 0.5, make_up, 1.0)
        else:
            ratio = values["ratio"] if self.mode == "compressor" else NEVER
            curve = curves.compressor(threshold, ratio, make_up, values["inserted"], detector=self.detector)
            behind = np.ones(1)
        return ActiveStage(
            (
                Active("detector", clip_in=clip, dynamics=curve),
                Active("output", gain=behind, clip_out=clip, noise_behind=noise),
            ),
            {"in": Input("detector", values["z_in_ohm"])},
            {"out": Output("output", values["z_out_ohm"], self.form)},
        )

    def summary(self) -> str:
        if not self.inserted.value:
            return "bypassed"
        ratio = f", {self.ratio.value:g} : 1" if self.mode == "compressor" else ""
        return f"{marked_db(self.threshold_db)}{ratio}"
