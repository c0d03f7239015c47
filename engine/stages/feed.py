"""An input that the system feeds and that ends there: recorder, stream, camera, hearing assistance, press."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import Active, ActiveStage, Domain, Input, StageSections

from .base import Port, Stage
from .declare import figure, option
from .declared import Values
from .shared import stated_ein


class Feed(Stage):
    """Nominal level, largest level, and its own noise at its input."""

    title: ClassVar[str] = "Feed"
    family: ClassVar[str] = "Places"
    order: ClassVar[int] = 720
    help: ClassVar[str] = "Where a send ends: what level it wants, what it takes, how quiet it is."

    kind: Literal["feed"] = "feed"
    nominal_v: Figure = figure(
        "Nominal input",
        "voltage",
        "-10 dBV",
        help="Programme level it expects: −10 dBV or +4 dBu for line, −60 to −40 dBu for a microphone input.",
    )
    max_input_v: Figure = figure(
        "Maximum input",
        "voltage",
        "+6 dBV",
        help="The largest sine before it clips: 2 V for simple machines.",
    )
    ein_v: Figure | None = figure(
        "Input noise",
        "ein",
        "-85 dBu, 600 ohm, unweighted",
        help="Equivalent input noise, or its noise floor as an input level.",
    )
    nominal_dbfs: Figure = figure(
        "Nominal level, digital", "dbfs", "-20 dBFS", help="Programme level a digital feed expects."
    )
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="10 to 50 kohm for line inputs.")
    use: Literal["recorder", "stream", "camera", "hearing assistance", "press"] = option(
        "Use",
        "recorder",
        choices=("recorder", "stream", "camera", "hearing assistance", "press"),
        help="What is fed.",
    )
    signal: Literal["analogue", "digital"] = option(
        "Signal",
        "analogue",
        choices=("analogue", "digital"),
        help="A digital feed takes full scale, clips at 0 dBFS and adds no noise.",
    )

    def in_use(self, name: str) -> bool:
        if name == "nominal_dbfs":
            return self.signal == "digital"
        return name not in ("nominal_v", "max_input_v", "ein_v", "z_in_ohm") or self.signal == "analogue"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.DIGITAL if self.signal == "digital" else Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        if self.signal == "digital":
            return ActiveStage((Active("input", clip_in=1.0),), {"in": Input("input")})
        heard = Active(
            "input",
            clip_in=np.asarray(values["max_input_v"]) ** 2,
            noise_ahead=stated_ein(axis, values, "ein_v"),
        )
        return ActiveStage((heard,), {"in": Input("input", values["z_in_ohm"])})

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        if self.signal == "analogue" and np.any(
            np.asarray(values["nominal_v"]) > np.asarray(values["max_input_v"])
        ):
            yield f"{self.name} expects {self.nominal_v.text} and takes {self.max_input_v.text} at most: nominal lies under maximum"

    def summary(self) -> str:
        return f"{self.use}, {self.nominal_dbfs.text if self.signal == 'digital' else self.nominal_v.text}"
