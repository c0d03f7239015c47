"""A player, keyboard or receiver."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.attenuator import chosen
from engine.sections.base import Active, ActiveStage, Domain, Output, StageSections
from engine.sections.noise import thermal
from engine.units import power_from_db

from .base import Port, Stage
from .declare import Setting, control, figure
from .declared import Values
from .shared import (
    Form,
    Spectrum,
    drop_choices,
    emission,
    form_option,
    numbered,
    spectrum_option,
    stated_noise,
)


class LineSource(Stage):
    """A source that is electrical already."""

    title: ClassVar[str] = "Line source"
    family: ClassVar[str] = "Sources"
    order: ClassVar[int] = 120
    help: ClassVar[str] = (
        "A player, keyboard, laptop or radio receiver: nominal and largest output, and what it hisses."
    )

    kind: Literal["line_source"] = "line_source"
    nominal_v: Figure = figure(
        "Nominal output", "voltage", "-10 dBV",
        help="Programme level, rms, with the level switch at full: −10 dBV for consumer, +4 dBu for professional machines.",
    )  # fmt: skip
    max_output_v: Figure = figure(
        "Maximum output",
        "voltage",
        "2 V",
        help="The largest clean sine, or a full-scale test tone: 0.3 to 2 V for consumer machines.",
    )
    z_out_ohm: Figure = figure(
        "Output impedance", "impedance", "600 ohm", help="50 to 600 ohm is usual, 1 k for simple machines."
    )
    noise: Figure | None = figure(
        "S/N or noise", "noise", "95 dB(A) re max",
        help="Its residual as a level, or S/N with what it refers to. Left empty: the thermal noise of its output impedance.",
    )  # fmt: skip
    crest_db: Figure = figure(
        "Crest factor",
        "crest_factor",
        "15 dB",
        help="Waveform peak over rms: mastered music 8 to 15 dB, live 15 to 20, speech 12 to 18.",
    )
    lower_by_db: tuple[Figure, ...] = figure(
        "Switch drops",
        "loss",
        "12 dB",
        many=True,
        help="How far each other position of the output level switch lies under full.",
    )
    spectrum: Spectrum = spectrum_option("pink")
    own_bands_db: tuple[Figure, ...] = figure(
        "Own bands",
        "level_db",
        many=True,
        help="31 third-octave levels from 20 Hz, 10 octave levels from 31.5 Hz or 8 from 63 Hz.",
    )
    form: Form = form_option("unbalanced")
    level_switch: Setting = control(
        "Output level",
        "",
        help="The level switch: it lowers level, clip point and noise together.",
        marking="switch",
    )

    def control_choices(self, name: str) -> tuple[tuple[str, float], ...]:
        return (
            drop_choices("full", self.lower_by_db)
            if name == "level_switch"
            else super().control_choices(name)
        )

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        nominal2 = np.asarray(values["nominal_v"], dtype=float) ** 2
        max2 = np.asarray(values["max_output_v"], dtype=float) ** 2
        drop_db = chosen(values["level_switch"], [0.0, *numbered(values, "lower_by_db")])
        hiss = stated_noise(axis, values, "noise", {"nominal": nominal2, "max": max2})
        own = 0.0 if "noise" in values else thermal(axis, values["z_out_ohm"], values["temperature_k"])
        sections = (
            Active("player", clip_out=max2, noise_behind=hiss),
            Active("level switch", gain=power_from_db(-np.asarray(drop_db)), noise_behind=own),
        )
        sent = emission(axis, self.spectrum, nominal2, values["crest_db"], numbered(values, "own_bands_db"))
        return ActiveStage(
            sections, {}, {"out": Output("level switch", values["z_out_ohm"], self.form)}, sent
        )

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        if np.any(np.asarray(values["nominal_v"]) > np.asarray(values["max_output_v"])):
            yield f"{self.name} has a nominal output of {self.nominal_v.text} above its maximum of {self.max_output_v.text}"

    def summary(self) -> str:
        return self.nominal_v.text
