"""The cable between an amplifier and a loudspeaker."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import Domain, Number, PassiveStage, StageSections, TwoPort, series
from engine.sections.conductors import COPPERS, loop_ohm

from .base import Port, Stage
from .declare import figure, option
from .declared import Values


class SpeakerLine(Stage):
    """Loop resistance in series with the loudspeaker."""

    title: ClassVar[str] = "Speaker line"
    family: ClassVar[str] = "Outputs"
    order: ClassVar[int] = 620
    domain: ClassVar[Domain] = Domain.ANALOGUE
    help: ClassVar[str] = "Its resistance costs level and damping: 0.3 dB is good, 1 dB noticeable."

    kind: Literal["speaker_line"] = "speaker_line"
    length_m: Figure = figure(
        "Length", "length", "20 m", help="One way, from amplifier to loudspeaker; there and back is counted."
    )
    area_mm2: Figure = figure("Cross-section", "area", "2.5 mm²", help="Of one conductor, in mm² or AWG.")
    loop_ohm: Figure | None = figure(
        "Loop resistance",
        "impedance",
        help="Measured, both conductors in series. Where given it stands in for length and cross-section.",
    )
    copper: Literal["0.0172 ohm mm²/m", "IEC 60228 class 1/2", "IEC 60228 class 5/6"] = option(
        "Copper", "0.0172 ohm mm²/m", choices=COPPERS,
        help="Handbook copper at 20 °C, or the largest resistance IEC 60228 allows for solid and stranded (1/2) or flexible (5/6).",
    )  # fmt: skip

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", self.domain),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", self.domain),)

    def resistance_ohm(self, values: Values) -> Number:
        """Both conductors together."""
        if "loop_ohm" in values:
            return values["loop_ohm"]
        return loop_ohm(values["length_m"], values["area_mm2"], self.copper)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        return PassiveStage({"in": series(np.asarray(self.resistance_ohm(values)))}, {"out": TwoPort()})

    def summary(self) -> str:
        return self.loop_ohm.text if self.loop_ohm else f"{self.length_m.text}, {self.area_mm2.text}"
