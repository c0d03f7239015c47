"""A bus of a mixer: the sum of its channels."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.attenuator import is_on, position_gain
from engine.sections.base import Active, ActiveStage, Input, Output, StageSections
from engine.units import dbu_from_v

from .base import Meter, Port, Stage
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

JOINS = {"by origin": "origin", "coherent": "coherent", "power": "power"}


class MixBus(Stage):
    """Sums what feeds it, then a bus fader. Noise ahead of the fader and noise behind it are two figures."""

    title: ClassVar[str] = "Mix bus"
    family: ClassVar[str] = "Mixing"
    order: ClassVar[int] = 320
    help: ClassVar[str] = "The sum of channels or buses: a main mix, a group, an auxiliary send, a matrix."

    kind: Literal["mix_bus"] = "mix_bus"
    fader_min_db: Figure = figure(
        "Lowest fader mark", "level_db", "-60 dB", help="The lowest mark above off."
    )
    fader_max_db: Figure = figure(
        "Highest fader mark", "level_db", "10 dB", help="Gain with the fader at its top."
    )
    max_output_v: Figure = figure(
        "Maximum output", "voltage", "+22 dBu", help="The largest clean sine: +18 to +28 dBu."
    )
    summing_noise: Figure | None = figure(
        "Summing noise", "noise", references=("nominal", "max"),
        help="Of the summing amplifier, ahead of the bus fader, with as many channels routed as in the show.",
    )  # fmt: skip
    residual: Figure | None = figure(
        "Residual noise", "noise", "-86 dBu unweighted", references=("nominal", "max"),
        help="At the output with faders down: behind the bus fader, which does not lower it. −80 to −95 dBu.",
    )  # fmt: skip
    nominal_v: Figure = figure(
        "Nominal level", "voltage", "+4 dBu", help="Output level with the meter at 0: +4 dBu or 0 dBu."
    )
    meter_zero_v: Figure = figure(
        "Meter reads 0 at", "voltage", "+4 dBu", help="Output level at which the meter shows 0."
    )
    meter_zero_dbfs: Figure = figure(
        "Digital meter reads 0 at", "dbfs", "0 dBFS", help="For a digital bus: the level shown as 0."
    )
    z_in_ohm: Figure = figure(
        "Input impedance",
        "impedance",
        "1 M",
        help="Of each input. Inside a mixer nothing loads its channels; from outside 10 to 30 kohm.",
    )
    z_out_ohm: Figure = figure("Output impedance", "impedance", "75 ohm", help="50 to 150 ohm is usual.")
    form: Form = form_option()
    signal: Signal = signal_option()
    adds: Literal["by origin", "coherent", "power"] = option(
        "Sum", "by origin", choices=tuple(JOINS),
        help="How programmes add. By origin: what comes from one source adds as voltage, unlike sources as power. Coherent: all as "
        "voltage. Power: all as power.",
    )  # fmt: skip
    meter_sort: Literal["none", "VU", "quasi-peak", "sample peak"] = option(
        "Meter",
        "VU",
        choices=("none", "VU", "quasi-peak", "sample peak"),
        help="What kind of meter stands at the output.",
    )
    fader_db: Setting = control(
        "Bus fader",
        "dB",
        "fader_min_db",
        "fader_max_db",
        0.5,
        0.0,
        off_at_low=True,
        work=(-20.0, 5.0),
        help="Behind the sum.",
    )
    mute: Setting = switch(
        "Mute", off="on air", on="muted", help="Muted, nothing passes but the output's own noise."
    )

    def in_use(self, name: str) -> bool:
        if name in ANALOGUE_ONLY:
            return self.signal == "analogue"
        return name != "meter_zero_dbfs" or self.signal == "digital"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", domain_of(self.signal), many=True),)

    def outputs(self) -> tuple[Port, ...]:
        domain = domain_of(self.signal)
        return (Port("out", domain), Port("before_fader", domain, "before fader", tap=True))

    def sections(self, values: Values, axis: Axis) -> StageSections:
        own = Electrical.of(values, "max_output_v")
        clip, z_out = own.clip_v2, own.z_out_ohm
        summing = stated_noise(axis, values, "summing_noise", own.references_v2)
        residual = stated_noise(axis, values, "residual", own.references_v2)
        gain = position_gain(values["fader_db"]) * np.where(is_on(values["mute"]), 0.0, 1.0)
        return ActiveStage(
            (Active("sum", clip_out=clip, noise_behind=summing), Active("fader", gain=gain, clip_out=clip, noise_behind=residual)),
            {"in": Input("sum", own.z_in_ohm)},
            {"out": Output("fader", z_out, self.form), "before_fader": Output("sum", z_out, self.form)},
            join=JOINS[self.adds],
        )  # fmt: skip

    def meter(self, values: Values) -> Meter | None:
        if self.meter_sort == "none":
            return None
        if self.signal == "digital":
            return Meter(self.meter_sort, float(np.mean(values["meter_zero_dbfs"])), "dBFS")
        return Meter(self.meter_sort, float(np.mean(dbu_from_v(values["meter_zero_v"]))), "dBu")

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        yield from nominal_above_maximum(self.name, values, "max_output_v")

    def summary(self) -> str:
        return "muted" if self.mute.value else marked_db(self.fader_db)
