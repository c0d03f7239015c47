"""A passive loudspeaker, or several alike on one line."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import (
    NEVER,
    Active,
    ActiveStage,
    Domain,
    Dynamics,
    Input,
    Number,
    Output,
    StageSections,
)
from engine.units import pa2_from_spl, power_from_db

from .base import Port, Stage
from .declare import figure, option
from .declared import Values

REFERENCE_V2 = 8.0  # 2.83 V is 1 W in 8 ohm: sqrt(8) V
PEAK_OVER_CONTINUOUS = 4.0  # rating noise has a crest factor of 6 dB (AES2 practice)


class Loudspeaker(Stage):
    """Volts to sound pressure at 1 m on its axis in free field."""

    title: ClassVar[str] = "Loudspeaker"
    family: ClassVar[str] = "Outputs"
    order: ClassVar[int] = 640
    is_loudspeaker: ClassVar[bool] = True
    help: ClassVar[str] = (
        "Sensitivity, impedance and ratings. It has no clip point of its own: watts are judged against its ratings."
    )

    kind: Literal["loudspeaker"] = "loudspeaker"
    sensitivity_spl: Figure = figure(
        "Sensitivity", "loudspeaker_sensitivity", "97 dB 1 W/1 m",
        help="At 1 m for 1 W, or for 2.83 V: into 4 ohm those differ by 3 dB, so say which. 84 to 112 dB.",
    )  # fmt: skip
    z_ohm: Figure = figure("Impedance", "impedance", "8 ohm", help="Nominal, of one box: 4, 8 or 16 ohm.")
    continuous_w: Figure | None = figure(
        "Continuous power", "power", "300 W", help="AES or IEC rating of one box, pink noise with 6 dB crest."
    )
    programme_w: Figure | None = figure(
        "Programme power", "power", help="Usually twice the continuous rating."
    )
    peak_w: Figure | None = figure(
        "Peak power",
        "power",
        help="Usually four times the continuous rating, which it is taken for when left empty.",
    )
    compression_db: Figure | None = figure(
        "Power compression", "level_db",
        help="What the hot voice coil loses at the programme's level: 1 to 3 dB near its continuous rating. "
        "Hiss is heard with a cool coil.",
    )  # fmt: skip
    directivity_q: Figure = figure(
        "Directivity factor",
        "directivity",
        "Q 10",
        help="1 is all round, 10 a box with a horn, 50 a narrow array. Sets the room's share.",
    )
    boxes: int = option(
        "Boxes", 1, low=1, high=64, help="How many alike hang on this line, driven by one amplifier channel."
    )
    wiring: Literal["parallel", "series"] = option(
        "Wiring", "parallel", choices=("parallel", "series"), help="How those boxes are wired."
    )
    adds: Literal["coherent", "power"] = option(
        "Boxes add", "coherent", choices=("coherent", "power"),
        help="Side by side they add as pressure (+6 dB for two), spread out as power (+3 dB).",
    )  # fmt: skip

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ACOUSTIC),)

    def load_ohm(self, values: Values) -> Number:
        return values["z_ohm"] / self.boxes if self.wiring == "parallel" else values["z_ohm"] * self.boxes

    def rated_w(self, values: Values, rating: str) -> float | None:
        """ "continuous", "programme" or "peak" [W], all boxes; peak is four times continuous where it is not given."""
        one: Number | None = values.get(f"{rating}_w", None)
        if one is None and rating == "peak" and "continuous_w" in values:
            one = values["continuous_w"] * PEAK_OVER_CONTINUOUS
        return None if one is None else float(np.mean(np.asarray(one))) * self.boxes

    def sections(self, values: Values, axis: Axis) -> StageSections:
        per_watt = values.tag("sensitivity_spl.reference") == "1 W"
        reference_v2 = values["z_ohm"] if per_watt else REFERENCE_V2
        one_box = pa2_from_spl(values["sensitivity_spl"]) / reference_v2
        together = float(self.boxes) ** (2 if self.adds == "coherent" else 1)
        shared = 1.0 if self.wiring == "parallel" else 1.0 / self.boxes**2
        hot: Dynamics | None = None
        if "compression_db" in values:
            hot = Dynamics(
                NEVER, 1.0, power_from_db(-np.asarray(values["compression_db"])), spares_noise=True
            )
        box = Active("box", gain=one_box * together * shared, dynamics=hot, domain=Domain.ACOUSTIC)
        output = Output("box", reference_m=1.0, directivity_q=values["directivity_q"])
        return ActiveStage((box,), {"in": Input("box", self.load_ohm(values))}, {"out": output})

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        if (
            "peak_w" in values
            and "continuous_w" in values
            and np.any(values["peak_w"] < values["continuous_w"])
        ):
            yield f"Peak power of {self.name} is below its continuous power: a peak rating is usually four times as much"

    def summary(self) -> str:
        many = f"{self.boxes} × " if self.boxes > 1 else ""
        return f"{many}{self.sensitivity_spl.text}, {self.z_ohm.text}"
