"""Say an amount to people: true minus, narrow no-break space before the unit, a prefix that suits the size."""

from __future__ import annotations

import math

from .parse import Parsed
from .quantity import FOOT_M, QUANTITIES, V_0DBU, Quantity

THIN_SPACE = "\u202f"
MINUS = "\u2212"
INFINITY = "∞"
A_OVER_FLAT_DB = 2.05  # white noise, 20 Hz to 20 kHz (integral of the IEC 61672-1 A-weighting)

_SIGNED = {"dBu", "dBV", "dBm", "dBFS"}
_PREFIXED = {
    "V": (("kV", 1e3), ("V", 1.0), ("mV", 1e-3), ("µV", 1e-6), ("nV", 1e-9)),
    "ohm": (("MΩ", 1e6), ("kΩ", 1e3), ("Ω", 1.0), ("mΩ", 1e-3), ("µΩ", 1e-6)),
    "W": (("kW", 1e3), ("W", 1.0), ("mW", 1e-3), ("µW", 1e-6)),
    "Hz": (("kHz", 1e3), ("Hz", 1.0)),
    "s": (("h", 3600.0), ("min", 60.0), ("s", 1.0), ("ms", 1e-3)),
    "V/Pa": (("V/Pa", 1.0), ("mV/Pa", 1e-3), ("µV/Pa", 1e-6)),
    "ohm/m": (("Ω/m", 1.0), ("Ω/km", 1e-3)),
    "F/m": (("nF/m", 1e-9), ("pF/m", 1e-12)),
    "m": (("km", 1e3), ("m", 1.0), ("cm", 0.01), ("mm", 1e-3)),
}


def number(value: float, digits: int = 4, *, signed: bool = False) -> str:
    """`digits` significant digits, no exponent for usual sizes, a true minus."""
    if math.isinf(value):
        return INFINITY if value > 0 else f"{MINUS}{INFINITY}"
    text = f"{value:{'+' if signed else ''}.{digits}g}"
    if "e" in text and 1e-6 <= abs(value) < 1e9:
        decimals = max(0, digits - 1 - math.floor(math.log10(abs(value))))
        text = f"{value:{'+' if signed else ''}.{decimals}f}"
    return text.replace("-", MINUS)


def format_db(value: float, unit: str = "dB", digits: int = 1) -> str:
    """A level or gain with fixed decimals: "−8.0 dB", "+4.0 dBu", "−∞ dB". Levels on an electrical scale show their sign."""
    if math.isinf(value):
        text = INFINITY if value > 0 else f"{MINUS}{INFINITY}"
    else:
        value = 0.0 if abs(value) < 0.5 * 10.0**-digits else value
        text = f"{value:{'+' if unit in _SIGNED and value else ''}.{digits}f}".replace("-", MINUS)
    return f"{text}{THIN_SPACE}{unit}" if unit else text


def format_amount(amount: float, quantity: str, unit: str | None = None, digits: int | None = None) -> str:
    """An amount in base units as text that `parse` reads back; `unit` asks for one of the quantity's own units."""
    sort = QUANTITIES[quantity]
    digits = digits or 4
    if unit is not None and unit in sort.log:
        level = 20.0 * math.log10(amount / sort.log[unit])
        return f"{number(level, digits, signed=unit in _SIGNED)}{THIN_SPACE}{unit}"
    if unit is not None and unit in sort.units:
        return f"{number(amount / sort.units[unit], digits)}{THIN_SPACE}{unit}".rstrip(THIN_SPACE)
    if sort.db or quantity == "noise":
        return f"{number(amount, digits)}{THIN_SPACE}{'dBFS' if quantity == 'dbfs' else 'dB'}"
    if quantity in ("ratio", "compression_ratio"):
        return "inf:1" if math.isinf(amount) else f"{number(amount, digits)}:1"
    return _prefixed(amount, sort, digits)


def _prefixed(amount: float, sort: Quantity, digits: int) -> str:
    base = "ohm" if sort.base_unit == "ohm" else sort.base_unit
    steps = _PREFIXED.get(base)
    if steps is None:
        unit = sort.base_unit if sort.base_unit in sort.units else (sort.bare or sort.base_unit)
        if sort.name == "percent":
            unit = "%"
        return f"{number(amount, digits)}{THIN_SPACE}{unit}".rstrip(THIN_SPACE)
    for name, factor in steps:
        if abs(amount) >= factor * 0.9999999 or (name, factor) == steps[-1]:
            return f"{number(amount / factor, digits)}{THIN_SPACE}{name}"
    raise AssertionError("the last step takes all")


def echo(parsed: Parsed) -> str:
    """What stands beside a field: the figure in the unit it was not typed in, and what was taken from it."""
    name, amount = parsed.quantity, parsed.amount
    sort = QUANTITIES[name]
    if name in ("noise", "dynamic_range", "self_noise"):
        return _echo_noise(parsed)
    if sort.log and name == "mic_sensitivity":
        is_level = parsed.unit in sort.log or parsed.unit.startswith("dB")
        level = f"{number(20.0 * math.log10(amount), 4)}{THIN_SPACE}dBV/Pa"
        return format_amount(amount, name) if is_level else level
    if sort.log:
        is_level = parsed.unit in sort.log
        return (
            format_amount(amount, "voltage")
            if is_level
            else format_db(20.0 * math.log10(amount / V_0DBU), "dBu", 2)
        )
    if name in ("gain", "crest_factor", "directivity") and parsed.unit in ("x", "dB"):
        return format_db(amount, "dB", 2) if parsed.unit == "x" else _as_ratio(parsed)
    if name == "power_at_load" and "load_ohm" in parsed.at:
        return format_amount(math.sqrt(amount * parsed.at["load_ohm"]), "voltage")
    if name == "length":
        is_metric = parsed.unit in ("m", "cm", "mm", "km")
        return (
            f"{number(amount / FOOT_M, 3)}{THIN_SPACE}ft"
            if is_metric
            else format_amount(amount, name, digits=3)
        )
    if name == "temperature":
        return (
            f"{number(amount + 273.15, 5)}{THIN_SPACE}K"
            if parsed.unit != "K"
            else format_amount(amount, name)
        )
    if name == "ambient":
        return ""
    if name == "impedance":
        return format_amount(amount, name)
    return format_amount(amount, name) if parsed.unit not in (sort.bare, "dB", "") else ""


def _as_ratio(parsed: Parsed) -> str:
    if parsed.quantity == "directivity":
        return f"Q{THIN_SPACE}{number(parsed.amount, 3)}"
    return f"×{number(10.0 ** (parsed.amount / 20.0), 4)}"


def _echo_noise(parsed: Parsed) -> str:
    words = []
    if parsed.reference == "level":
        is_level = parsed.unit.startswith("dB")
        level = 20.0 * math.log10(parsed.amount / V_0DBU)
        words.append(format_amount(parsed.amount, "voltage") if is_level else format_db(level, "dBu", 1))
    if parsed.weighting == "A":
        if parsed.quantity == "self_noise":
            words.append(f"flat {format_db(parsed.amount + A_OVER_FLAT_DB, 'dB', 1)}")
        elif parsed.reference == "level":
            flat = 20.0 * math.log10(parsed.amount / V_0DBU) + A_OVER_FLAT_DB
            words.append(f"flat {format_db(flat, 'dBu', 1)}")
        else:
            words.append(f"flat {format_db(parsed.amount - A_OVER_FLAT_DB, 'dB', 1)}")
    if "reference" in parsed.missing:
        words.append("re what?")
    if "weighting" in parsed.missing:
        words.append("A or flat?")
    return ", ".join(words)
