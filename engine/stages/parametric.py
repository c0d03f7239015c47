"""The parametric equaliser that several kinds carry: two shelves, four bells, high-pass and low-pass."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np
from numpy.typing import NDArray

from engine.bands import Axis
from engine.figures import Figure, parse
from engine.sections import filters
from engine.sections.attenuator import is_on

from .declare import Setting, control, figure, option, switch
from .declared import Declared, Values

Array = NDArray[np.float64]

Slope = Literal[
    "6 dB/oct", "12 dB/oct Butterworth", "18 dB/oct Butterworth", "24 dB/oct Butterworth", "48 dB/oct Butterworth",
    "12 dB/oct Linkwitz–Riley", "24 dB/oct Linkwitz–Riley", "48 dB/oct Linkwitz–Riley",
]  # fmt: skip
BELLS = (1, 2, 3, 4)


def corner(label: str, typical: str | None) -> Any:
    """A filter's frequency."""
    return figure(label, "frequency", typical, help="The frequency as the panel or screen shows it.")


def sharpness(typical: str) -> Any:
    """A bell's Q."""
    return figure("Q", "q", typical, help="Sharpness: 0.7 spans two octaves, 1.4 one, 4.3 a third.")


def boost(label: str) -> Any:
    """A filter's gain."""
    return control(
        label, "dB", -15.0, 15.0, 0.5, 0.0, help="Boost takes headroom at its frequency, cut does not."
    )


def slope_option(label: str, default: Slope) -> Any:
    """How steep a high-pass or low-pass is."""
    return option(
        label,
        default,
        choices=tuple(filters.SLOPES),
        help="Butterworth is −3 dB at its corner, Linkwitz–Riley −6 dB.",
    )


class Parametric(Declared):
    """Fields and magnitude of a parametric equaliser."""

    high_pass_hz: Figure = corner("High-pass", "80 Hz")
    high_pass_slope: Slope = slope_option("High-pass slope", "18 dB/oct Butterworth")
    low_shelf_hz: Figure = corner("Low shelf", "100 Hz")
    bell_1_hz: Figure = corner("Bell 1", "160 Hz")
    bell_1_q: Figure = sharpness("1.4")
    bell_2_hz: Figure = corner("Bell 2", "500 Hz")
    bell_2_q: Figure = sharpness("1.4")
    bell_3_hz: Figure = corner("Bell 3", "1.6 kHz")
    bell_3_q: Figure = sharpness("1.4")
    bell_4_hz: Figure = corner("Bell 4", "4 kHz")
    bell_4_q: Figure = sharpness("1.4")
    high_shelf_hz: Figure = corner("High shelf", "8 kHz")
    low_pass_hz: Figure = corner("Low-pass", "16 kHz")
    low_pass_slope: Slope = slope_option("Low-pass slope", "12 dB/oct Butterworth")

    high_pass: Setting = switch("High-pass", help="Whether the high-pass is in.")
    low_shelf_db: Setting = boost("Low shelf")
    bell_1_db: Setting = boost("Bell 1")
    bell_2_db: Setting = boost("Bell 2")
    bell_3_db: Setting = boost("Bell 3")
    bell_4_db: Setting = boost("Bell 4")
    high_shelf_db: Setting = boost("High shelf")
    low_pass: Setting = switch("Low-pass", help="Whether the low-pass is in.")

    def equaliser(self, values: Values, axis: Axis) -> Array:
        """|H|² of the whole equaliser [batch, F]."""
        f_hz = axis.f_hz
        found = np.where(
            is_on(values["high_pass"]),
            filters.high_pass(f_hz, values["high_pass_hz"], self.high_pass_slope),
            1.0,
        )
        found = found * np.where(
            is_on(values["low_pass"]), filters.low_pass(f_hz, values["low_pass_hz"], self.low_pass_slope), 1.0
        )
        found = found * filters.low_shelf(f_hz, values["low_shelf_hz"], values["low_shelf_db"])
        found = found * filters.high_shelf(f_hz, values["high_shelf_hz"], values["high_shelf_db"])
        for n in BELLS:
            found = found * filters.bell(
                f_hz, values[f"bell_{n}_hz"], values[f"bell_{n}_db"], values[f"bell_{n}_q"]
            )
        return np.asarray(found)

    def sharpest_q(self) -> float:
        """The largest Q among bells that are not flat."""
        used = [n for n in BELLS if getattr(self, f"bell_{n}_db").value]
        return max((parse(getattr(self, f"bell_{n}_q").text, "q").amount for n in used), default=0.0)
