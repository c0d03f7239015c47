"""A loudspeaker with its amplifier inside."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.attenuator import chosen, position_gain
from engine.sections.base import NEVER, Active, ActiveStage, Domain, Input, Number, Output, StageSections
from engine.sections.noise import white_total
from engine.units import pa2_from_spl, power_from_db

from .base import Port, Stage
from .declare import Setting, control, figure
from .declared import Values
from .shared import drop_choices, marked_db, numbered


class PoweredLoudspeaker(Stage):
    """Line level in, sound pressure at 1 m out."""

    title: ClassVar[str] = "Powered loudspeaker"
    family: ClassVar[str] = "Outputs"
    order: ClassVar[int] = 650
    help: ClassVar[str] = "Known by the input that drives it to its full level, that level, and its hiss."

    kind: Literal["powered_loudspeaker"] = "powered_loudspeaker"
    sensitivity_v: Figure = figure(
        "Input for full level",
        "sensitivity",
        "+4 dBu",
        help="With level control and range switch at full: 0 to +10 dBu is usual.",
    )
    max_spl: Figure = figure(
        "Maximum level", "spl", "122 dB SPL",
        help="The largest sine, rms, at 1 m on axis in free field. "
        "A peak level stands 3 dB higher, a calculated one more; half-space adds up to 6.",
    )  # fmt: skip
    max_input_v: Figure | None = figure(
        "Maximum input", "voltage", "+20 dBu", help="What the input stage takes ahead of the level control."
    )
    noise_spl: Figure | None = figure(
        "Self-noise",
        "self_noise",
        "25 dB(A)",
        help="Its own hiss at 1 m, dB(A): 15 to 35. It stands behind the level control.",
    )
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="10 to 50 kohm is usual.")
    lower_by_db: tuple[Figure, ...] = figure(
        "Range switch drops",
        "loss",
        many=True,
        help="Less sensitive positions of an input range switch: how far each lies under the most sensitive.",
    )
    directivity_q: Figure = figure(
        "Directivity factor", "directivity", "Q 10", help="1 is all round, 10 a box with a horn."
    )
    lowest_db: Figure = figure("Lowest level mark", "level_db", "-40 dB", help="The last mark before off.")
    input_range: Setting = control(
        "Input range", "", help="The mic/line or sensitivity switch.", marking="switch"
    )
    level_db: Setting = control(
        "Level",
        "dB",
        "lowest_db",
        0.0,
        0.5,
        0.0,
        off_at_low=True,
        marking="clock",
        help="The level control, ahead of the amplifier.",
    )

    def control_choices(self, name: str) -> tuple[tuple[str, float], ...]:
        return (
            drop_choices("full", self.lower_by_db) if name == "input_range" else super().control_choices(name)
        )

    def in_use(self, name: str) -> bool:
        return name != "input_range" or bool(self.lower_by_db)

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ACOUSTIC),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        full2, clip = np.asarray(values["sensitivity_v"]) ** 2, pa2_from_spl(values["max_spl"])
        drop_db = chosen(values.get("input_range", 0.0), [0.0, *numbered(values, "lower_by_db")])
        hiss: Number = 0.0
        if "noise_spl" in values:
            hiss = white_total(axis, pa2_from_spl(values["noise_spl"]), values.tag("noise_spl.weighting"))
        max_input2 = np.asarray(values["max_input_v"]) ** 2 if "max_input_v" in values else NEVER
        level = position_gain(values["level_db"]) * power_from_db(-np.asarray(drop_db))
        return ActiveStage(
            (
                Active("input", clip_in=max_input2),
                Active("level", gain=level),
                Active("box", gain=clip / full2, clip_out=clip, noise_behind=hiss, domain=Domain.ACOUSTIC),
            ),
            {"in": Input("input", values["z_in_ohm"])},
            {"out": Output("box", reference_m=1.0, directivity_q=values["directivity_q"])},
        )

    def summary(self) -> str:
        return f"{self.max_spl.text}, {marked_db(self.level_db)}"
