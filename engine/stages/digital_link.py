"""A digital transport: network, multicore or interface format."""

from __future__ import annotations

from typing import ClassVar, Literal

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.attenuator import position_gain
from engine.sections.base import NEVER, Active, ActiveStage, Domain, Input, Output, StageSections
from engine.sections.converters import word_noise

from .base import Port, Stage
from .declare import Setting, control, figure, option
from .declared import Values
from .shared import marked_db


class DigitalLink(Stage):
    """A gain, then a sample format: fixed-point clips at full scale and has its word length's noise, floating-point neither."""

    title: ClassVar[str] = "Digital link"
    family: ClassVar[str] = "Processing"
    order: ClassVar[int] = 460
    domain: ClassVar[Domain] = Domain.DIGITAL
    help: ClassVar[str] = (
        "What happens where one digital device hands over to the next: a trim, a word length, full scale."
    )

    kind: Literal["digital_link"] = "digital_link"
    bits: Figure = figure("Word length", "count", "24", help="Bits of each sample: 16, 20 or 24.")
    sample_format: Literal["fixed-point", "floating-point"] = option(
        "Format",
        "fixed-point",
        choices=("fixed-point", "floating-point"),
        help="Between devices fixed-point is usual, inside one floating-point.",
    )
    dither: Literal["none", "TPDF"] = option(
        "Dither",
        "none",
        choices=("none", "TPDF"),
        help="Triangular dither of two steps adds 4.8 dB to the quantisation noise.",
    )
    gain_db: Setting = control(
        "Gain",
        "dB",
        -60.0,
        24.0,
        0.1,
        0.0,
        off_at_low=True,
        marking="number",
        help="Digital, ahead of the format.",
    )

    def in_use(self, name: str) -> bool:
        return name != "bits" or self.sample_format == "fixed-point"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.DIGITAL),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.DIGITAL),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        is_fixed = self.sample_format == "fixed-point"
        noise = word_noise(axis, values["bits"], dithered=self.dither == "TPDF") if is_fixed else 0.0
        link = Active(
            "format",
            gain=position_gain(values["gain_db"]),
            clip_out=1.0 if is_fixed else NEVER,
            noise_behind=noise,
        )
        return ActiveStage((link,), {"in": Input("format")}, {"out": Output("format")})

    def summary(self) -> str:
        return (
            f"{self.bits.text} bit, {marked_db(self.gain_db)}"
            if self.sample_format == "fixed-point"
            else f"float, {marked_db(self.gain_db)}"
        )
