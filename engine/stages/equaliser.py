"""A stand-alone equaliser, parametric and graphic."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np
from numpy.typing import NDArray

from engine.bands import BAND_MID_HZ, Axis
from engine.figures import Figure
from engine.sections import filters
from engine.sections.attenuator import is_on, position_gain
from engine.sections.base import Active, ActiveStage, Input, Output, StageSections

from .base import Port, Stage
from .declare import Setting, control, figure, switch
from .declared import Values
from .parametric import Parametric
from .shared import (
    ANALOGUE_ONLY,
    Electrical,
    Form,
    Signal,
    domain_of,
    form_option,
    marked_db,
    nominal_above_maximum,
    numbered,
    signal_option,
    stated_noise,
)

#: How many graphic gains may be given: their mid-frequencies and the bells' Q, so that neighbours meet at half their dB.
GRAPHICS = {31: (BAND_MID_HZ, 4.318), 10: (BAND_MID_HZ[2::3], 1.414)}


class Equaliser(Parametric, Stage):
    """Filters with their true magnitude. Boost lowers the usable ceiling where it boosts."""

    title: ClassVar[str] = "Equaliser"
    family: ClassVar[str] = "Processing"
    order: ClassVar[int] = 410
    help: ClassVar[str] = "Two shelves, four bells, high-pass and low-pass, and a graphic set if it has one."

    kind: Literal["equaliser"] = "equaliser"
    graphic_db: tuple[Figure, ...] = figure(
        "Graphic gains", "level_db", many=True,
        help="31 gains from 20 Hz in third-octaves, or 10 from 31.5 Hz in octaves. Leave empty where it has no graphic set.",
    )  # fmt: skip
    max_v: Figure = figure(
        "Maximum level", "voltage", "+22 dBu", help="The largest clean sine, at its input and at its output."
    )
    noise: Figure | None = figure(
        "S/N or noise", "noise", "-90 dBu unweighted", references=("nominal", "max"),
        help="With every gain flat. It stands ahead of the filters here: boost raises it.",
    )  # fmt: skip
    nominal_v: Figure = figure(
        "Nominal level", "voltage", "+4 dBu", help="What an S/N without a maximum refers to."
    )
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="10 to 50 kohm is usual.")
    z_out_ohm: Figure = figure("Output impedance", "impedance", "100 ohm", help="50 to 600 ohm is usual.")
    form: Form = form_option()
    signal: Signal = signal_option()
    bypass: Setting = switch(
        "Bypass", off="off", on="bypassed", help="Takes all filters out; the level control stays."
    )
    level_db: Setting = control(
        "Level", "dB", -40.0, 12.0, 0.5, 0.0, help="Output level, behind the filters.", off_at_low=True
    )

    def in_use(self, name: str) -> bool:
        return name not in ANALOGUE_ONLY or self.signal == "analogue"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", domain_of(self.signal)),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", domain_of(self.signal)),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        own = Electrical.of(values, "max_v")
        clip = own.clip_v2
        noise = stated_noise(axis, values, "noise", own.references_v2)
        curve = self.equaliser(values, axis) * self._graphic(values, axis)
        return ActiveStage(
            (
                Active(
                    "filters",
                    gain=np.where(is_on(values["bypass"]), 1.0, curve),
                    clip_in=clip,
                    clip_out=clip,
                    noise_ahead=noise,
                ),
                Active("level", gain=position_gain(values["level_db"]), clip_out=clip),
            ),
            {"in": Input("filters", own.z_in_ohm)},
            {"out": Output("level", own.z_out_ohm, self.form)},
        )

    def _graphic(self, values: Values, axis: Axis) -> NDArray[np.float64]:
        gains = numbered(values, "graphic_db")
        found = np.ones(axis.size)
        if gains:
            mids, q = GRAPHICS[len(gains)]
            for mid, gain in zip(mids, gains, strict=True):
                found = found * filters.bell(axis.f_hz, float(mid), gain, q)
        return found

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        yield from nominal_above_maximum(self.name, values, "max_v")
        count = len(self.graphic_db)
        if count and count not in GRAPHICS:
            yield f"Graphic gains of {self.name} are {count}: give 31 or 10"

    def summary(self) -> str:
        return "bypassed" if self.bypass.value else marked_db(self.level_db)
