"""A 70.7 or 100 V line with tapped loudspeaker transformers."""

from __future__ import annotations

from typing import Any, ClassVar, Literal

import numpy as np
from pydantic import create_model

from engine.bands import Axis
from engine.figures import Figure
from engine.sections import filters
from engine.sections.attenuator import chosen
from engine.sections.base import NEVER, Active, ActiveStage, Domain, Input, Number, Output, StageSections
from engine.sections.conductors import COPPERS, loop_ohm
from engine.sections.ladder import Ladder
from engine.units import power_from_db

from .base import Port, Stage
from .declare import Setting, control, figure, option
from .declared import Declared, Values
from .shared import numbered

MOST_GROUPS = 8


def _group_fields(n: int) -> dict[str, Any]:
    """What one group of loudspeakers alike needs."""
    many = "How many hang on the line with this tap. They load it whether drawn or not."
    chosen_tap = "The tap chosen on every transformer of this group."
    return {
        f"count_{n}": (Figure, figure(f"Group {n} loudspeakers", "count", "10", help=many)),
        f"tap_{n}": (
            Setting,
            control(f"Group {n} tap", "", 0.0, 0.0, 1.0, 1.0, marking="switch", help=chosen_tap),
        ),
    }


_Groups: type[Declared] = create_model(
    "_Groups",
    __base__=Declared,
    **{k: v for n in range(1, MOST_GROUPS + 1) for k, v in _group_fields(n).items()},
)


