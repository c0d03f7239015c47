"""An analogue-to-digital converter."""

from __future__ import annotations

from typing import ClassVar, Literal

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import ActiveStage, Domain, Input, Output, StageSections
from engine.sections.converters import analogue_to_digital, range_noise

from .base import Port, Stage
from .declare import figure
from .declared import Values


class AdConverter(Stage):
    """Volts in, full scale out. It clips at 0 dBFS."""

    title: ClassVar[str] = "A/D converter"
    family: ClassVar[str] = "Processing"
    order: ClassVar[int] = 440
    help: ClassVar[str] = (
        "An input card or stage-box input behind its preamplifier: the level at 0 dBFS and its dynamic range."
    )

    kind: Literal["ad_converter"] = "ad_converter"
    full_scale_v: Figure = figure(
        "Full scale", "full_scale", "+24 dBu",
        help="Input level of the sine that reaches 0 dBFS: +18 to +24 dBu. EBU R 68 has +18, SMPTE RP 155 +24.",
    )  # fmt: skip
    range_db: Figure = figure(
        "Dynamic range", "dynamic_range", "112 dB(A)", help="105 to 120 dB; sheets usually weight it with A."
    )
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="10 to 30 kohm is usual.")

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.DIGITAL),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        noise = range_noise(axis, values["range_db"], values.tag("range_db.weighting"))
        converter = analogue_to_digital("A/D", values["full_scale_v"], noise)
        return ActiveStage((converter,), {"in": Input("A/D", values["z_in_ohm"])}, {"out": Output("A/D")})

    def summary(self) -> str:
        return f"0 dBFS = {self.full_scale_v.text.split('=')[-1].strip()}"
