"""What a data sheet leaves unsaid, and what it may have meant: the alternatives that bound a number, quietest first."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from engine.figures import Parsed

from .declare import FigureSpec


@dataclass(frozen=True)
class Alternative:
    """One thing a figure may have meant: a factor on its amount, conditions and words to put in, and how to say it."""

    says: str
    factor: float = 1.0
    numbers: Mapping[str, float] = field(default_factory=dict)
    tags: Mapping[str, str] = field(default_factory=dict)


#: References that sheets print S/N against; a kind may declare its own list. An amplifier's 1 W makes the least noise.
USUAL_REFERENCES = ("nominal", "max")

_WEIGHTING = (
    Alternative("unweighted", tags={"weighting": "flat"}),
    Alternative("A-weighted", tags={"weighting": "A"}),
)
_UNSAID: Mapping[tuple[str, str], tuple[Alternative, ...]] = {
    ("mic_sensitivity", "reference"): (
        Alternative("re 1 V/Pa", tags={"reference": "1 Pa"}),
        Alternative("re 1 V/µbar", factor=10.0, tags={"reference": "1 µbar"}),
    ),
    ("loudspeaker_sensitivity", "reference"): (
        Alternative("at 2.83 V", tags={"reference": "2.83 V"}),
        Alternative("at 1 W", tags={"reference": "1 W"}),
    ),
    ("power_at_load", "load_ohm"): (
        Alternative("into 4 ohm", numbers={"load_ohm": 4.0}),
        Alternative("into 8 ohm", numbers={"load_ohm": 8.0}),
    ),
    ("ein", "source_ohm"): (
        Alternative("with 200 ohm", numbers={"source_ohm": 200.0}),
        Alternative("with a short circuit", numbers={"source_ohm": 0.0}),
    ),
    ("voltage_at_frequency", "frequency_hz"): (
        Alternative("at 20 Hz", numbers={"frequency_hz": 20.0}),
        Alternative("at 50 Hz", numbers={"frequency_hz": 50.0}),
    ),
    ("resistance_per_length", "reference"): (
        Alternative("both conductors", tags={"reference": "loop"}),
        Alternative("one conductor", tags={"reference": "one-way"}),
    ),
}


def alternatives(parsed: Parsed, spec: FigureSpec) -> list[tuple[Alternative, ...]]:
    """For each thing the text leaves unsaid, what it may have meant, quietest first."""
    found: list[tuple[Alternative, ...]] = []
    for unsaid in parsed.missing:
        if unsaid == "weighting":
            found.append(_WEIGHTING)
        elif (spec.quantity, unsaid) in _UNSAID:
            found.append(_UNSAID[spec.quantity, unsaid])
        elif unsaid == "reference":
            names = spec.references or USUAL_REFERENCES
            found.append(tuple(Alternative(f"re {name}", tags={"reference": name}) for name in names))
    return found
