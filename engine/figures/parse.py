"""Read one figure as a data sheet writes it: `parse(text, quantity)`.

Every text either becomes a `Parsed` or a `FigureError` that says what would be right; nothing else is raised.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import lru_cache

from . import grammar
from .errors import FigureError
from .quantity import QUANTITIES, Quantity


@dataclass(frozen=True)
class Parsed:
    """A figure in base units. `at` holds the conditions it was stated at, `missing` what the text should have said.

    `low` and `high` bound a typed interval. `notes` are remarks in plain words.
    """

    quantity: str
    amount: float
    unit: str = ""
    reference: str | None = None
    weighting: str | None = None
    at: Mapping[str, float] = field(default_factory=dict)
    low: float | None = None
    high: float | None = None
    missing: tuple[str, ...] = ()
    notes: tuple[str, ...] = ()


@lru_cache(maxsize=8192)
def parse(text: str, quantity: str) -> Parsed:
    """The figure `text` as a `quantity` (a name in QUANTITIES). Raises FigureError with the reason and what would be right."""
    sort = QUANTITIES[quantity]
    try:
        clean = grammar.plain(text)
        found = _with_interval(clean, sort)
        return _checked(found, sort)
    except FigureError as reason:
        raise FigureError(f"{text!r} {reason}; {sort.label.lower()} is typed like {sort.example}") from None
    except (ValueError, OverflowError, ZeroDivisionError):
        raise FigureError(f"{text!r} is no {sort.label.lower()}; type it like {sort.example}") from None


def _with_interval(text: str, sort: Quantity) -> Parsed:
    """Read a text that may hold an interval: "98 ±2 dB", "50...200 ohm"."""
    if around := grammar.take_plus_minus(text):
        spread, unit, rest = around
        found = read(
            rest if any(map(str.isalpha, rest)) or not unit or unit == "%" else f"{rest} {unit}", sort
        )
        if unit == "%":
            ends = found.amount * (1.0 - spread / 100.0), found.amount * (1.0 + spread / 100.0)
        elif sort.db or (unit != "dB" and not unit.startswith("dB")):
            step = spread if sort.db else _unit_factor(unit or found.unit, sort)[1] * spread
            ends = found.amount - step, found.amount + step
        else:
            ends = found.amount * 10.0 ** (-spread / 20.0), found.amount * 10.0 ** (spread / 20.0)
        return replace(found, low=min(ends), high=max(ends))
    between = None if sort.name in {"full_scale", "noise", "ein"} else grammar.take_range(text)
    if between is not None:
        _, low, high, rest = between
        ends_found = [read(f"{end!r} {rest}", sort) for end in (low, high)]
        amounts = sorted(end.amount for end in ends_found)
        middle = sum(amounts) / 2.0 if sort.db else math.sqrt(amounts[0] * amounts[1])
        return replace(ends_found[0], amount=middle, low=amounts[0], high=amounts[1])
    return read(text, sort)


def read(text: str, sort: Quantity) -> Parsed:
    """Read a text without an interval."""
    from .readers import READERS  # the readers build on this module

    return READERS.get(sort.name, read_plain)(text, sort)


def read_plain(text: str, sort: Quantity) -> Parsed:
    """A number and a unit, a weighting if the text names one."""
    weighting, rest = grammar.take_weighting(text) if sort.db else (None, text)
    amount, unit, left = number_with_unit(rest, sort)
    if left:
        raise FigureError(f"has {left!r} behind the unit, which says nothing here")
    return Parsed(sort.name, amount, unit, weighting=weighting)


def number_with_unit(text: str, sort: Quantity, *, bare: str | None = None) -> tuple[float, str, str]:
    """The first number in base units, its unit, and what stands behind it."""
    found = grammar.take_number(text)
    if found.before:
        raise FigureError(f"begins with {found.before!r}, which says nothing here")
    unit, factor, left = _take_unit(found.rest, sort)
    if unit is None:
        unit = sort.bare if bare is None else bare
        if unit is None:
            raise FigureError("has no unit")
        return found.number * _unit_factor(unit, sort)[1], unit, left
    if unit in sort.log and factor is None:
        return sort.log[unit] * 10.0 ** (found.number / 20.0), unit, left
    assert factor is not None
    return found.number * factor, unit, left


def _take_unit(rest: str, sort: Quantity) -> tuple[str | None, float | None, str]:
    names = sorted((name for name in (*sort.units, *sort.log) if name), key=len, reverse=True)
    for exact in (True, False):
        for name in names:
            head = rest[: len(name)]
            if head != name and (exact or not _same_word(head, name)):
                continue
            tail = rest[len(name) :]
            if tail and (tail[0].isalpha() or tail[0] in "/²³"):
                continue
            return name, sort.units.get(name) if name in sort.units else None, tail.strip(" ,;")
    if rest and (rest[0].isalpha() or rest[0] in "%°/"):
        word = rest.split()[0]
        raise FigureError(f"has unit {word!r}, which does not fit")
    return None, None, rest.strip(" ,;")


def _same_word(typed: str, name: str) -> bool:
    """Whether two spellings are one unit: case does not matter, but m (milli) is not M (mega)."""
    return typed.lower() == name.lower() and not (typed[:1] in "mM" and typed[:1] != name[:1])


def _unit_factor(unit: str, sort: Quantity) -> tuple[str, float]:
    for name, factor in sort.units.items():
        if unit == name or _same_word(unit, name):
            return name, factor
    raise FigureError(f"has unit {unit!r}, which does not fit")


def _checked(found: Parsed, sort: Quantity) -> Parsed:
    """Refuse what is impossible, remark on what is unusual."""
    if not math.isfinite(found.amount) and not (sort.high == math.inf and found.amount > 0):
        raise FigureError("is no finite number")
    is_level = sort.name == "noise" and found.reference == "level"
    low, high, above_low = (0.0, 1e5, True) if is_level else (sort.low, sort.high, sort.above_low)
    if found.amount < low or (found.amount == low and above_low):
        bound = f"above {low:g}" if above_low else f"at least {low:g}"
        raise FigureError(f"is not possible: it must be {bound} {sort.base_unit}".rstrip())
    if found.amount > high:
        raise FigureError(f"is not possible: it must be at most {high:g} {sort.base_unit}".rstrip())
    if sort.usual and not sort.usual[0] <= found.amount <= sort.usual[1]:
        side = "low" if found.amount < sort.usual[0] else "high"
        return replace(found, notes=(*found.notes, f"unusually {side}: look again"))
    return found
