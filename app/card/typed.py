"""What a hand types where a control stands: a number on its scale, "off", or a position's name. No Qt here."""

from __future__ import annotations

import re

from engine.figures import FigureError, parse
from engine.stages import panel
from engine.stages.declare import ControlRange, ControlSpec, Setting

_OFF = {"off", "-inf", "-∞", "∞"}
_NUMBER = re.compile(r"([+-]?(?:\d+(?:[.,]\d*)?|[.,]\d+))\s*(.*)")
_QUANTITIES = {"dBu": "voltage", "dBFS": "dbfs", "Hz": "frequency"}


def read(text: str, spec: ControlSpec, ranged: ControlRange) -> float | None:
    """The position nearest to what was typed; None is off. Raises ValueError with what would be right."""
    clean = " ".join(text.replace("−", "-").replace("\u202f", " ").split())
    if ranged.choices:
        return _named(clean, spec, ranged)
    if clean.lower() in _OFF:
        if not ranged.off_at_low:
            raise ValueError(f"{spec.label} has no off: type {_ends(spec, ranged)}")
        return None
    value = _number(clean, spec, ranged)
    if not ranged.low - 1e-6 <= value <= ranged.high + 1e-6:
        raise ValueError(f"{clean} is outside its travel: type {_ends(spec, ranged)}")
    return ranged.nearest(value)


def _number(clean: str, spec: ControlSpec, ranged: ControlRange) -> float:
    found = _NUMBER.fullmatch(clean)
    if found is None:
        raise ValueError(f"{clean!r} is no number: type {_ends(spec, ranged)}")
    unit = re.sub(r"\s", "", found[2])
    own = re.sub(r"\s", "", spec.unit)
    if not unit or unit.lower() == own.lower() or (own.startswith("dB") and unit.lower() == "db"):
        return float(found[1].replace(",", "."))
    quantity = _QUANTITIES.get(spec.unit)
    if quantity is None:
        raise ValueError(f"{spec.label} is set in {spec.unit or 'plain numbers'}, not in {found[2]}")
    try:
        amount = parse(clean, quantity).amount
    except FigureError as reason:
        raise ValueError(str(reason)) from None
    return _dbu(amount) if spec.unit == "dBu" else amount


def _dbu(volts: float) -> float:
    from math import log10

    return 20.0 * log10(volts / 0.6**0.5)


def _named(clean: str, spec: ControlSpec, ranged: ControlRange) -> float:
    lower = clean.lower()
    names = [
        (" ".join(name.replace("−", "-").replace("\u202f", " ").lower().split()), value)
        for name, value in ranged.choices
    ]
    exact = [value for name, value in names if name == lower]
    begun = [value for name, value in names if lower and name.startswith(lower)]
    if exact or len(begun) == 1:
        return (exact or begun)[0]
    raise ValueError(
        f"{spec.label} has no position {clean!r}: it has {', '.join(name for name, _ in ranged.choices)}"
    )


def _ends(spec: ControlSpec, ranged: ControlRange) -> str:
    low, high = (panel.position(spec, ranged, Setting(value=end)) for end in (ranged.low, ranged.high))
    return f"{'off, or ' if ranged.off_at_low else ''}{low} to {high}"
