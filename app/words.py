"""Numbers as people read them: one place, so that window, sheets, table and files say the same.

Every text has a true minus sign and a narrow no-break space ahead of its unit. None is nothing there: "–".
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from engine.levels import NodeLevels

MINUS = "−"
THIN = "\u202f"
NOTHING = "–"
MUTED = "muted"

_SIGNED_UNITS = {"dBu", "dBV", "dBFS"}
_VOLT_STEPS = ((1.0, "V"), (1e-3, "mV"), (1e-6, "µV"), (1e-9, "nV"))
_SUFFIXES = ((1e6, "M"), (1e3, "k"), (1.0, ""))


def number(value: float | None, places: int = 1, *, signed: bool = False) -> str:
    """A plain number to `places` decimals: "−8.0", with `signed` also "+3.5"; zero never has a sign."""
    if value is None or not math.isfinite(value):
        return NOTHING
    text = f"{abs(value):.{places}f}"
    if float(text) == 0.0:
        return text
    return f"{MINUS if value < 0 else '+' if signed else ''}{text}"


def with_unit(text: str, unit: str) -> str:
    """A number and its unit; the unit is left out where there is no number."""
    return text if text in (NOTHING, MUTED) or not unit else f"{text}{THIN}{unit}"


def level(value: float | None, unit: str, places: int = 1, *, muted: bool = False) -> str:
    """A level: "+4.0 dBu", "−18.0 dBFS", "84.2 dB SPL"; "muted" where the path is off."""
    if value is None:
        return MUTED if muted else NOTHING
    return with_unit(number(value, places, signed=unit in _SIGNED_UNITS), unit)


def gain(value: float | None, places: int = 1) -> str:
    """A gain or loss: "+40.0 dB", "−8.0 dB"; minus infinity is "off"."""
    if value is not None and value == -math.inf:
        return "off"
    return with_unit(number(value, places, signed=True), "dB")


def margin(value: float | None, places: int = 1) -> str:
    """A headroom or other difference: "6.2 dB", "−1.3 dB"."""
    return with_unit(number(value, places), "dB")


def volts(value: float | None, digits: int = 4) -> str:
    """A voltage with a sensible prefix to `digits` figures: "15.96 V", "774.6 mV", "1.900 µV"."""
    if value is None or not math.isfinite(value):
        return NOTHING
    if value == 0.0:
        return with_unit("0", "V")
    scale, unit = next(((s, u) for s, u in _VOLT_STEPS if abs(value) >= 0.99995 * s), _VOLT_STEPS[-1])
    return with_unit(figures(value / scale, digits), unit)


def volts_of_dbu(level_dbu: float | None) -> float | None:
    """The rms voltage [V] of a level in dBu: √0.6 × 10^(level / 20)."""
    return None if level_dbu is None else math.sqrt(0.6) * 10.0 ** (level_dbu / 20.0)


def watts(value: float | None) -> str:
    """A power to three figures: "245 W", "1.90 W", "3.2 mW"."""
    if value is None or not math.isfinite(value):
        return NOTHING
    if 0.0 < abs(value) < 0.0995:
        return with_unit(figures(value * 1e3, 2), "mW")
    if abs(value) >= 9995.0:
        return with_unit(figures(value / 1e3, 3), "kW")
    return with_unit(figures(value, 3) if abs(value) < 999.5 else f"{value:.0f}", "W")


def hertz(value: float | None) -> str:
    """A frequency: "400 Hz", "1 kHz", "2.5 kHz"."""
    if value is None:
        return NOTHING
    return with_unit(f"{value / 1e3:g}", "kHz") if value >= 1000 else with_unit(f"{value:g}", "Hz")


def share(value: float | None) -> str:
    """A part of a whole 0 ... 1 as percent: "61 %", "under 1 %"."""
    if value is None:
        return NOTHING
    percent = 100.0 * value
    return with_unit("under 1", "%") if 0.0 < percent < 0.5 else with_unit(f"{percent:.0f}", "%")


def figures(value: float, digits: int) -> str:
    """A number to `digits` significant figures, never in powers of ten."""
    if value == 0.0:
        return "0"
    rounded = float(f"{value:.{digits - 1}e}")
    places = max(0, digits - 1 - math.floor(math.log10(abs(rounded))))
    return f"{rounded:.{places}f}".replace("-", MINUS)


def quantity(value: float, unit: str, digits: int = 3) -> str:
    """An amount with a prefix of thousands: "20.0 kΩ", "150 Ω"."""
    scale, prefix = next(((s, p) for s, p in _SUFFIXES if abs(value) >= s), (1.0, ""))
    return with_unit(figures(value / scale, digits), f"{prefix}{unit}")


def node_name(node: NodeLevels, *, ports: int = 1) -> str:
    """How a place is called: "Amplifier A input", or "Processor out 2" where the stage has several."""
    if ports > 1:
        return f"{node.name} {node.port.replace('_', ' ')}"
    return f"{node.name} {'input' if node.direction == 'in' else 'output'}"


def plain(text: str) -> str:
    """The same text for files read by programs: ASCII minus and plain spaces."""
    return text.replace(MINUS, "-").replace(THIN, " ")
