"""A loudspeaker processor: converters, trims, equaliser, crossover outputs with limiters."""

from __future__ import annotations

from typing import Any, ClassVar, Literal

import numpy as np
from numpy.typing import NDArray
from pydantic import create_model

from engine.bands import Axis
from engine.figures import Figure
from engine.sections import filters
from engine.sections.attenuator import chosen, position_gain
from engine.sections.base import Active, ActiveStage, Domain, Input, Output, StageSections
from engine.sections.converters import analogue_to_digital, digital_to_analogue, range_noise
from engine.sections.dynamics import peak_limiter, rms_limiter
from engine.units import power_from_db

from .base import Limiter, Port, Stage
from .declare import Setting, control, figure, option, switch
from .declared import Declared, Values
from .parametric import Parametric, slope_option
from .shared import Form, drop_choices, form_option, marked_db, numbered

MOST_OUTPUTS = 8
OutputSlope = Literal[
    "6 dB/oct", "12 dB/oct Butterworth", "18 dB/oct Butterworth", "24 dB/oct Butterworth", "48 dB/oct Butterworth",
    "12 dB/oct Linkwitz–Riley", "24 dB/oct Linkwitz–Riley", "48 dB/oct Linkwitz–Riley",
]  # fmt: skip


def _output_fields(n: int) -> dict[str, Any]:
    """The figures and controls of one crossover output, in signal order."""
    limit = "0 dBFS is the output's full scale. It is true for one gain of the amplifier behind it."
    empty = "this output's range. Left empty there is none."
    return {
        f"high_pass_{n}_hz": (Figure | None, figure(f"Output {n} high-pass", "frequency", help=f"Crossover below {empty}")),
        f"low_pass_{n}_hz": (Figure | None, figure(f"Output {n} low-pass", "frequency", help=f"Crossover above {empty}")),
        f"limiter_{n}": (Setting, switch(f"Output {n} limiters", help="Whether the two limiters of this output are in.")),
        f"limit_rms_{n}_dbfs": (Setting, control(f"Output {n} rms limit", "dBFS", -60.0, 0.0, 0.1, 0.0, marking="number",
                                                help=f"Threshold for the programme's rms, ahead of the output trim. {limit}")),
        f"limit_peak_{n}_dbfs": (Setting, control(f"Output {n} peak limit", "dBFS", -60.0, 0.0, 0.1, 0.0, marking="number",
                                                 help=f"Threshold for peaks, sine-scaled, ahead of the output trim. {limit}")),
        f"trim_{n}_db": (Setting, control(f"Output {n} trim", "dB", -60.0, 12.0, 0.1, 0.0, off_at_low=True, marking="number",
                                          help="Digital, ahead of the D/A converter: it does not lower that converter's noise.")),
    }  # fmt: skip


_Outputs: type[Declared] = create_model(
    "_Outputs",
    __base__=Declared,
    **{k: v for n in range(1, MOST_OUTPUTS + 1) for k, v in _output_fields(n).items()},
)


