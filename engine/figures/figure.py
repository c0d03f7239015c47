"""One data-sheet figure as it was typed, with where it came from and how far it may be off."""

from __future__ import annotations

import re
from typing import Literal

from pydantic import BaseModel, ConfigDict, Field, field_validator

from . import grammar
from .errors import FigureError
from .parse import Parsed, parse
from .quantity import QUANTITIES

Origin = Literal["sheet", "measured", "guess"]
_TOLERANCE = re.compile(rf"^(?:±|\+/-|\+-)?\s*({grammar.NUMBER.pattern})\s*(%|[A-Za-zµΩ°²³/]*)$")


class Figure(BaseModel):
    """What was typed; its value in base units follows from the text and the quantity its field declares."""

    model_config = ConfigDict(frozen=True, extra="allow")

    text: str = Field(min_length=1, max_length=grammar.LONGEST_TEXT)
    origin: Origin = "guess"
    tolerance: str | None = Field(default=None, max_length=40)
    date: str | None = Field(default=None, max_length=40)
    note: str | None = Field(default=None, max_length=2000)

    @field_validator("tolerance")
    @classmethod
    def _tolerance_can_be_read(cls, value: str | None) -> str | None:
        if value is not None and value.strip():
            _tolerance(value)
            return value
        return None


def _tolerance(text: str) -> tuple[float, str]:
    found = _TOLERANCE.match(grammar.plain(text))
    if found is None or grammar.to_number(found.group(1)) < 0.0:
        raise FigureError(f"tolerance {text!r} cannot be read: type it like ±1 dB, 5 % or ±20 ohm")
    return grammar.to_number(found.group(1)), found.group(2)


def figure_interval(figure: Figure, quantity: str) -> tuple[float, float, float]:
    """Lowest, typed and highest amount in base units, from a typed interval and the tolerance together.

    A tolerance in dB is a ratio for linear quantities; in % a share of the amount (of dB quantities: of the dB).
    """
    found: Parsed = parse(figure.text, quantity)
    sort = QUANTITIES[quantity]
    low = found.amount if found.low is None else found.low
    high = found.amount if found.high is None else found.high
    if figure.tolerance:
        spread, unit = _tolerance(figure.tolerance)
        if unit == "%":
            low, high = low - abs(low) * spread / 100.0, high + abs(high) * spread / 100.0
        elif sort.db or (sort.name == "noise" and found.reference != "level"):
            low, high = low - spread, high + spread
        elif unit.startswith("dB"):
            low, high = low * 10.0 ** (-spread / 20.0), high * 10.0 ** (spread / 20.0)
        else:
            step = parse(f"{spread or 1e-12} {unit or found.unit}", quantity).amount if spread else 0.0
            low, high = low - step, high + step
    return low, found.amount, high
