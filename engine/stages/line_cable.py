"""A line or microphone cable."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import Domain, PassiveStage, StageSections, TwoPort, spread_line

from .base import Port, Stage
from .declare import figure
from .declared import Values


class LineCable(Stage):
    """Loop resistance and capacitance, spread evenly along the cable."""

    title: ClassVar[str] = "Line cable"
    family: ClassVar[str] = "Lines"
    order: ClassVar[int] = 520
    domain: ClassVar[Domain] = Domain.ANALOGUE
    help: ClassVar[str] = (
        "Its capacitance against the source impedance takes the top off long lines; its resistance costs next to nothing."
    )

    kind: Literal["line_cable"] = "line_cable"
    length_m: Figure = figure("Length", "length", "30 m", help="From output to input.")
    capacitance_f_per_m: Figure = figure(
        "Capacitance",
        "capacitance_per_length",
        "100 pF/m",
        help="Between the conductors: 50 to 150 pF/m, network cable about 50.",
    )
    resistance_ohm_per_m: Figure = figure(
        "Resistance", "resistance_per_length", "160 ohm/km loop",
        help="Of both conductors together (loop) or of one: 0.22 mm² has about 80 ohm/km each. Say which.",
    )  # fmt: skip

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", self.domain),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", self.domain),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        both = 2.0 if values.tag("resistance_ohm_per_m.reference") == "one-way" else 1.0
        ohm = np.asarray(values["resistance_ohm_per_m"]) * values["length_m"] * both
        farad = np.asarray(values["capacitance_f_per_m"]) * values["length_m"]
        return PassiveStage({"in": spread_line(ohm, 2j * np.pi * axis.f_hz * farad)}, {"out": TwoPort()})

    def summary(self) -> str:
        return self.length_m.text
