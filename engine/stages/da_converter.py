"""A digital-to-analogue converter."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.attenuator import chosen
from engine.sections.base import Active, ActiveStage, Domain, Input, Output, StageSections
from engine.sections.converters import digital_to_analogue, range_noise
from engine.units import power_from_db

from .base import Port, Stage
from .declare import Setting, control, figure
from .declared import Values
from .shared import Form, drop_choices, form_option, numbered


class DaConverter(Stage):
    """Full scale in, volts out, and an analogue range switch behind it where it has one."""

    title: ClassVar[str] = "D/A converter"
    family: ClassVar[str] = "Processing"
    order: ClassVar[int] = 450
    domain: ClassVar[Domain] = Domain.DIGITAL
    help: ClassVar[str] = "An output card: the level at 0 dBFS, its dynamic range, its output impedance."

    kind: Literal["da_converter"] = "da_converter"
    full_scale_v: Figure = figure(
        "Full scale", "full_scale", "+24 dBu", help="Output level of a sine at 0 dBFS: +18 to +24 dBu."
    )
    range_db: Figure = figure(
        "Dynamic range", "dynamic_range", "112 dB(A)", help="105 to 120 dB; sheets usually weight it with A."
    )
    z_out_ohm: Figure = figure("Output impedance", "impedance", "100 ohm", help="50 to 200 ohm is usual.")
    lower_by_db: tuple[Figure, ...] = figure(
        "Range switch drops",
        "loss",
        many=True,
        help="Where it has an analogue output range switch: how far each other position lies under full.",
    )
    form: Form = form_option()
    output_range: Setting = control(
        "Output range",
        "",
        help="Analogue: it lowers level, clip point and the converter's noise together.",
        marking="switch",
    )

    def control_choices(self, name: str) -> tuple[tuple[str, float], ...]:
        return (
            drop_choices("full", self.lower_by_db)
            if name == "output_range"
            else super().control_choices(name)
        )

    def in_use(self, name: str) -> bool:
        return name != "output_range" or bool(self.lower_by_db)

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.DIGITAL),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        noise = range_noise(axis, values["range_db"], values.tag("range_db.weighting"))
        drop_db = chosen(values.get("output_range", 0.0), [0.0, *numbered(values, "lower_by_db")])
        switch = Active("output range", gain=power_from_db(-np.asarray(drop_db)), domain=Domain.ANALOGUE)
        return ActiveStage(
            (digital_to_analogue("D/A", values["full_scale_v"], noise), switch),
            {"in": Input("D/A")},
            {"out": Output("output range", values["z_out_ohm"], self.form)},
        )

    def summary(self) -> str:
        return f"0 dBFS = {self.full_scale_v.text.split('=')[-1].strip()}"
