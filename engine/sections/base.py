"""What a stage is made of: active sections that work one way, passive two-ports that work both ways.

Numbers are powers in the square of the domain's unit: V² (analogue), Pa² (acoustic), and in the digital domain
the square of a full-scale sine's rms (0 dBFS = 1). Every number is a float or an array that broadcasts over
[batch, frequency]; levels without frequency are [batch, 1] or float.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from enum import StrEnum
from typing import Any

import numpy as np
from numpy.typing import NDArray

Number = float | NDArray[np.float64]
Complex = complex | NDArray[Any]

NEVER = float("inf")  # the clip point of what cannot clip


class Domain(StrEnum):
    """What a level is measured in: Pa, V, or full scale."""

    ACOUSTIC = "acoustic"
    ANALOGUE = "analogue"
    DIGITAL = "digital"


@dataclass(frozen=True)
class Dynamics:
    """A gain that depends on level, computed by `solve` in its own rank.

    `threshold` is a power in the section's output unit, compared after `gain`; `ratio` is 4.0 for 4:1 and
    infinite for a limiter; `make_up` a power gain behind the detector. `detector` says which lane the static
    curve reads: "rms" the programme, "peak" the sine-scaled peak. A limiter cuts the peak lane alone until the
    programme itself reaches the threshold.
    """

    threshold: Number
    ratio: Number
    make_up: Number = 1.0
    detector: str = "rms"
    limiter: bool = False
    spares_noise: bool = False  # hiss is judged while nothing plays: a voice coil is cool then


@dataclass(frozen=True)
class Active:
    """One section that works one way. Power goes in, is multiplied by `gain`, comes out.

    `clip_in` is compared ahead of the control, `clip_out` behind it. `noise_ahead` [batch, F] is multiplied by
    the gain, `noise_behind` is not. `after` names the sections of the same stage that feed it; empty: the one
    before it in the list, or for the first the stage's input. `clip_weight` [F] shapes the peak spectrum before it
    is compared with the clip points (a transformer core: its flux grows towards low frequencies).
    """

    name: str
    gain: Number = 1.0
    clip_in: Number = NEVER
    clip_out: Number = NEVER
    noise_ahead: Number = 0.0
    noise_behind: Number = 0.0
    after: tuple[str, ...] = ()
    dynamics: Dynamics | None = None
    clip_weight: NDArray[np.float64] | None = None
    domain: Domain | None = None  # of its output, where it is not the stage's own
    full_scale_v: Number | None = None  # a converter's level at 0 dBFS


@dataclass(frozen=True)
class Emission:
    """What a source sends out: programme power per point [batch, F] and its crest factor as a power ratio to a sine's."""

    programme: Number
    peak_factor: Number


@dataclass(frozen=True)
class Input:
    """Where an input port leads: the first section behind it, and its impedance (analogue only)."""

    section: str
    z_ohm: Complex = NEVER


@dataclass(frozen=True)
class Output:
    """Where an output port comes from: the last section ahead of it, its impedance and the form of its driver.

    `form` is one of "push-pull", "cross-coupled", "transformer", "impedance-balanced", "unbalanced".
    `reference_m` is the distance an acoustic output's level is stated at; None: at the receiver itself.
    `directivity_q` is how much it throws forward. `clip_by_load` are the clip points [V²] an amplifier is rated at into
    loads [ohm], ascending by load: the section's own is put in their place by the load the net turns out to be.
    """

    section: str
    z_ohm: Number = 0.0
    form: str = "push-pull"
    reference_m: Number | None = None
    directivity_q: Number = 1.0
    clip_by_load: tuple[tuple[Number, Number], ...] = ()


@dataclass(frozen=True)
class ActiveStage:
    """The answer of a stage that works one way: its sections in signal order, and its ports."""

    sections: tuple[Active, ...]
    inputs: Mapping[str, Input] = field(default_factory=dict)
    outputs: Mapping[str, Output] = field(default_factory=dict)
    emission: Emission | None = None  # of the first section, when the stage is a source
    join: str = "origin"  # how a many-port's arrivals add: "origin", "coherent", "power"


@dataclass(frozen=True)
class TwoPort:
    """A passive two-port by its ABCD matrix, seen from the source; reciprocal (AD - BC = 1), all at the project's temperature."""

    a: Complex = 1.0
    b: Complex = 0.0
    c: Complex = 0.0
    d: Complex = 1.0

    def __matmul__(self, other: TwoPort) -> TwoPort:
        """This two-port followed by another."""
        return TwoPort(
            self.a * other.a + self.b * other.c,
            self.a * other.b + self.b * other.d,
            self.c * other.a + self.d * other.c,
            self.c * other.b + self.d * other.d,
        )

    @property
    def reversed(self) -> TwoPort:
        return TwoPort(self.d, self.b, self.c, self.a)


def series(z_ohm: Complex) -> TwoPort:
    """An impedance in the line, both legs together."""
    return TwoPort(b=z_ohm)


def shunt(z_ohm: Complex) -> TwoPort:
    """An impedance across the line."""
    return TwoPort(c=1.0 / z_ohm)


def spread_line(z_ohm: Complex, y_s: Complex) -> TwoPort:
    """A line whose series impedance and shunt admittance are spread evenly along it.

    A = D = cosh g, B = Z sinh g / g, C = Y sinh g / g with g² = Z Y (telegrapher's equations; Heaviside 1885).
    """
    g = np.sqrt(np.asarray(z_ohm * y_s, dtype=complex))
    is_short = np.abs(g) < 1e-6
    shape = np.where(is_short, 1.0, np.sinh(g) / np.where(is_short, 1.0, g))
    return TwoPort(np.cosh(g), z_ohm * shape, y_s * shape, np.cosh(g))


def ideal_transformer(ratio: Complex) -> TwoPort:
    """A step-down of `ratio` : 1 in voltage."""
    return TwoPort(a=ratio, d=1.0 / ratio)


@dataclass(frozen=True)
class PassiveStage:
    """The answer of a passive stage: two-ports from each input to one common node, and from it to each output."""

    arms: Mapping[str, TwoPort]
    legs: Mapping[str, TwoPort]


StageSections = ActiveStage | PassiveStage
