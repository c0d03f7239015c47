"""The quantities a data sheet gives, their units, and what is possible and usual for each.

A unit's `factor` turns its number into the base unit; a unit in `log` (dB re something) gives base = zero * 10^(x/20).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from math import inf

V_0DBU = 0.6**0.5
FOOT_M = 0.3048
INCH_M = 0.0254


@dataclass(frozen=True)
class Quantity:
    """One sort of figure. `units` maps a unit as typed to its factor, `log` one in dB to the value of 0 dB.

    `low` and `high` bound what is possible, `usual` what is seen on sheets (common practice, no source).
    `bare` is the unit a number without one is taken in; None refuses it. `db` quantities hold decibels themselves.
    """

    name: str
    label: str
    base_unit: str
    example: str
    units: Mapping[str, float]
    log: Mapping[str, float] = field(default_factory=dict)
    low: float = -inf
    high: float = inf
    usual: tuple[float, float] | None = None
    bare: str | None = None
    db: bool = False
    above_low: bool = False  # the low end itself is not possible


VOLTS = {
    "V": 1.0,
    "mV": 1e-3,
    "µV": 1e-6,
    "kV": 1e3,
    "nV": 1e-9,
    "Vrms": 1.0,
    "mVrms": 1e-3,
    "Vpk": 0.5**0.5,
    "Vp": 0.5**0.5,
    "mVpk": 1e-3 * 0.5**0.5,
    "Vpp": 0.125**0.5,
    "mVpp": 1e-3 * 0.125**0.5,
}
VOLT_LEVELS = {"dBu": V_0DBU, "dBV": 1.0, "dBm": V_0DBU, "dBmV": 1e-3, "dBµV": 1e-6}
OHMS = {"ohm": 1.0, "k": 1e3, "kohm": 1e3, "M": 1e6, "Mohm": 1e6, "mohm": 1e-3, "µohm": 1e-6}
METRES = {"m": 1.0, "cm": 0.01, "mm": 1e-3, "km": 1e3, "ft": FOOT_M, "'": FOOT_M, "in": INCH_M, '"': INCH_M}
DECIBEL = {"dB": 1.0}


def _volt(name: str, label: str, example: str, **more: object) -> Quantity:
    return Quantity(name, label, "V", example, VOLTS, VOLT_LEVELS, low=0.0, high=1e5, above_low=True, **more)  # type: ignore[arg-type]


def _number(
    name: str, label: str, example: str, units: Mapping[str, float], low: float, high: float, **more: object
) -> Quantity:
    return Quantity(name, label, "", example, {"": 1.0, **units}, low=low, high=high, bare="", **more)  # type: ignore[arg-type]


_ALL = (
    _volt("voltage", "Voltage", "+4 dBu or 1.23 V"),
    _volt("sensitivity", "Input sensitivity", "1.4 V or +4 dBu", usual=(0.1, 10.0)),
    _volt("full_scale", "Level at 0 dBFS", "+24 dBu", usual=(1.0, 20.0)),
    _volt("ein", "Equivalent input noise", "-128 dBu, 150 ohm, unweighted", usual=(1.5e-7, 2e-6)),
    _volt("voltage_at_frequency", "Level at a frequency", "+19 dBu @ 20 Hz"),
    _volt("line_voltage", "Line voltage", "100 V", usual=(25.0, 200.0), bare="V"),
    Quantity("gain", "Gain", "dB", "26 dB or x20", {"dB": 1.0}, low=-200.0, high=200.0, bare="dB", db=True),
    Quantity("loss", "Loss", "dB", "20 dB", DECIBEL, low=0.0, high=200.0, bare="dB", db=True),
    Quantity("level_db", "Level", "dB", "6 dB", DECIBEL, low=-300.0, high=300.0, bare="dB", db=True),
    Quantity(
        "power_at_load",
        "Rated power",
        "W",
        "400 W @ 8 ohm",
        {"W": 1.0, "kW": 1e3, "mW": 1e-3},
        low=0.0,
        high=1e6,
        above_low=True,
    ),
    Quantity(
        "power",
        "Power",
        "W",
        "250 W",
        {"W": 1.0, "kW": 1e3, "mW": 1e-3},
        low=0.0,
        high=1e6,
        bare="W",
        above_low=True,
    ),
    Quantity(
        "tap",
        "Tap",
        "W",
        "10 W",
        {"W": 1.0, "kW": 1e3, "mW": 1e-3},
        low=0.0,
        high=1e5,
        bare="W",
        above_low=True,
    ),
    Quantity(
        "mic_sensitivity",
        "Sensitivity",
        "V/Pa",
        "2 mV/Pa or -54 dBV/Pa",
        {"mV/Pa": 1e-3, "V/Pa": 1.0, "µV/Pa": 1e-6},
        {"dBV/Pa": 1.0, "dBu/Pa": V_0DBU, "dB": 1.0, "dBV": 1.0},
        low=0.0,
        high=100.0,
        usual=(5e-4, 0.2),
        above_low=True,
    ),
    Quantity(
        "impedance",
        "Impedance",
        "ohm",
        "150 ohm or 10 k",
        OHMS,
        low=0.0,
        high=1e12,
        bare="ohm",
        above_low=True,
    ),
    Quantity(
        "resistance_per_length",
        "Resistance",
        "ohm/m",
        "19.5 ohm/km loop",
        {
            "ohm/km": 1e-3,
            "ohm/m": 1.0,
            "mohm/m": 1e-3,
            "ohm/100m": 1e-2,
            "ohm/1000ft": 1e-3 / FOOT_M,
            "ohm/kft": 1e-3 / FOOT_M,
        },
        low=0.0,
        high=100.0,
    ),
    Quantity(
        "capacitance_per_length",
        "Capacitance",
        "F/m",
        "100 pF/m",
        {"pF/m": 1e-12, "nF/m": 1e-9, "nF/km": 1e-12, "pF/ft": 1e-12 / FOOT_M, "nF/100m": 1e-11},
        low=0.0,
        high=1e-6,
    ),
    Quantity("length", "Length", "m", "12 m or 40 ft", METRES, low=0.0, high=1e5, bare="m", above_low=True),
    Quantity(
        "area",
        "Cross-section",
        "mm²",
        "2.5 mm² or 14 AWG",
        {"mm²": 1.0, "mm2": 1.0, "sqmm": 1.0},
        low=0.0,
        high=1000.0,
        bare="mm²",
        above_low=True,
    ),
    Quantity(
        "spl",
        "Sound level",
        "dB SPL",
        "94 dB SPL",
        {"dB": 1.0, "dBSPL": 1.0},
        low=-50.0,
        high=200.0,
        bare="dB",
        db=True,
    ),
    Quantity(
        "self_noise",
        "Self-noise",
        "dB",
        "18 dB(A)",
        DECIBEL,
        low=-20.0,
        high=80.0,
        usual=(4.0, 30.0),
        bare="dB",
        db=True,
    ),
    Quantity(
        "noise", "Noise", "dB or V", "105 dB(A) re rated, or -86 dBu", {**VOLTS, "dB": 1.0}, VOLT_LEVELS
    ),
    Quantity(
        "dynamic_range",
        "Dynamic range",
        "dB",
        "110 dB(A)",
        DECIBEL,
        low=0.0,
        high=200.0,
        usual=(85.0, 130.0),
        bare="dB",
        db=True,
    ),
    Quantity(
        "dbfs",
        "Level",
        "dBFS",
        "-20 dBFS",
        {"dBFS": 1.0, "dB": 1.0},
        low=-300.0,
        high=40.0,
        bare="dBFS",
        db=True,
    ),
    Quantity(
        "crest_factor",
        "Crest factor",
        "dB",
        "12 dB",
        DECIBEL,
        low=0.0,
        high=60.0,
        usual=(3.0, 25.0),
        bare="dB",
        db=True,
    ),
    _number("ratio", "Ratio", "12:1", {}, 0.0, 1e6, above_low=True),
    _number("compression_ratio", "Ratio", "4:1", {}, 1.0, inf),
    Quantity(
        "frequency",
        "Frequency",
        "Hz",
        "1 kHz",
        {"Hz": 1.0, "kHz": 1e3, "k": 1e3, "MHz": 1e6},
        low=0.0,
        high=1e6,
        bare="Hz",
        above_low=True,
    ),
    Quantity(
        "loudspeaker_sensitivity",
        "Sensitivity",
        "dB SPL at 1 m",
        "98 dB 1 W/1 m or 99 dB 2.83 V/1 m",
        {"dB": 1.0, "dBSPL": 1.0},
        low=40.0,
        high=150.0,
        usual=(80.0, 118.0),
        bare="dB",
        db=True,
    ),
    _number("q", "Q", "1.4", {}, 0.0, 1000.0, above_low=True),
    _number("count", "Number", "4", {"pcs": 1.0}, 0.0, 1e6),
    _number("percent", "Percentage", "50 %", {"%": 1.0}, 0.0, 1e4),
    Quantity(
        "temperature", "Temperature", "°C", "20 °C", {"°C": 1.0, "C": 1.0}, low=-60.0, high=80.0, bare="°C"
    ),
    Quantity(
        "time",
        "Time",
        "s",
        "1.2 s or 2 h",
        {"s": 1.0, "ms": 1e-3, "min": 60.0, "h": 3600.0},
        low=0.0,
        high=1e7,
        bare="s",
        above_low=True,
    ),
    Quantity(
        "volume",
        "Volume",
        "m³",
        "4200 m³",
        {"m³": 1.0, "m3": 1.0, "ft³": FOOT_M**3, "ft3": FOOT_M**3},
        low=0.0,
        high=1e8,
        bare="m³",
        above_low=True,
    ),
    Quantity(
        "absorption",
        "Absorption area",
        "m²",
        "250 m²",
        {"m²": 1.0, "m2": 1.0, "ft²": FOOT_M**2, "ft2": FOOT_M**2},
        low=0.0,
        high=1e6,
        bare="m²",
        above_low=True,
    ),
    Quantity(
        "ambient",
        "Room noise",
        "dB",
        "NC-25 or 32 dB(A)",
        DECIBEL,
        low=-10.0,
        high=120.0,
        usual=(15.0, 60.0),
        bare="dB",
        db=True,
    ),
    _number("directivity", "Directivity", "Q 8 or DI 9 dB", {}, 0.0, 1e4, above_low=True),
    _number("damping_factor", "Damping factor", "200", {}, 0.0, 1e6, above_low=True),
)

#: Every quantity by name.
QUANTITIES: Mapping[str, Quantity] = {quantity.name: quantity for quantity in _ALL}
