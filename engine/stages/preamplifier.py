"""A microphone preamplifier or stage-box input."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure, format_db
from engine.sections.attenuator import is_on
from engine.sections.base import Active, ActiveStage, Domain, Input, Number, Output, StageSections
from engine.sections.curves import noise_over_gain
from engine.sections.noise import thermal, white_total
from engine.units import dbu_from_v2, power_from_db

from .base import Port, Stage
from .declare import Setting, control, figure, switch
from .declared import Values
from .shared import Form, at_room_temperature, form_option, marked_db, stated_ein, stated_noise

USUAL_SOURCE_OHM = 150.0


class Preamplifier(Stage):
    """Gain from microphone to line level. EIN ahead of the gain, residual noise behind it."""

    title: ClassVar[str] = "Preamplifier"
    family: ClassVar[str] = "Inputs"
    order: ClassVar[int] = 230
    help: ClassVar[str] = (
        "A microphone input with gain. Its EIN belongs to the highest gain; at low gain its residual output noise leads."
    )

    kind: Literal["preamplifier"] = "preamplifier"
    gain_min_db: Figure = figure(
        "Lowest gain", "gain", "0 dB", help="With the pad out; −10 to +15 dB is usual."
    )
    gain_max_db: Figure = figure(
        "Highest gain", "gain", "60 dB", help="With the pad out; 50 to 75 dB is usual."
    )
    gain_step_db: Figure = figure(
        "Gain step", "level_db", "1 dB", help="What one click or panel mark changes: 0.1 to 6 dB."
    )
    pad_db: Figure | None = figure(
        "Pad loss", "loss", "20 dB", help="Of the pad ahead of the gain. Leave it empty where there is none."
    )
    ein_v: tuple[Figure, ...] = figure(
        "EIN", "ein", "-127 dBu, 150 ohm, unweighted", many=True,
        help="Equivalent input noise with its source resistance: −122 to −130 dBu with 150 ohm. Without a gain it is taken at the highest; "
        "up to three may be given, such as −110 dBu, 150 ohm, unweighted @ 20 dB. "
        "With a short circuit it looks better and is not comparable.",
    )  # fmt: skip
    residual: Figure | None = figure(
        "Output noise at lowest gain", "noise", "-95 dBu unweighted",
        help="Residual noise at the output with the gain at its lowest: −85 to −100 dBu. Without it EIN alone would flatter low gains.",
    )  # fmt: skip
    max_input_v: Figure = figure(
        "Maximum input",
        "voltage",
        "+8 dBu",
        help="At the lowest gain with the pad out, ahead of the gain; the pad adds its loss.",
    )
    max_output_v: Figure = figure(
        "Maximum output", "voltage", "+24 dBu", help="The largest clean sine behind the gain: +18 to +28 dBu."
    )
    z_in_ohm: Figure = figure(
        "Input impedance", "impedance", "2 k", help="1.5 to 10 kohm is usual for microphone inputs."
    )
    z_out_ohm: Figure = figure("Output impedance", "impedance", "100 ohm", help="50 to 200 ohm is usual.")
    form: Form = form_option()
    pad: Setting = switch(
        "Pad", help="Whether the pad is in. It moves the input's clip point up by its loss."
    )
    gain_db: Setting = control(
        "Gain",
        "dB",
        "gain_min_db",
        "gain_max_db",
        "gain_step_db",
        50.0,
        help="The gain control, pad not counted.",
        marking="clock",
    )

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        gain = power_from_db(values["gain_db"])
        padded = np.where(is_on(values["pad"]), power_from_db(values.get("pad_db", 0.0)), 1.0)
        source_ohm = values.get("ein_v.0.source_ohm", USUAL_SOURCE_OHM)
        own = self._input_noise(values, axis)
        # The pad's resistances stand where the source did when EIN was measured, so with it in EIN still holds.
        pad_noise = thermal(axis, source_ohm, values["temperature_k"]) * (1.0 - 1.0 / padded)
        return ActiveStage(
            (
                Active(
                    "input", gain=1.0 / padded, noise_behind=own + pad_noise,
                    clip_in=np.asarray(values["max_input_v"]) ** 2 * padded,
                ),
                Active(
                    "gain", gain=gain, noise_behind=self._output_noise(values, axis),
                    clip_out=np.asarray(values["max_output_v"]) ** 2,
                ),
            ),
            {"in": Input("input", values["z_in_ohm"])},
            {"out": Output("gain", values["z_out_ohm"], self.form)},
        )  # fmt: skip

    def _points(self, values: Values, axis: Axis) -> list[tuple[Number, Number]]:
        """EIN points (gain, noise) from the lowest gain up; noiseless where none is given."""
        names = [f"ein_v.{n}" for n in range(len(self.ein_v))]
        points = [
            (values.get(f"{name}.gain_db", values["gain_max_db"]), stated_ein(axis, values, name))
            for name in names
        ]
        points.sort(key=lambda point: float(np.mean(np.asarray(point[0]))))
        return points or [(values["gain_max_db"], np.zeros(axis.size))]

    def _input_noise(self, values: Values, axis: Axis) -> Number:
        return noise_over_gain(values["gain_db"], self._points(values, axis))

    def _output_noise(self, values: Values, axis: Axis) -> Number:
        """What the residual at lowest gain holds beyond the input's own noise times that gain."""
        residual = stated_noise(axis, values, "residual", {"max": np.asarray(values["max_output_v"]) ** 2})
        ein = noise_over_gain(values["gain_min_db"], self._points(values, axis))
        source = thermal(axis, values.get("ein_v.0.source_ohm", USUAL_SOURCE_OHM), values["temperature_k"])
        return np.asarray(np.maximum(residual - (ein + source) * power_from_db(values["gain_min_db"]), 0.0))

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        values = at_room_temperature(values)
        for place, typed in enumerate(self.ein_v):
            name = f"ein_v.{place}"
            source_ohm = values.get(f"{name}.source_ohm", 0.0)
            total = white_total(axis, np.asarray(values[name]) ** 2, values.tag(f"{name}.weighting"))
            least = thermal(axis, source_ohm, values["temperature_k"])
            if np.any(total[..., 0] < least[..., 0]):
                below = float(dbu_from_v2(np.max(least @ axis.flat_weight)))
                yield (
                    f"EIN of {self.name} is {typed.text}: {float(np.max(source_ohm)):g} ohm alone make "
                    f"{format_db(below, 'dBu')} of thermal noise, and no amplifier is quieter than its source"
                )
        if np.any(np.asarray(values["gain_min_db"]) > np.asarray(values["gain_max_db"])):
            yield f"Lowest gain of {self.name} ({self.gain_min_db.text}) is above its highest ({self.gain_max_db.text})"

    def summary(self) -> str:
        return marked_db(self.gain_db) + (", pad in" if self.pad.value else "")