class Processor(_Outputs, Parametric, Stage):
    """A/D, input trim, equaliser; per output crossover, limiters, trim, D/A; then an analogue range switch.

    Each trim counts where it really lives: the digital ones ahead of the D/A converter, the range switch behind it.
    """

    title: ClassVar[str] = "Processor"
    family: ClassVar[str] = "Processing"
    order: ClassVar[int] = 430
    help: ClassVar[str] = "A digital processor with one input and up to eight crossover outputs."

    kind: Literal["processor"] = "processor"
    input_full_scale_v: Figure = figure(
        "Input full scale",
        "full_scale",
        "+24 dBu",
        help="Input level at 0 dBFS, its largest sine: +18 to +24 dBu.",
    )
    input_range_db: Figure = figure(
        "A/D dynamic range", "dynamic_range", "112 dB(A)", help="105 to 120 dB(A); sheets weight it with A."
    )
    output_full_scale_v: Figure = figure(
        "Output full scale",
        "full_scale",
        "+24 dBu",
        help="Output level at 0 dBFS with the range switch at full.",
    )
    output_range_db: Figure = figure(
        "D/A dynamic range", "dynamic_range", "112 dB(A)", help="105 to 120 dB(A); sheets weight it with A."
    )
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="10 to 50 kohm is usual.")
    z_out_ohm: Figure = figure("Output impedance", "impedance", "100 ohm", help="50 to 200 ohm is usual.")
    lower_by_db: tuple[Figure, ...] = figure(
        "Range switch drops",
        "loss",
        many=True,
        help="Where it has an analogue output range switch: how far each other position lies under full.",
    )
    outputs_fitted: int = option(
        "Outputs", 1, low=1, high=MOST_OUTPUTS, help="How many crossover outputs are used."
    )
    input_signal: Literal["analogue", "digital"] = option(
        "Input",
        "analogue",
        choices=("analogue", "digital"),
        help="Digital: no A/D converter of its own ahead of it.",
    )
    crossover_slope: OutputSlope = slope_option("Crossover slope", "24 dB/oct Linkwitz–Riley")
    form: Form = form_option()
    input_trim_db: Setting = control(
        "Input trim",
        "dB",
        -60.0,
        24.0,
        0.1,
        0.0,
        off_at_low=True,
        marking="number",
        help="Digital, behind the A/D converter.",
    )
    output_range: Setting = control(
        "Output range",
        "",
        help="Analogue, behind the D/A converter: it lowers level and that converter's noise together.",
        marking="switch",
    )

    def control_choices(self, name: str) -> tuple[tuple[str, float], ...]:
        return (
            drop_choices("full", self.lower_by_db)
            if name == "output_range"
            else super().control_choices(name)
        )

    @classmethod
    def field_place(cls, name: str) -> int:
        """Signal order: input, equaliser, the outputs one by one, what they share."""
        if name in _AT_INPUT:
            return 0
        return 100 if name in _AT_END else 1 + _PER_OUTPUT.get(name, 0)

    def in_use(self, name: str) -> bool:
        if name in _AT_CONVERTER and self.input_signal == "digital":
            return False
        return (name != "output_range" or bool(self.lower_by_db)) and _PER_OUTPUT.get(
            name, 0
        ) <= self.outputs_fitted

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.DIGITAL if self.input_signal == "digital" else Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        if self.outputs_fitted == 1:
            return (Port("out", Domain.ANALOGUE),)
        return tuple(
            Port(self._port(n), Domain.ANALOGUE, f"output {n}") for n in range(1, self.outputs_fitted + 1)
        )

    def _port(self, n: int) -> str:
        return "out" if n == 1 else f"out_{n}"

    def sections(self, values: Values, axis: Axis) -> StageSections:
        sections: list[Active] = []
        if self.input_signal == "analogue":
            noise = range_noise(axis, values["input_range_db"], values.tag("input_range_db.weighting"))
            sections.append(analogue_to_digital("A/D", values["input_full_scale_v"], noise))
        sections.append(
            Active("input trim", gain=position_gain(values["input_trim_db"]), domain=Domain.DIGITAL)
        )
        sections.append(Active("equaliser", gain=self.equaliser(values, axis), domain=Domain.DIGITAL))
        ends = {}
        for n in range(1, self.outputs_fitted + 1):
            branch = self._branch(values, axis, n)
            sections.extend(branch)
            ends[self._port(n)] = Output(branch[-1].name, values["z_out_ohm"], self.form)
        first = sections[0].name
        z_in = values["z_in_ohm"] if self.input_signal == "analogue" else float("inf")
        return ActiveStage(tuple(sections), {"in": Input(first, z_in)}, ends)

    def _branch(self, values: Values, axis: Axis, n: int) -> tuple[Active, ...]:
        full_v = values["output_full_scale_v"]
        noise = range_noise(axis, values["output_range_db"], values.tag("output_range_db.weighting"))
        is_in = values[f"limiter_{n}"]
        drop_db = chosen(values.get("output_range", 0.0), [0.0, *numbered(values, "lower_by_db")])
        digital = Domain.DIGITAL
        return (
            Active(
                f"crossover {n}", gain=self._crossover(values, axis, n), after=("equaliser",), domain=digital
            ),
            Active(
                f"rms limiter {n}",
                dynamics=rms_limiter(power_from_db(values[f"limit_rms_{n}_dbfs"]), is_in),
                domain=digital,
            ),
            Active(
                f"peak limiter {n}",
                dynamics=peak_limiter(power_from_db(values[f"limit_peak_{n}_dbfs"]), is_in),
                domain=digital,
            ),
            Active(f"output trim {n}", gain=position_gain(values[f"trim_{n}_db"]), domain=digital),
            digital_to_analogue(f"D/A {n}", full_v, noise),
            Active(f"output range {n}", gain=power_from_db(-np.asarray(drop_db)), domain=Domain.ANALOGUE),
        )

    def _crossover(self, values: Values, axis: Axis, n: int) -> NDArray[np.float64]:
        found = np.ones(axis.size)
        if f"high_pass_{n}_hz" in values:
            found = found * filters.high_pass(axis.f_hz, values[f"high_pass_{n}_hz"], self.crossover_slope)
        if f"low_pass_{n}_hz" in values:
            found = found * filters.low_pass(axis.f_hz, values[f"low_pass_{n}_hz"], self.crossover_slope)
        return found

    def limiters(self) -> tuple[Limiter, ...]:
        found = []
        for n in range(1, self.outputs_fitted + 1):
            is_in = getattr(self, f"limiter_{n}").value == 1.0
            found.append(Limiter(f"rms limiter {n}", f"limit_rms_{n}_dbfs", "rms", "dBFS", is_in))
            found.append(Limiter(f"peak limiter {n}", f"limit_peak_{n}_dbfs", "peak", "dBFS", is_in))
        return tuple(found)

    def summary(self) -> str:
        trims = {name: setting for name, _, setting in self.controls()}
        many = self.outputs_fitted > 1
        behind = f"{self.outputs_fitted} outputs" if many else f"out {marked_db(trims['trim_1_db'])}"
        return f"in {marked_db(self.input_trim_db)}, {behind}"


_PER_OUTPUT = {name: n for n in range(1, MOST_OUTPUTS + 1) for name in _output_fields(n)}
_AT_CONVERTER = {"input_full_scale_v", "input_range_db", "z_in_ohm"}
_AT_INPUT = _AT_CONVERTER | {"input_trim_db"}
_AT_END = {"output_full_scale_v", "output_range_db", "z_out_ohm", "lower_by_db", "output_range"}