class ConstantVoltageLine(_Groups, Stage):
    """From the amplifier's terminals to the voice coils of each group.

    A tap of P watts marked for V volts is a load of V²/P, and lets V_line sqrt(P Z) / V reach a voice coil of Z, less the
    transformer's loss. So the line's load is the taps', whatever is drawn behind the outputs.
    """

    title: ClassVar[str] = "Constant-voltage line"
    family: ClassVar[str] = "Outputs"
    order: ClassVar[int] = 630
    help: ClassVar[str] = (
        "Tapped loudspeakers on a 70.7 or 100 V line: the load, each group's power, the loss in cable and transformer."
    )

    kind: Literal["constant_voltage_line"] = "constant_voltage_line"
    line_voltage_v: Figure = figure(
        "Line voltage",
        "line_voltage",
        "70.7 V",
        help="What the amplifier's output is rated at: 70.7 or 100 V, seldom 25 or 50.",
    )
    marked_voltage_v: Figure | None = figure(
        "Taps are marked for",
        "line_voltage",
        help="Where it is not the line's voltage: a 100 V tap on a 70.7 V line takes half its watts.",
    )
    taps_w: tuple[Figure, ...] = figure(
        "Taps",
        "tap",
        "20 W; 10 W; 5 W; 2.5 W",
        many=True,
        help="What the transformers offer, the largest first.",
    )
    speaker_ohm: Figure = figure(
        "Voice coil", "impedance", "8 ohm", help="Impedance of the loudspeaker behind each transformer."
    )
    loss_db: Figure = figure("Transformer loss", "loss", "1 dB", help="Insertion loss: 0.5 to 2 dB.")
    length_m: Figure = figure("Line length", "length", "50 m", help="One way to the far end.")
    area_mm2: Figure = figure("Cross-section", "area", "1.5 mm²", help="Of one conductor, in mm² or AWG.")
    high_pass_hz: Figure | None = figure(
        "High-pass",
        "frequency",
        help="Ahead of the transformers, 12 dB per octave: 50 to 120 Hz keeps them out of saturation.",
    )
    saturation_v: Figure | None = figure(
        "Saturation",
        "voltage_at_frequency",
        help="Largest line voltage the transformers take and its frequency, such as 70.7 V @ 50 Hz; it falls 6 dB per octave below.",
    )
    groups: int = option(
        "Groups",
        1,
        low=1,
        high=MOST_GROUPS,
        help="Sets of loudspeakers with a tap of their own; each has an output.",
    )
    layout: Literal["at the far end", "along the line"] = option(
        "Loads stand",
        "at the far end",
        choices=("at the far end", "along the line"),
        help="All behind the whole cable, or group after group at equal spacing.",
    )
    copper: Literal["0.0172 ohm mm²/m", "IEC 60228 class 1/2", "IEC 60228 class 5/6"] = option(
        "Copper",
        "0.0172 ohm mm²/m",
        choices=COPPERS,
        help="Handbook copper at 20 °C, or the largest resistance IEC 60228 allows.",
    )

    @classmethod
    def field_place(cls, name: str) -> int:
        return _GROUP_OF.get(name, 0)

    def in_use(self, name: str) -> bool:
        return _GROUP_OF.get(name, 0) <= self.groups

    def control_choices(self, name: str) -> tuple[tuple[str, float], ...]:
        if name.startswith("tap_"):
            return tuple((tap.text, float(place)) for place, tap in enumerate(self.taps_w))
        return super().control_choices(name)

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return tuple(
            Port(f"out_{n}" if n > 1 else "out", Domain.ANALOGUE, f"group {n}")
            for n in range(1, self.groups + 1)
        )

    # -- what a person asks of a line ----------------------------------------------------------------------------
    def tap_w(self, values: Values, group: int) -> Number:
        """The chosen tap of a group as marked [W]."""
        return chosen(values[f"tap_{group}"], numbered(values, "taps_w"))

    def marked_v(self, values: Values) -> Number:
        """The voltage the taps are marked for."""
        return values.get("marked_voltage_v", values["line_voltage_v"])

    def drawn_w(self, values: Values, group: int) -> Number:
        """What each loudspeaker of a group takes at full line voltage [W]: P (V_line / V_marked)²."""
        return self.tap_w(values, group) * (np.asarray(values["line_voltage_v"]) / self.marked_v(values)) ** 2

    def total_w(self, values: Values) -> Number:
        """What the whole line takes at full line voltage [W]."""
        total: Number = 0.0
        for n in range(1, self.groups + 1):
            total = total + values[f"count_{n}"] * self.drawn_w(values, n)
        return total

    def meter_ohm(self, values: Values) -> Number:
        """The impedance an impedance meter reads at the amplifier's end [ohm]."""
        return self._ladder(values).input_ohm

    def _ladder(self, values: Values) -> Ladder:
        marked2 = np.asarray(self.marked_v(values)) ** 2
        loads = [values[f"count_{n}"] * self.tap_w(values, n) / marked2 for n in range(1, self.groups + 1)]
        cable = loop_ohm(values["length_m"], values["area_mm2"], self.copper)
        return Ladder.along(cable, loads) if self.layout == "along the line" else Ladder.at_end(cable, loads)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        ladder = self._ladder(values)
        cut: Number = 1.0
        if "high_pass_hz" in values:
            cut = filters.butterworth_high_pass(axis.f_hz, values["high_pass_hz"], 2)
        clip: Number = NEVER
        flux = None
        if "saturation_v" in values:
            clip = np.asarray(values["saturation_v"]) ** 2
            rated_hz = np.asarray(values.get("saturation_v.frequency_hz", 50.0))
            flux = (rated_hz / axis.f_hz) ** 2
        line = Active("line", gain=cut, clip_out=clip, clip_weight=flux)
        coil2 = (
            values["speaker_ohm"]
            / np.asarray(self.marked_v(values)) ** 2
            * power_from_db(-np.asarray(values["loss_db"]))
        )
        groups, outputs = [], {}
        for port, share, n in zip(
            self.outputs(), ladder.voltage_shares, range(1, self.groups + 1), strict=True
        ):
            groups.append(Active(port.label, gain=share**2 * self.tap_w(values, n) * coil2, after=("line",)))
            outputs[port.name] = Output(port.label, 0.0, "transformer")
        return ActiveStage((line, *groups), {"in": Input("line", ladder.input_ohm)}, outputs)

    def summary(self) -> str:
        watts = float(np.mean(np.asarray(self.total_w(self.values()))))
        return f"{self.line_voltage_v.text}, {watts:g} W"


_GROUP_OF = {name: n for n in range(1, MOST_GROUPS + 1) for name in _group_fields(n)}
