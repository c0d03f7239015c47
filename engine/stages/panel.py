"""How a control's position reads on its panel: "detent 14", "half past ten", "−8.0 dB", "in"."""

from __future__ import annotations

from engine.figures import format_db

from .declare import ControlRange, ControlSpec, Setting

_HOURS = ("twelve", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten", "eleven")
_FIRST_HOUR, _TURN_HOURS = 7.0, 10.0  # a knob turns from seven o'clock over noon to five


def marking(spec: ControlSpec, ranged: ControlRange, setting: Setting) -> str:
    """Where a control stands, in the words of its panel; the person's own marking where one is given.

    Detents count from the low end, off or the lowest position being 0. A clock position is to the nearest quarter hour.
    """
    if setting.panel:
        return setting.panel
    if ranged.choices or setting.value is None:
        return position(spec, ranged, setting)
    if spec.marking == "detent":
        first = 1 if ranged.off_at_low else 0
        return f"detent {round((setting.value - ranged.low) / ranged.step) + first}"
    if spec.marking == "clock":
        span = ranged.high - ranged.low
        return clock((setting.value - ranged.low) / span if span > 0.0 else 0.0)
    return _number(spec, ranged, setting.value)


def position(spec: ControlSpec, ranged: ControlRange, setting: Setting) -> str:
    """Where a control stands in its own unit: "−8.0 dB", "off", or the name of a switch's position."""
    if ranged.choices:
        return _named(ranged, setting)
    return "off" if setting.value is None else _number(spec, ranged, setting.value)


def clock(turn: float) -> str:
    """A knob's pointer as a clock's hour hand, `turn` from 0 (fully left) to 1 (fully right)."""
    if turn <= 0.0:
        return "fully left"
    if turn >= 1.0:
        return "fully right"
    quarters = round((_FIRST_HOUR + _TURN_HOURS * turn) * 4.0)
    hour, quarter = divmod(quarters, 4)
    if quarter == 3:
        return f"quarter to {_HOURS[(hour + 1) % 12]}"
    name = _HOURS[hour % 12]
    return (f"{name} o'clock", f"quarter past {name}", f"half past {name}")[quarter]


def _named(ranged: ControlRange, setting: Setting) -> str:
    value = 0.0 if setting.value is None else setting.value
    return min(ranged.choices, key=lambda choice: abs(choice[1] - value))[0]


def _number(spec: ControlSpec, ranged: ControlRange, value: float) -> str:
    step = f"{ranged.step:.6f}".rstrip("0")
    places = max(len(step.split(".")[1]), 1 if spec.unit.startswith("dB") else 0)
    text = format_db(value, spec.unit, places)
    is_unsigned = value > 0.0 and spec.unit.startswith("dB") and not text.startswith("+")
    return f"+{text}" if is_unsigned else text
