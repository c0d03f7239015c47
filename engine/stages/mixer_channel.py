"""A channel strip of a mixer."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections import filters
from engine.sections.attenuator import is_on, position_gain
from engine.sections.base import Active, ActiveStage, Input, Output, StageSections

from .base import Port, Stage
from .declare import Setting, control, figure, switch
from .declared import Values
from .parametric import boost, corner, sharpness
from .shared import (
    ANALOGUE_ONLY,
    Electrical,
    Signal,
    domain_of,
    marked_db,
    nominal_above_maximum,
    signal_option,
    stated_noise,
)

TAPS = (
    ("before_equaliser", "trim"),
    ("before_fader", "equaliser"),
    ("after_fader", "fader"),
    ("after_mute", "mute"),
)


class MixerChannel(Stage):
    """Trim, low cut, equaliser, fader, mute, in that order, with a send's tap behind each."""

    title: ClassVar[str] = "Mixer channel"
    family: ClassVar[str] = "Mixing"
    order: ClassVar[int] = 310
    help: ClassVar[str] = "One channel strip at line level. A microphone goes through a preamplifier first."

    kind: Literal["mixer_channel"] = "mixer_channel"
    trim_min_db: Figure = figure("Lowest trim", "level_db", "-20 dB", help="End of the trim's range.")
    trim_max_db: Figure = figure("Highest trim", "level_db", "20 dB", help="Other end of the trim's range.")
    fader_min_db: Figure = figure(
        "Lowest fader mark",
        "level_db",
        "-60 dB",
        help="The lowest mark above off; below it the fader is off.",
    )
    fader_max_db: Figure = figure(
        "Highest fader mark",
        "level_db",
        "10 dB",
        help="Gain with the fader at its top: +10 dB is usual, some have 0, +6 or +12.",
    )
    max_v: Figure = figure(
        "Maximum level", "voltage", "+22 dBu", help="The largest clean sine inside the strip: +18 to +24 dBu."
    )
    noise: Figure | None = figure(
        "Strip noise", "noise", "-95 dBu unweighted", references=("nominal", "max"),
        help="Of the strip itself with trim and fader at 0 dB, ahead of the fader; −90 to −100 dBu.",
    )  # fmt: skip
    nominal_v: Figure = figure(
        "Nominal level", "voltage", "+4 dBu", help="Level inside the strip with the meter at 0."
    )
    z_in_ohm: Figure = figure(
        "Input impedance", "impedance", "20 k", help="Of the line input: 10 to 30 kohm."
    )
    z_out_ohm: Figure = figure(
        "Output impedance",
        "impedance",
        "100 ohm",
        help="Of direct and insert outputs; inside the mixer nothing loads it.",
    )
    low_cut_hz: Figure = corner("Low cut", "80 Hz")
    low_hz: Figure = corner("Low equaliser", "100 Hz")
    mid_hz: Figure = corner("Middle equaliser", "1 kHz")
    mid_q: Figure = sharpness("1")
    high_hz: Figure = corner("High equaliser", "10 kHz")
    signal: Signal = signal_option()

    trim_db: Setting = control(
        "Trim",
        "dB",
        "trim_min_db",
        "trim_max_db",
        0.5,
        0.0,
        help="Ahead of everything else in the strip.",
        marking="clock",
    )
    low_cut: Setting = switch("Low cut", help="18 dB per octave.")
    low_db: Setting = boost("Low")
    mid_db: Setting = boost("Middle")
    high_db: Setting = boost("High")
    fader_db: Setting = control(
        "Fader", "dB", "fader_min_db", "fader_max_db", 0.5, 0.0, off_at_low=True, work=(-20.0, 5.0),
        help="A hand has fine control between −20 and +5 dB, where the marks lie far apart.",
    )  # fmt: skip
    mute: Setting = switch(
        "Mute", off="on air", on="muted", help="Muted, nothing passes; sends taken ahead of it still do."
    )

    def in_use(self, name: str) -> bool:
        return name not in ANALOGUE_ONLY or self.signal == "analogue"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", domain_of(self.signal)),)

    def outputs(self) -> tuple[Port, ...]:
        domain = domain_of(self.signal)
        taps = (Port(name, domain, name.replace("_", " "), tap=True) for name, _ in TAPS)
        return (Port("out", domain), *taps)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        own = Electrical.of(values, "max_v")
        clip, z_out, f_hz = own.clip_v2, own.z_out_ohm, axis.f_hz
        noise = stated_noise(axis, values, "noise", own.references_v2)
        curve = np.where(
            is_on(values["low_cut"]), filters.butterworth_high_pass(f_hz, values["low_cut_hz"], 3), 1.0
        )
        curve = curve * filters.low_shelf(f_hz, values["low_hz"], values["low_db"])
        curve = curve * filters.bell(f_hz, values["mid_hz"], values["mid_db"], values["mid_q"])
        curve = curve * filters.high_shelf(f_hz, values["high_hz"], values["high_db"])
        sections = (
            Active("trim", gain=position_gain(values["trim_db"]), clip_in=clip, clip_out=clip),
            Active("equaliser", gain=curve, clip_out=clip, noise_behind=noise),
            Active("fader", gain=position_gain(values["fader_db"]), clip_out=clip),
            Active("mute", gain=np.where(is_on(values["mute"]), 0.0, 1.0)),
        )
        taps = {name: Output(section, z_out) for name, section in TAPS}
        return ActiveStage(
            sections, {"in": Input("trim", own.z_in_ohm)}, {"out": Output("mute", z_out), **taps}
        )

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        yield from nominal_above_maximum(self.name, values, "max_v")

    def summary(self) -> str:
        return "muted" if self.mute.value else marked_db(self.fader_db)
