"""A talker, singer or instrument in the air."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import Active, ActiveStage, Domain, Output, StageSections
from engine.spectra import own_levels_fit
from engine.units import pa2_from_spl

from .base import Port, Stage
from .declare import figure
from .declared import Values
from .shared import Spectrum, emission, numbered, spectrum_option


class SoundSource(Stage):
    """Sound pressure at a microphone, or at a stated distance from which links carry it on."""

    title: ClassVar[str] = "Sound source"
    family: ClassVar[str] = "Sources"
    order: ClassVar[int] = 110
    domain: ClassVar[Domain] = Domain.ACOUSTIC
    help: ClassVar[str] = "A talker, singer or instrument, by the sound pressure it makes."

    kind: Literal["sound_source"] = "sound_source"
    level_spl: Figure = figure(
        "Level", "spl", "85 dB SPL",
        help="Programme level, rms. Speech at 0.6 m is about 65 normal, 72 raised, 15 dB more close up; "
        "a close singer 95 to 110; a drum 120 and more.",
    )  # fmt: skip
    stated_at_m: Figure | None = figure(
        "Stated at", "length",
        help="The distance the level was stated or measured at. Left empty it is the level at the microphone, whatever the distance.",
    )  # fmt: skip
    crest_db: Figure = figure(
        "Crest factor", "crest_factor", "18 dB",
        help="Waveform peak over rms, in true peak: speech 12 to 18 dB, live music 15 to 20, compressed playback 8 to 12.",
    )  # fmt: skip
    spectrum: Spectrum = spectrum_option("speech")
    own_bands_db: tuple[Figure, ...] = figure(
        "Own bands", "level_db", many=True,
        help="31 third-octave levels from 20 Hz, 10 octave levels from 31.5 Hz or 8 from 63 Hz; only their differences count.",
    )  # fmt: skip

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ACOUSTIC),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        power = pa2_from_spl(values["level_spl"])
        own = numbered(values, "own_bands_db")
        sent = emission(
            axis, self.spectrum, power, values["crest_db"], own, values.tag("level_spl.weighting")
        )
        distance = values.get("stated_at_m", None)
        return ActiveStage((Active("source"),), {}, {"out": Output("source", reference_m=distance)}, sent)

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        if self.spectrum == "own bands" and not own_levels_fit(len(self.own_bands_db)):
            yield f"Own bands of {self.name} hold {len(self.own_bands_db)} levels: give 31, 10 or 8"

    def summary(self) -> str:
        return self.level_spl.text
