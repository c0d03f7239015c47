"""A source that is digital already."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import Active, ActiveStage, Domain, Output, StageSections
from engine.units import power_from_db

from .base import Port, Stage
from .declare import figure
from .declared import Values
from .shared import Spectrum, emission, numbered, spectrum_option


class DigitalSource(Stage):
    """Programme at a level under full scale. 0 dBFS is the rms of a full-scale sine (AES17)."""

    title: ClassVar[str] = "Digital source"
    family: ClassVar[str] = "Sources"
    order: ClassVar[int] = 130
    domain: ClassVar[Domain] = Domain.DIGITAL
    help: ClassVar[str] = "A player or network stream in digital form."

    kind: Literal["digital_source"] = "digital_source"
    level_dbfs: Figure = figure(
        "Programme level",
        "dbfs",
        "-20 dBFS",
        help="Average of the programme, rms against a full-scale sine: −24 to −14 dBFS is usual.",
    )
    crest_db: Figure = figure(
        "Crest factor",
        "crest_factor",
        "15 dB",
        help="Waveform peak over rms: 8 to 15 dB mastered, 15 to 20 live.",
    )
    spectrum: Spectrum = spectrum_option("pink")
    own_bands_db: tuple[Figure, ...] = figure(
        "Own bands",
        "level_db",
        many=True,
        help="31 third-octave levels from 20 Hz, 10 octave levels from 31.5 Hz or 8 from 63 Hz.",
    )

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.DIGITAL),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        power = power_from_db(values["level_dbfs"])
        sent = emission(axis, self.spectrum, power, values["crest_db"], numbered(values, "own_bands_db"))
        return ActiveStage((Active("source", clip_out=1.0),), {}, {"out": Output("source")}, sent)

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        if np.any(np.asarray(values["level_dbfs"]) > 0.0):
            yield f"Programme level of {self.name} is {self.level_dbfs.text}: nothing digital goes above 0 dBFS"

    def summary(self) -> str:
        return self.level_dbfs.text
