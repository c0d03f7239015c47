"""A compressor or limiter."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections import dynamics as curves
from engine.sections.base import NEVER, Active, ActiveStage, Input, Number, Output, StageSections
from engine.units import power_from_db, v2_from_dbu

from .base import Limiter, Port, Stage
from .declare import Setting, control, figure, option, switch
from .declared import Values
from .shared import (
    ANALOGUE_ONLY,
    Electrical,
    Form,
    Signal,
    domain_of,
    form_option,
    marked_db,
    nominal_above_maximum,
    signal_option,
    stated_noise,
)


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
    threshold_dbu: Setting = control(
        "Threshold", "dBu", -50.0, 24.0, 0.5, 10.0, marking="number", help="The level from which on it acts."
    )
    threshold_dbfs: Setting = control(
        "Threshold",
        "dBFS",
        -60.0,
        0.0,
        0.5,
        -14.0,
        marking="number",
        help="The level from which on it acts, in a digital path.",
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
        if name in ("threshold_dbu", "threshold_dbfs"):
            return name == ("threshold_dbfs" if self.signal == "digital" else "threshold_dbu")
        if name in ANALOGUE_ONLY:
            return self.signal == "analogue"
        return name != "ratio" or self.mode == "compressor"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", domain_of(self.signal)),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", domain_of(self.signal)),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        own = Electrical.of(values, "max_v")
        noise = stated_noise(axis, values, "noise", own.references_v2)
        make_up = power_from_db(values["make_up_db"])
        threshold = self._threshold(values)
        if self.mode == "limiter" and self.detector == "peak":
            curve = curves.peak_limiter(threshold, values["inserted"])
            behind = np.where(np.asarray(values["inserted"]) > 0.5, make_up, 1.0)
        else:
            ratio = values["ratio"] if self.mode == "compressor" else NEVER
            curve = curves.compressor(threshold, ratio, make_up, values["inserted"], detector=self.detector)
            behind = np.ones(1)
        return ActiveStage(
            (
                Active("detector", clip_in=own.clip_v2, dynamics=curve),
                Active("output", gain=behind, clip_out=own.clip_v2, noise_behind=noise),
            ),
            {"in": Input("detector", own.z_in_ohm)},
            {"out": Output("output", own.z_out_ohm, self.form)},
        )

    def _threshold(self, values: Values) -> Number:
        """In V², or in full scale²."""
        if self.signal == "digital":
            return np.asarray(power_from_db(values["threshold_dbfs"]))
        return np.asarray(v2_from_dbu(values["threshold_dbu"]))

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        yield from nominal_above_maximum(self.name, values, "max_v")

    def limiters(self) -> tuple[Limiter, ...]:
        if self.mode != "limiter":
            return ()
        digital = self.signal == "digital"
        control_name, unit = ("threshold_dbfs", "dBFS") if digital else ("threshold_dbu", "dBu")
        return (Limiter("detector", control_name, self.detector, unit, self.inserted.value == 1.0),)

    def summary(self) -> str:
        if not self.inserted.value:
            return "bypassed"
        ratio = f", {self.ratio.value:g} : 1" if self.mode == "compressor" else ""
        at = (self.threshold_dbfs, "dBFS") if self.signal == "digital" else (self.threshold_dbu, "dBu")
        return f"{marked_db(at[0], at[1])}{ratio}"
