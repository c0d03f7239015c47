"""One channel of a power amplifier."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.attenuator import chosen, position_gain
from engine.sections.base import NEVER, Active, ActiveStage, Domain, Input, Number, Output, StageSections
from engine.units import db_from_power, power_from_db

from .base import Port, Stage
from .declare import Setting, control, figure, option
from .declared import Values
from .shared import marked_db, numbered, stated_noise

AGREES_WITHIN_DB = 0.5


class PowerAmplifier(Stage):
    """Input stage, attenuator, power stage. Rated power, voltage gain and sensitivity are one relation: give two.

    V_rated = sqrt(P Z); gain = V_rated / V_sensitivity.
    """

    title: ClassVar[str] = "Power amplifier"
    family: ClassVar[str] = "Outputs"
    order: ClassVar[int] = 610
    help: ClassVar[str] = (
        "One channel. Give two of rated power, voltage gain and input sensitivity; the third follows."
    )

    kind: Literal["power_amplifier"] = "power_amplifier"
    rated_power_w: tuple[Figure, ...] = figure(
        "Rated power", "power_at_load", "500 W @ 8 ohm; 800 W @ 4 ohm", many=True,
        help="Continuous sine power with its load, one line for each load given. The first is what sensitivity and S/N refer to.",
    )  # fmt: skip
    gain_db: Figure | None = figure(
        "Voltage gain", "gain", "32 dB", help="With the attenuator open: 26 or 32 dB, x20, x40 are usual."
    )
    sensitivity_v: Figure | None = figure(
        "Input sensitivity",
        "sensitivity",
        help="Input that drives it to its rated power: 0.775 V (0 dBu), 1 V, 1.4 V, +4 dBu.",
    )
    range_gains_db: tuple[Figure, ...] = figure(
        "Ranges by gain",
        "gain",
        many=True,
        help="Where a switch selects the gain: every position, such as 26 dB and 32 dB.",
    )
    range_sensitivities_v: tuple[Figure, ...] = figure(
        "Ranges by sensitivity",
        "sensitivity",
        many=True,
        help="Positions of that switch marked as a sensitivity, such as 0.775 V and 1.4 V.",
    )
    noise: Figure = figure(
        "S/N or noise", "noise", "105 dB(A) re rated", references=("1 W", "rated", "peak"),
        help="Re rated power, re 1 W or as a residual. It stands behind the attenuator: turning down does not lower it. "
        "95 to 115 dB(A) re rated.",
    )  # fmt: skip
    max_input_v: Figure | None = figure(
        "Input stage maximum",
        "voltage",
        "+21 dBu",
        help="What the stage ahead of the attenuator takes: +15 to +24 dBu. Rarely on sheets.",
    )
    min_load_ohm: Figure = figure("Minimum load", "impedance", "4 ohm", help="Per channel, not bridged.")
    damping_factor: Figure | None = figure(
        "Damping factor",
        "damping_factor",
        "200",
        help="At the first rated load: 100 to 1000. Output impedance is load over damping.",
    )
    z_in_ohm: Figure = figure("Input impedance", "impedance", "20 k", help="10 to 30 kohm balanced is usual.")
    lowest_db: Figure = figure(
        "Lowest attenuator mark", "level_db", "-40 dB", help="The last mark before off."
    )
    step_db: Figure = figure(
        "Attenuator step",
        "level_db",
        "1 dB",
        help="What one detent changes near the top; 0.5 dB for digital ones.",
    )
    attenuator: Literal["fitted", "none"] = option(
        "Attenuator", "fitted", choices=("fitted", "none"), help="None: a fixed-gain amplifier."
    )
    mode: Literal["single", "bridged"] = option(
        "Mode", "single", choices=("single", "bridged"),
        help="Bridged: two channels in opposition. Twice the voltage (+6.02 dB), and the least load doubles.",
    )  # fmt: skip
    sensitivity_range: Setting = control(
        "Sensitivity", "", help="The gain or sensitivity switch, often at the rear.", marking="switch"
    )
    attenuator_db: Setting = control(
        "Attenuator", "dB", "lowest_db", 0.0, "step_db", 0.0, off_at_low=True, marking="detent",
        help="Between input stage and power stage: it moves the level, not the amplifier's own output noise or clip point.",
    )  # fmt: skip

    def control_choices(self, name: str) -> tuple[tuple[str, float], ...]:
        if name != "sensitivity_range":
            return super().control_choices(name)
        ranges = [given.text for given in (*self.range_gains_db, *self.range_sensitivities_v)]
        return tuple((text, float(place)) for place, text in enumerate(ranges or ["as given"]))

    def in_use(self, name: str) -> bool:
        if name in ("attenuator_db", "lowest_db", "step_db"):
            return self.attenuator == "fitted"
        has_ranges = bool(self.range_gains_db or self.range_sensitivities_v)
        return name != "sensitivity_range" or has_ranges

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)

    # -- one relation ----------------------------------------------------------------------------------------
    def rated_v2(self, values: Values) -> Number:
        """Square of the rated output voltage [V²], one channel: P Z of the first rating, or sensitivity × gain."""
        if "rated_power_w.0" in values:
            return np.asarray(values["rated_power_w.0"]) * values["rated_power_w.0.load_ohm"]
        if "gain_db" in values and "sensitivity_v" in values:
            return np.asarray(np.asarray(values["sensitivity_v"]) ** 2 * power_from_db(values["gain_db"]))
        raise ValueError(f"{self.name} needs two of rated power, voltage gain and input sensitivity")

    def gain2(self, values: Values) -> Number:
        """Voltage gain squared with the attenuator open, one channel."""
        rated2 = self.rated_v2(values)
        ranges: list[Number] = [power_from_db(gain) for gain in numbered(values, "range_gains_db")]
        ranges += [rated2 / np.asarray(volts) ** 2 for volts in numbered(values, "range_sensitivities_v")]
        if ranges:
            return chosen(values.get("sensitivity_range", 0.0), ranges)
        if "gain_db" in values:
            return np.asarray(power_from_db(values["gain_db"]))
        if "sensitivity_v" in values:
            return rated2 / np.asarray(values["sensitivity_v"]) ** 2
        raise ValueError(
            f"{self.name} needs its voltage gain or its input sensitivity beside the rated power"
        )

    def first_load_ohm(self, values: Values) -> Number:
        """The load the first rating stands at; 8 ohm where no power is given."""
        return values.get("rated_power_w.0.load_ohm", 8.0)

    def least_load_ohm(self, values: Values) -> Number:
        """The least load it may drive, bridged or not."""
        return values["min_load_ohm"] * (2.0 if self.mode == "bridged" else 1.0)

    def clip_by_load(self, values: Values) -> tuple[tuple[Number, Number], ...]:
        """Clip points [V²] by load [ohm], ascending by load, bridged or not."""
        watts = numbered(values, "rated_power_w")
        rated = [(values[f"rated_power_w.{n}.load_ohm"], power) for n, power in enumerate(watts)]
        rated.sort(key=lambda pair: float(np.mean(pair[0])))
        loads, volts2 = (2.0, 4.0) if self.mode == "bridged" else (1.0, 1.0)
        if not rated:
            return ((self.first_load_ohm(values) * loads, self.rated_v2(values) * volts2),)
        return tuple((load * loads, np.asarray(power) * load * volts2) for load, power in rated)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        rated2, load = self.rated_v2(values), self.first_load_ohm(values)
        is_bridged = self.mode == "bridged"
        z_out = load / np.asarray(values["damping_factor"]) if "damping_factor" in values else 0.0
        loaded = (
            1.0 + z_out / load
        ) ** 2  # figures hold at the terminals, a section stands ahead of its impedance
        references = {
            "rated": rated2,
            "max": rated2,
            "nominal": rated2,
            "peak": 2.0 * np.asarray(rated2),
            "1 W": load,
        }
        noise = (
            np.asarray(stated_noise(axis, values, "noise", references))
            * loaded
            * (2.0 if is_bridged else 1.0)
        )
        gain2 = self.gain2(values) * loaded * (4.0 if is_bridged else 1.0)
        max_input2 = np.asarray(values["max_input_v"]) ** 2 if "max_input_v" in values else NEVER
        clips = self.clip_by_load(values)
        return ActiveStage(
            (
                Active("input stage", clip_in=max_input2),
                Active("attenuator", gain=position_gain(values.get("attenuator_db", 0.0))),
                Active("power stage", gain=gain2, clip_out=clips[-1][1], noise_behind=noise),
            ),
            {"in": Input("input stage", values["z_in_ohm"])},
            {"out": Output("power stage", z_out * (2.0 if is_bridged else 1.0), clip_by_load=clips)},
        )

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        given = ("rated_power_w.0" in values) + ("gain_db" in values) + ("sensitivity_v" in values)
        if given < 2 and not (given and (self.range_gains_db or self.range_sensitivities_v)):
            yield f"{self.name} needs two of rated power, voltage gain and input sensitivity"
        elif given == 3:
            implied = db_from_power(
                np.asarray(self.rated_v2(values)) / np.asarray(values["sensitivity_v"]) ** 2
            )
            apart = float(np.max(np.abs(implied - values["gain_db"])))
            if apart > AGREES_WITHIN_DB:
                yield (
                    f"Figures of {self.name} contradict each other: rated power and sensitivity make a gain of "
                    f"{float(np.mean(implied)):.2f} dB, the sheet says {self.gain_db.text if self.gain_db else ''}; "
                    f"they may differ by {AGREES_WITHIN_DB} dB"
                )

    def summary(self) -> str:
        ranges = [
            text
            for text, place in self.control_choices("sensitivity_range")
            if place == self.sensitivity_range.value
        ]
        gain = (
            ranges[0]
            if self.in_use("sensitivity_range")
            else (self.gain_db or self.sensitivity_v or self.noise).text
        )
        where = (
            f", {marked_db(self.attenuator_db)}"
            if self.attenuator == "fitted" and self.attenuator_db.value != 0.0
            else ""
        )
        return f"{gain}{where}"
